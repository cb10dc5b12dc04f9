package report

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"footing/audit"
	"footing/rules/wording"
)

var statementForm = &Form{
	Name: "statement", Marks: []string{mark},
	Write: func(w io.Writer, r *audit.Result, o Options) error {
		if o.File {
			if _, err := io.WriteString(w, audit.Format+" statement\n\n"); err != nil {
				return err
			}
		}
		return Statement(w, r, o.Version)
	},
}

// toldInStatement is how many rows, slopes or trials a paragraph lists.
const toldInStatement = 12

// Statement writes one paragraph for the methods section of a paper or a lab
// report. What may be quoted is told in the verdict's own sentences, with
// estimate, interval and rows (after Lang and Altman 2015, Int. J. Nurs. Stud.
// 52:5-9); nothing is claimed beyond them, and figures that may not be quoted
// stand only where both sides are told.
func Statement(w io.Writer, r *audit.Result, version string) error {
	s := &statement{r: r}
	s.fitted()
	s.checked(version)
	s.found()
	s.answers()
	for i := range s.sentences {
		s.sentences[i] = wording.Printable(s.sentences[i])
	}
	_, err := io.WriteString(w, strings.Join(s.sentences, " ")+"\n")
	return err
}

type statement struct {
	r         *audit.Result
	sentences []string
}

func (s *statement) say(format string, values ...any) {
	s.sentences = append(s.sentences, wording.Sentence(fmt.Sprintf(format, values...)))
}

// fitted says what was fitted, on how many rows, and what was set aside.
func (s *statement) fitted() {
	file := tableName(s.r)
	m := s.r.Model
	if m == nil {
		s.say("The table %s (%s) was screened; no line was fitted, and nothing is said of any slope", file, wording.Count(s.r.Input.Rows, "row"))
		return
	}
	switch {
	case len(m.Predictors) == 0:
		s.say("The means of %s were compared by least squares%s on %s of %s", withUnit(s.r, m.Response), s.groups(), s.rows(), file)
	default:
		s.say("A straight line of %s over %s was fitted by least squares%s%s to %s of %s", withUnit(s.r, m.Response), withUnit(s.r, m.Predictors[0]),
			s.groups(), s.additive(), s.rows(), file)
	}
	if len(m.RowsSetAside) == 0 {
		s.say("No row was set aside")
		return
	}
	verb := "were"
	if len(m.RowsSetAside) == 1 {
		verb = "was"
	}
	s.say("%s %s set aside, since a value that the model needs is missing or cannot be used: %s; no figures with them exist",
		wording.Count(len(m.RowsSetAside), "row"), verb, wording.Some(setAside(s.r), toldInStatement))
}

func (s *statement) rows() string {
	used, all := s.r.Model.RowsUsed, s.r.Input.Rows
	if used == all {
		return fmt.Sprintf("all %s", wording.Count(all, "row"))
	}
	return fmt.Sprintf("%d of the %s", used, wording.Count(all, "row"))
}

func (s *statement) groups() string {
	m := s.r.Model
	switch {
	case m.Group == nil:
		return ""
	case len(m.Predictors) == 0:
		return " between the groups by " + *m.Group
	case m.CommonSlope:
		return " with one slope for every " + *m.Group
	}
	return fmt.Sprintf(" in each of %s by %s", wording.Count(len(s.r.Slopes), "group"), *m.Group)
}

func (s *statement) additive() string {
	m := s.r.Model
	if rest := append(append([]string{}, tail(m.Predictors)...), m.Covariates...); len(rest) > 0 {
		return " (with " + wording.List(rest) + " additive)"
	}
	return ""
}

// checked says what was checked and how.
func (s *statement) checked(version string) {
	by := map[audit.State][]string{}
	asked := 0
	var limits []string // a pass of theirs may still limit what is quoted
	for k := range s.r.Findings {
		f := &s.r.Findings[k]
		if f.State != audit.Skip {
			asked++
		}
		switch {
		case f.IsOpen():
		case f.OnlyLimits && f.State == audit.Pass:
			limits = append(limits, f.Rule)
		default:
			by[f.State] = append(by[f.State], f.Rule)
		}
	}
	s.say("An audit by footing %s made %s", version, wording.Count(asked, "check"))
	if c := s.r.Calibration; c != nil && len(c.Rules) > 0 {
		how := fmt.Sprintf("%d simulated tables of this design, seed %d", c.Replicates, c.Seed)
		if c.Method == "formulas" {
			how = "formulas"
		}
		s.say("Those whose alarms could be chance (%s) were held to a joint rate of false alarms of %s by %s", wording.List(c.Rules), wording.Percent(float64(c.FalseAlarm)), how)
	}
	if names := by[audit.Pass]; len(names) > 0 {
		s.say("Nothing was found by %s", wording.List(names))
	}
	if names := by[audit.Thin]; len(names) > 0 {
		s.say("Nothing was found by %s either, but these rows could hardly have shown it", wording.List(names))
	}
	if len(limits) > 0 {
		s.say("What may not be quoted in any case was looked for by %s", wording.List(limits))
	}
	if c := s.r.Calibration; c != nil && c.Missed != nil {
		s.say("These rows would have missed %s", *c.Missed)
	}
	if names := by[audit.Skip]; len(names) > 0 {
		s.say("Not applicable: %s", wording.List(names))
	}
}

// found tells each finding that asks for a decision, with the figures as they
// stand and under each remedy that was tried.
func (s *statement) found() {
	var trials []string
	open := false
	for k := range s.r.Findings {
		f := &s.r.Findings[k]
		if !f.IsOpen() {
			continue
		}
		open = true
		s.say("%q (%s): %s", f.Rule, f.State, message(f))
		if f.Waived != nil {
			s.say("This was accepted: %s", *f.Waived)
		}
		for _, remedy := range f.Remedies {
			if remedy.Tried && remedy.Under != "" {
				// What follows from another finding often has the same remedy.
				if told := remedy.Under + ", " + s.trial(remedy); !slices.Contains(trials, told) {
					trials = append(trials, told)
				}
			}
		}
	}
	if len(trials) > 0 {
		s.say("For comparison, as the table stands: %s", s.asItStands())
		s.say("The same %s", strings.Join(trials[:min(len(trials), toldInStatement)], "; "))
		if more := len(trials) - toldInStatement; more > 0 {
			s.say("%s are not told here", wording.Count(more, "further trial"))
		}
		return
	}
	if open {
		s.say("No remedy was tried, and nothing was corrected")
	}
}

// asItStands gives every answer of the original fit.
func (s *statement) asItStands() string {
	var all []string
	for _, x := range s.r.Slopes {
		all = append(all, s.figures(x.Group, x.Slope, x.SE, x.CI, x.Rows))
	}
	for _, x := range s.r.Means {
		all = append(all, s.figures(&x.Group, x.Mean, x.SE, x.CI, x.Rows))
	}
	if d := s.r.Difference; d != nil && d.P.Defined() {
		all = append(all, "difference "+wording.P(float64(d.P)))
	}
	return wording.Some(all, toldInStatement)
}

func (s *statement) trial(remedy audit.Remedy) string {
	var all []string
	for _, x := range remedy.Slopes {
		all = append(all, s.figures(x.Group, x.Slope, x.SE, x.CI, x.Rows))
	}
	if d := remedy.Difference; d != nil && d.P.Defined() {
		all = append(all, "difference "+wording.P(float64(d.P)))
	}
	end := " (the answers hold)"
	if remedy.AnswerChanges {
		end = " (an answer changes)"
	}
	return wording.Some(all, toldInStatement) + end
}

func (s *statement) figures(group *string, value, se audit.Number, ci [2]audit.Number, rows int) string {
	name := "slope"
	if group != nil {
		name = *group
	}
	switch {
	case !value.Defined():
		return fmt.Sprintf("%s none (n = %d)", name, rows)
	case !se.Defined():
		return fmt.Sprintf("%s %s (no interval, n = %d)", name, wording.Figure(float64(value), 3), rows)
	}
	places := wording.Places(float64(se))
	return fmt.Sprintf("%s %s (%s CI %s to %s, n = %d)", name, wording.To(float64(value), places), wording.Percent(float64(s.r.Model.Confidence)),
		wording.To(float64(ci[0]), places), wording.To(float64(ci[1]), places), rows)
}

// answers gives the verdict and what it allows.
func (s *statement) answers() {
	s.say("The verdict is %s: %s", s.r.Verdict.State, s.r.Verdict.Summary)
	if s.r.Model == nil {
		return
	}
	few := func(all []string) []string {
		if len(all) > toldInStatement {
			return append(all[:toldInStatement:toldInStatement], fmt.Sprintf("%d more are not told here.", len(all)-toldInStatement))
		}
		return all
	}
	if len(s.r.Verdict.Quote) > 0 {
		s.say("What may be quoted: %s", strings.Join(few(s.r.Verdict.Quote), " "))
	}
	if no := s.r.Verdict.DoNotQuote; len(no) > 0 {
		s.say("Not to be quoted: %s", strings.Join(few(no), " "))
	}
	if s.r.Difference == nil && s.r.NotCompared != nil {
		s.say("No difference between groups is given (%s)", *s.r.NotCompared)
	}
	s.sentences = append(s.sentences, scope)
}
