package report

import (
	"fmt"
	"strings"

	"footing/audit"
	"footing/rules/wording"
)

// scope goes with every verdict on a fit.
const scope = "These rows and this line only; nothing is said of cause or confounding."

// grade is the verdict's word.
func grade(r *audit.Result) string { return strings.ToUpper(string(r.Verdict.State)) }

// readWords names the file and says how much of it was read and used.
func readWords(r *audit.Result) (file, text string) {
	in := r.Input
	file = in.File
	if in.Sheet != nil {
		file += ", sheet " + *in.Sheet
	}
	text = fmt.Sprintf("%s in %s", wording.Count(in.Rows, "row"), wording.Count(len(in.Columns), "column"))
	if in.HeaderRow > 1 {
		text += fmt.Sprintf(" under a header in row %d", in.HeaderRow)
	}
	if r.Model != nil {
		text += fmt.Sprintf("; %d used", r.Model.RowsUsed)
	}
	return file, text + "."
}

// addresses names each place as a spreadsheet does, with what stands there.
func addresses(where []audit.Place) []string {
	var all []string
	for _, w := range where {
		switch {
		case w.Cell != nil && w.Value != nil && *w.Value != "":
			all = append(all, fmt.Sprintf("%s (%s)", *w.Cell, *w.Value))
		case w.Cell != nil:
			all = append(all, *w.Cell)
		case w.Row != nil:
			all = append(all, fmt.Sprintf("row %d", *w.Row))
		case w.Column != nil:
			all = append(all, "column "+*w.Column)
		}
	}
	return all
}

// fewAddresses names at most five places and says how many more there are.
func fewAddresses(where []audit.Place) string { return wording.Some(addresses(where), places) }

// message is a finding's sentence, with the finding it follows from.
func message(f *audit.Finding) string {
	if f.ConsequenceOf != nil {
		return f.Message + " This follows from " + *f.ConsequenceOf + "."
	}
	return f.Message
}

// countWords says how many checks passed and did not apply.
func countWords(r *audit.Result) string {
	passed, skipped := 0, 0
	for _, f := range r.Findings {
		switch f.State {
		case audit.Pass:
			if !f.OnlyLimits {
				passed++
			}
		case audit.Skip:
			skipped++
		}
	}
	text := fmt.Sprintf("%s passed", wording.Count(passed, "check"))
	if skipped > 0 {
		text += fmt.Sprintf(", %d did not apply", skipped)
	}
	return text + "."
}

// calibrationWords says how often sound tables alarm.
func calibrationWords(c *audit.Calibration) string {
	how := fmt.Sprintf("by %d simulated tables of this design, seed %d", c.Replicates, c.Seed)
	if c.Method == "formulas" {
		how = "by formulas, since the table is large"
	}
	return fmt.Sprintf("Sound tables alarm in at most %s of cases (%s; over %s).", wording.Percent(float64(c.FalseAlarm)), how, wording.List(c.Rules))
}

// noDifference says why the second question has no answer; "" when it has one.
func noDifference(r *audit.Result) string {
	if r.Difference != nil || r.NotCompared == nil {
		return ""
	}
	return "Difference: " + wording.Stop(*r.NotCompared)
}

// denied are the sentences of what may not be quoted, a missing second answer
// with its reason among them.
func denied(r *audit.Result) []string {
	all := r.Verdict.DoNotQuote
	if no := noDifference(r); no != "" {
		all = append(all[:len(all):len(all)], no)
	}
	return all
}

// remedyWords says what to do about a finding, and what a trial gave: the first
// remedy, and every one that was tried.
func remedyWords(f *audit.Finding) []string {
	var all []string
	for k, remedy := range f.Remedies {
		switch {
		case remedy.Tried:
			all = append(all, wording.Stop(remedy.Text)+" Tried: "+triedWords(remedy))
		case k == 0 && !anyTried(f.Remedies):
			all = append(all, wording.Stop(remedy.Text))
		}
	}
	return all
}

// cut shortens a long text in the middle and tells its length.
func cut(text string, most int) string {
	runes := []rune(text)
	if len(runes) <= most {
		return text
	}
	half := most / 2
	return fmt.Sprintf("%s ... %s (%d characters in all)", string(runes[:half]), string(runes[len(runes)-half:]), len(runes))
}

// answerLines are the verdict and the answers as the log of a build shows them,
// a line each.
func answerLines(r *audit.Result) []string {
	lines := []string{grade(r) + ": " + wording.Stop(r.Verdict.Summary)}
	for _, s := range r.Verdict.Quote {
		lines = append(lines, "Quote: "+s)
	}
	for _, s := range denied(r) {
		lines = append(lines, "Do not quote: "+s)
	}
	for i := range lines {
		lines[i] = wording.Printable(lines[i])
	}
	return lines
}
