// Package report writes an audit's result in one form each: text for a
// terminal, JSON for programs, HTML for a reader of the sheet. It computes nothing; colour, widths and the
// number of places shown are decided here and nowhere else.
package report

import (
	"fmt"
	"io"
	"strconv"
	"strings"

	"footing/audit"
	"footing/rules/wording"
)

// TextOptions say how the text report is laid out.
type TextOptions struct {
	Width   int    // columns; at least 40
	Height  int    // lines of the screen; a longer report repeats its verdict
	Color   bool   // paint states
	Verbose bool   // list every rule, every place, every row set aside
	Sketch  bool   // draw residuals against fitted values, from the result's rows
	Command string // how this audit was called
}

var textForm = &Form{
	Name: "text", Extensions: []string{".txt"}, Marks: []string{mark},
	Write: func(w io.Writer, r *audit.Result, o Options) error {
		if o.File {
			if _, err := io.WriteString(w, audit.Format+" text\n\n"); err != nil {
				return err
			}
		}
		return Text(w, r, o.Text)
	},
}

// places is how many addresses a finding shows unless all are asked for.
const places = 5

// Text writes the result for a person: what was read, what may be quoted, what
// needs a decision.
func Text(w io.Writer, r *audit.Result, o TextOptions) error {
	p := &page{width: max(40, o.Width), paint: o.Color}
	writeRead(p, r, o)
	writeVerdict(p, r)
	if r.Model != nil {
		writeQuotes(p, r)
	} else {
		writeColumns(p, r)
		writeSuggestion(p, r)
	}
	writeFindings(p, r, o)
	if o.Sketch {
		writeSketch(p, r)
	}
	writeCounts(p, r, o)
	if o.Height > 0 && p.lines > o.Height {
		p.blank()
		writeVerdict(p, r)
	}
	_, err := w.Write(p.buffer.Bytes())
	return err
}

// writeRead says in two lines what was read and what is used.
func writeRead(p *page, r *audit.Result, o TextOptions) {
	in := r.Input
	file, text := readWords(r)
	p.sayIndented(file+": ", strong, 2, text)
	if r.Model != nil {
		p.say("  ", plain, wording.Stop(modelWords(r)))
		writeSetAside(p, r, o)
	}
	for _, note := range in.Reading.Notes {
		p.say("  Read: ", faint, wording.Sentence(note))
	}
}

func modelWords(r *audit.Result) string {
	m := r.Model
	text := withUnit(r, m.Response)
	if len(m.Predictors) > 0 {
		text += " over " + withUnit(r, m.Predictors[0])
	}
	if m.Group != nil {
		text += modelGroups(r)
	}
	if rest := append(append([]string{}, tail(m.Predictors)...), m.Covariates...); len(rest) > 0 {
		text += ", with " + wording.List(rest) + " additive"
	}
	return text
}

func modelGroups(r *audit.Result) string {
	m := r.Model
	switch {
	case m.CommonSlope && len(m.Predictors) > 0:
		return ", one slope for every " + *m.Group
	case len(m.Predictors) == 0:
		return ", the means of each " + *m.Group
	}
	return fmt.Sprintf(", a line in each of %s by %s", wording.Count(len(r.Slopes), "group"), *m.Group)
}

func tail(names []string) []string {
	if len(names) < 2 {
		return nil
	}
	return names[1:]
}

func withUnit(r *audit.Result, name string) string {
	for _, c := range r.Input.Columns {
		if c.Name == name && c.Unit != nil {
			return name + " (" + *c.Unit + ")"
		}
	}
	return name
}

func writeSetAside(p *page, r *audit.Result, o TextOptions) {
	rows := r.Model.RowsSetAside
	if len(rows) == 0 {
		return
	}
	var said []string
	for _, row := range rows {
		said = append(said, fmt.Sprintf("row %d (%s)", row.Row, row.Reason))
	}
	most := 3
	if o.Verbose {
		most = len(said)
	}
	p.say("  Set aside: ", plain, wording.Some(said, most)+".")
}

func writeVerdict(p *page, r *audit.Result) {
	p.sayIndented(grade(r)+": ", append(gradeInk(r.Verdict.State), strong...), 2, r.Verdict.Summary+".")
	if r.Model != nil {
		p.say("  ", plain, scope)
	}
}

func writeQuotes(p *page, r *audit.Result) {
	if len(r.Verdict.Quote) > 0 {
		p.blank()
		p.say("You may quote", append(green, strong...), "")
		for _, s := range r.Verdict.Quote {
			p.say("  + ", green, s)
		}
	}
	if r.Difference == nil {
		writeNoDifference(p, r)
	}
	if len(r.Verdict.DoNotQuote) > 0 {
		p.blank()
		p.say("Do not quote", append(red, strong...), "")
		for _, s := range r.Verdict.DoNotQuote {
			p.say("  x ", red, s)
		}
	}
}

func writeNoDifference(p *page, r *audit.Result) {
	if r.NotCompared != nil {
		p.say("  - ", faint, "Difference: "+*r.NotCompared+".")
	}
}

func writeColumns(p *page, r *audit.Result) {
	p.blank()
	g := &grid{right: []bool{false, false, false, true, true, true, true, true, false}}
	g.add("", "column", "kind", "present", "missing", "least", "middle", "greatest", "doubts")
	for _, c := range r.Input.Columns {
		name := c.Name
		if c.Unit != nil {
			name += " (" + *c.Unit + ")"
		}
		g.add(c.Letter, shortened(name), c.Kind, strconv.Itoa(c.Present), strconv.Itoa(c.Missing),
			value(c.Min), value(c.Median), value(c.Max), strings.Join(c.Doubts, ", "))
	}
	for k, line := range g.lines() {
		if k == 0 {
			p.buffer.WriteString(p.styled(line, faint) + "\n")
			p.lines++
			continue
		}
		p.verbatim(line)
	}
}

// shortened cuts a very long name in the middle and tells its length.
func shortened(name string) string {
	runes := []rune(name)
	if len(runes) <= 80 {
		return name
	}
	return fmt.Sprintf("%s...%s (%d characters)", string(runes[:30]), string(runes[len(runes)-30:]), len(runes))
}

func value(n audit.Number) string {
	if !n.Defined() {
		return ""
	}
	return wording.Number(float64(n))
}

func writeSuggestion(p *page, r *audit.Result) {
	if r.Suggested == nil {
		return
	}
	p.blank()
	if r.Suggested.Command != "" {
		p.say("These columns suggest", strong, "")
		p.verbatim("  " + r.Suggested.Command)
	}
	for _, reason := range r.Suggested.Reasons {
		p.say("  - ", faint, wording.Stop(reason))
	}
}

func writeFindings(p *page, r *audit.Result, o TextOptions) {
	shown := false
	for k, f := range r.Findings {
		if !f.IsOpen() && !o.Verbose {
			continue
		}
		if !shown {
			p.blank()
			title := "To decide, worst first"
			if o.Verbose {
				title = "All checks, worst first"
			}
			p.say(title, strong, "")
			shown = true
		}
		if f.ConsequenceOf != nil && !o.Verbose {
			continue // told in one line under its root
		}
		writeFinding(p, f, o)
		if !o.Verbose {
			writeConsequences(p, f, r.Findings[k+1:])
		}
	}
}

// margin is the indent of what is said below a finding.
const margin = "         "

// writeConsequences tells in one line which findings follow from this one.
func writeConsequences(p *page, root audit.Finding, rest []audit.Finding) {
	var names []string
	for _, f := range rest {
		if f.ConsequenceOf == nil || *f.ConsequenceOf != root.Rule {
			break
		}
		names = append(names, f.Rule)
	}
	if len(names) > 0 {
		p.say(margin+"from it follow: ", faint, wording.List(names)+".")
	}
}

func writeFinding(p *page, f audit.Finding, o TextOptions) {
	sign, i := stateSign(f.State)
	lead := fmt.Sprintf("  %s %-4s ", sign, f.State)
	indent := ""
	if f.ConsequenceOf != nil {
		indent = "  "
	}
	text := f.Rule + ": " + f.Message
	if f.ConsequenceOf != nil {
		text += " This follows from " + *f.ConsequenceOf + "."
	}
	p.sayIndented(indent+lead, i, len(indent+margin), text)
	if !f.IsOpen() {
		return
	}
	if where := whereWords(f, o); where != "" {
		p.say(indent+margin+"where: ", faint, where)
	}
	for k, remedy := range f.Remedies {
		switch {
		case remedy.Tried:
			p.say(indent+margin+"do: ", faint, remedy.Text)
			p.say(indent+margin+"tried: ", faint, triedWords(remedy))
		case o.Verbose && remedy.Why != nil:
			p.say(indent+margin+"do: ", faint, remedy.Text+" (Not tried: "+*remedy.Why+".)")
		case k == 0 && !anyTried(f.Remedies):
			p.say(indent+margin+"do: ", faint, remedy.Text)
		}
	}
}

func anyTried(remedies []audit.Remedy) bool {
	for _, r := range remedies {
		if r.Tried {
			return true
		}
	}
	return false
}

func whereWords(f audit.Finding, o TextOptions) string {
	all := addresses(f.Where)
	if o.Verbose {
		return strings.Join(all, ", ")
	}
	text := wording.Some(all, places)
	if len(all) > places {
		text += " (--verbose lists all)"
	}
	return text
}

// triedFigures tells the answers under a remedy.
func triedFigures(r audit.Remedy) []string {
	var all []string
	for _, s := range r.Slopes {
		name := "slope"
		if s.Group != nil {
			name = *s.Group
		}
		if !s.Slope.Defined() {
			all = append(all, name+" none")
			continue
		}
		places := wording.Places(float64(s.SE))
		all = append(all, fmt.Sprintf("%s %s (%s to %s)", name, wording.To(float64(s.Slope), places), wording.To(float64(s.CI[0]), places), wording.To(float64(s.CI[1]), places)))
	}
	if r.Difference != nil && r.Difference.P.Defined() {
		all = append(all, "difference "+wording.P(float64(r.Difference.P)))
	}
	return all
}

// triedWords tells the answers under a remedy, and whether they hold.
func triedWords(r audit.Remedy) string {
	end := "the answers hold"
	if r.AnswerChanges {
		end = "an answer changes"
	}
	return strings.Join(triedFigures(r), ", ") + ": " + end + "."
}

func writeCounts(p *page, r *audit.Result, o TextOptions) {
	p.blank()
	p.say("", plain, countWords(r))
	writeCalibration(p, r.Calibration, o)
	if !o.Verbose && o.Command != "" {
		p.sayIndented("All checks: ", faint, 2, o.Command+" --verbose")
	}
}

// writeCalibration says how often sound tables alarm, and what the audit as a
// whole could have caught.
func writeCalibration(p *page, c *audit.Calibration, o TextOptions) {
	if c == nil || len(c.Rules) == 0 {
		return
	}
	if c.CaughtLeast.Defined() {
		p.say("", plain, fmt.Sprintf("A trouble worth acting on would have been caught %s to %s times in 100.",
			wording.To(100*float64(c.CaughtLeast), 0), wording.To(100*float64(c.CaughtMost), 0)))
	}
	if !o.Verbose {
		return
	}
	p.say("", plain, calibrationWords(c))
}

func gradeInk(g audit.Grade) ink {
	switch g {
	case audit.Firm:
		return green
	case audit.Tentative:
		return cyan
	case audit.Guarded:
		return yellow
	}
	return red
}

// stateSign gives each state a sign and a colour; the word stands beside both.
func stateSign(s audit.State) (string, ink) {
	switch s {
	case audit.Pass:
		return "+", green
	case audit.Thin:
		return "~", cyan
	case audit.Warn:
		return "!", yellow
	case audit.Stop:
		return "x", red
	}
	return "-", faint
}
