package report

import (
	_ "embed" // for the page
	"fmt"
	"html/template"
	"io"
	"strconv"
	"strings"
	"sync"

	"footing/audit"
	"footing/audit/figure"
	"footing/rules"
	"footing/rules/wording"
)

// HTMLOptions say what an HTML report tells besides the result.
type HTMLOptions struct {
	Version string // of footing
	Command string // how this audit was called
}

//go:embed page.html
var pageText string

var htmlForm = &Form{
	Name: "html", Extensions: []string{".html", ".htm"}, Marks: []string{"<!doctype html>\n<!-- " + mark}, Draws: true,
	Write: func(w io.Writer, r *audit.Result, o Options) error {
		return HTML(w, r, HTMLOptions{Version: o.Version, Command: o.Text.Command})
	},
}

// pageTemplate shows text from the data with t, which makes visible what would
// act on a display; what would act on a parser html/template escapes.
var pageTemplate = sync.OnceValue(func() *template.Template {
	return template.Must(template.New("page").Funcs(template.FuncMap{"t": wording.Printable}).Parse(pageText))
})

// HTML writes the result as one page that needs nothing else: no script, nothing
// fetched. With Result.Drawing it has the figures.
func HTML(w io.Writer, r *audit.Result, o HTMLOptions) error {
	var b strings.Builder
	if err := pageTemplate().Execute(&b, newWebPage(r, o)); err != nil {
		return err
	}
	// The last word on what acts on a display, wherever it came from; the page's
	// own line ends stay.
	for line := range strings.Lines(b.String()) {
		if _, err := io.WriteString(w, wording.Printable(strings.TrimSuffix(line, "\n"))+"\n"); err != nil {
			return err
		}
	}
	return nil
}

// webPage is what the template says, in its order.
type webPage struct {
	Mark                     template.HTML // html/template drops comments of its own text
	Version, Command, SHA256 string

	File, Sheet, Read, Model string
	SetAside, Notes          []string
	Columns                  []webColumn
	Screened                 bool
	Suggested                *audit.Suggestion

	Grade, GradeTone, Summary string

	Quote, DoNotQuote             []string
	FirstQuestion, SecondQuestion string
	AnswerKind, Confidence, Unit  string
	Answers, Pairs                []webAnswer
	Difference                    string

	Findings                    []webFinding
	Trials, Untried             []webTrial
	RemedyFigures, QuietFigures []webFigure
	Missed                      string
	Passes, Skips               []webFinding

	Calibration, Seed, Bands string
	Rules                    []webRule
}

type webColumn struct {
	Letter, Name, Role, Kind string
	Present, Missing         int
	Min, Median, Max, Doubts string
}

type webAnswer struct {
	Group                        string
	Rows                         int
	Value, Interval, P, RSquared string
	Standing, Because            string
}

type webFinding struct {
	Rule, State, Sign, Tone, Message string
	ConsequenceOf, Waived            string
	Where, MoreWhere                 []webPlace
	WhereLeft                        int
	Do                               []webTrial
	Figures                          []webFigure
	Follows                          []webFinding
}

type webPlace struct{ Cell, Words string }

type webTrial struct {
	Rule, Text, Source, Why, Judged string
	Answers                         []string
}

type webFigure struct {
	Name, Title, Desc string
	SVG               template.HTML
}

type webRule struct {
	Name, Asks, Method, Limit string
	Figures                   []string
}

func newWebPage(r *audit.Result, o HTMLOptions) *webPage {
	p := &webPage{
		Mark:    "<!-- " + audit.Format + " html -->",
		Version: o.Version, Command: o.Command, SHA256: r.Input.SHA256,
		File: shortened(r.Input.File), Sheet: text(r.Input.Sheet), Screened: r.Model == nil, Suggested: r.Suggested,
		Grade: strings.ToUpper(string(r.Verdict.State)), GradeTone: gradeTone(r.Verdict.State), Summary: wording.Sentence(r.Verdict.Summary),
		Quote: r.Verdict.Quote, DoNotQuote: r.Verdict.DoNotQuote,
	}
	p.fillRead(r)
	if r.Model != nil {
		p.fillAnswers(r)
	}
	p.fillFindings(r)
	p.fillHow(r)
	return p
}

func text(s *string) string {
	if s == nil {
		return ""
	}
	return *s
}

// gradeTone is the tone of the state behind a verdict.
func gradeTone(g audit.Grade) string {
	switch g {
	case audit.Firm:
		return string(audit.Pass)
	case audit.Tentative:
		return string(audit.Thin)
	case audit.Guarded:
		return string(audit.Warn)
	}
	return string(audit.Stop)
}

func (p *webPage) fillRead(r *audit.Result) {
	in := r.Input
	p.Read = fmt.Sprintf("%s in %s", wording.Count(in.Rows, "row"), wording.Count(len(in.Columns), "column"))
	if in.HeaderRow > 1 {
		p.Read += fmt.Sprintf(" under a header in row %d", in.HeaderRow)
	}
	if r.Model != nil {
		p.Read += fmt.Sprintf("; %d used", r.Model.RowsUsed)
		p.Model = wording.Sentence(modelWords(r))
		for _, row := range r.Model.RowsSetAside {
			p.SetAside = append(p.SetAside, fmt.Sprintf("row %d (%s)", row.Row, row.Reason))
		}
	}
	p.Read = wording.Stop(p.Read)
	if most := 200; len(p.SetAside) > most {
		left := len(p.SetAside) - most
		p.SetAside = append(p.SetAside[:most], fmt.Sprintf("%d further rows are not listed here", left))
	}
	for _, note := range in.Reading.Notes {
		p.Notes = append(p.Notes, wording.Sentence(note))
	}
	for _, c := range in.Columns {
		name := c.Name
		if c.Unit != nil {
			name += " (" + *c.Unit + ")"
		}
		p.Columns = append(p.Columns, webColumn{
			Letter: c.Letter, Name: shortened(name), Role: text(c.Role), Kind: c.Kind, Present: c.Present, Missing: c.Missing,
			Min: value(c.Min), Median: value(c.Median), Max: value(c.Max), Doubts: strings.Join(c.Doubts, ", "),
		})
	}
}

func (p *webPage) fillAnswers(r *audit.Result) {
	m := r.Model
	p.Confidence = wording.Percent(float64(m.Confidence))
	p.AnswerKind, p.SecondQuestion = "slope", "Do the slopes differ between groups?"
	if len(m.Predictors) > 0 {
		p.FirstQuestion = fmt.Sprintf("Does %s change with %s, and by how much?", m.Response, m.Predictors[0])
		p.Unit = perUnit(r)
	} else {
		p.AnswerKind, p.SecondQuestion = "mean", "Do the means differ between groups?"
		p.FirstQuestion = "What is the mean " + m.Response + " of each group?"
	}
	for _, s := range r.Slopes {
		group := "all rows"
		if s.Group != nil && *s.Group != "" {
			group = *s.Group
		}
		a := answerRow(group, s.Rows, s.Slope, s.SE, s.CI)
		a.P, a.RSquared = pWords(s.P), ""
		if s.RSquared.Defined() {
			a.RSquared = wording.To(float64(s.RSquared), 2)
		}
		a.Standing, a.Because = standingWords(s.Standing), strings.Join(s.Because, ", ")
		p.Answers = append(p.Answers, a)
	}
	for _, s := range r.Means {
		a := answerRow(s.Group, s.Rows, s.Mean, s.SE, s.CI)
		a.Standing, a.Because = standingWords(s.Standing), strings.Join(s.Because, ", ")
		p.Answers = append(p.Answers, a)
	}
	d := r.Difference
	if d == nil {
		p.Difference = "Not compared."
		if r.NotCompared != nil {
			p.Difference = wording.Sentence("not compared: " + *r.NotCompared)
		}
		return
	}
	p.Difference = fmt.Sprintf("F(%s, %s) = %s, %s: %s", value(d.DF[0]), value(d.DF[1]), wording.Figure(float64(d.F), 3), wording.P(float64(d.P)), standingWords(d.Standing))
	if len(d.Because) > 0 {
		p.Difference += " (" + strings.Join(d.Because, ", ") + ")"
	}
	p.Difference += "."
	if d.Detectable.Defined() {
		p.Difference += fmt.Sprintf(" A difference of %s would have been found four times in five.", wording.Figure(float64(d.Detectable), 2))
	}
	for _, pair := range d.Pairs {
		if len(p.Pairs) >= mostPairs {
			p.Difference += fmt.Sprintf(" The first %d of %d pairs are listed.", mostPairs, len(d.Pairs))
			break
		}
		a := answerRow(pair.Between[1]+" less "+pair.Between[0], 0, pair.Difference, pair.SE, pair.CI)
		a.P = pWords(pair.P)
		if len(d.Pairs) > 1 {
			a.P = pWords(pair.PTukey)
		}
		p.Pairs = append(p.Pairs, a)
	}
}

// mostPairs is how many pairs of groups are listed.
const mostPairs = 66

func answerRow(group string, rows int, v, se audit.Number, ci [2]audit.Number) webAnswer {
	a := webAnswer{Group: shortened(group), Rows: rows, Value: "none"}
	if !v.Defined() {
		return a
	}
	places := wording.Places(float64(se))
	a.Value = wording.To(float64(v), places)
	if ci[0].Defined() {
		a.Interval = fmt.Sprintf("%s to %s", wording.To(float64(ci[0]), places), wording.To(float64(ci[1]), places))
	}
	return a
}

func pWords(p audit.Number) string {
	if !p.Defined() {
		return ""
	}
	return strings.TrimPrefix(strings.TrimPrefix(wording.P(float64(p)), "p "), "= ")
}

// standingWords says in words what may be done with an answer.
func standingWords(s audit.Standing) string {
	switch s {
	case audit.Quote:
		return "may be quoted"
	case audit.QuoteWith:
		return "may be quoted with what must be said beside it"
	}
	return "not to be quoted"
}

// perUnit is what slopes are measured in.
func perUnit(r *audit.Result) string {
	unit := func(name string) string {
		for _, c := range r.Input.Columns {
			if c.Name == name && c.Unit != nil {
				return *c.Unit
			}
		}
		return ""
	}
	y, x := unit(r.Model.Response), unit(r.Model.Predictors[0])
	if y == "" {
		y = "units of " + r.Model.Response
	}
	if x == "" {
		x = "unit of " + r.Model.Predictors[0]
	}
	return y + " per " + x
}

// fillFindings shares the findings out: those that ask for a decision with what
// follows from them and the figures that show it, remedies, passes, skips.
func (p *webPage) fillFindings(r *audit.Result) {
	beside := map[string][]webFigure{}
	for _, f := range figure.All(r) {
		// The figure package escapes every text that it is given.
		shownFigure := webFigure{Name: f.Name, Title: f.Title, Desc: f.Desc, SVG: template.HTML(f.SVG)}
		switch {
		case f.Name == figure.Remedies:
			p.RemedyFigures = append(p.RemedyFigures, shownFigure)
		case f.Beside == "":
			p.QuietFigures = append(p.QuietFigures, shownFigure)
		default:
			beside[f.Beside] = append(beside[f.Beside], shownFigure)
		}
	}
	for _, f := range r.Findings {
		w := newWebFinding(f)
		p.collectRemedies(f)
		if f.ConsequenceOf != nil {
			if root := p.finding(*f.ConsequenceOf); root != nil {
				root.Figures = append(root.Figures, beside[f.Rule]...)
				root.Follows = append(root.Follows, w)
				continue
			}
		}
		w.Figures = beside[f.Rule]
		switch {
		case f.IsOpen() || f.ConsequenceOf != nil:
			p.Findings = append(p.Findings, w)
		case f.State == audit.Skip:
			p.Skips = append(p.Skips, w)
		default:
			p.Passes = append(p.Passes, w)
		}
	}
}

// finding is an entry for a rule that asks for a decision; nil for none.
func (p *webPage) finding(rule string) *webFinding {
	for k := range p.Findings {
		if p.Findings[k].Rule == rule {
			return &p.Findings[k]
		}
	}
	return nil
}

const (
	firstPlaces = 5
	mostPlaces  = 500
)

func newWebFinding(f audit.Finding) webFinding {
	sign, _ := stateSign(f.State)
	w := webFinding{
		Rule: f.Rule, State: string(f.State), Sign: sign, Tone: string(f.State), Message: f.Message,
		ConsequenceOf: text(f.ConsequenceOf), Waived: text(f.Waived),
	}
	if !f.IsOpen() {
		return w
	}
	for k, place := range f.Where {
		if k >= mostPlaces {
			w.WhereLeft = len(f.Where) - mostPlaces
			break
		}
		shownPlace := webPlace{Cell: text(place.Cell), Words: shortened(text(place.Value))}
		switch {
		case place.Cell == nil && place.Row != nil:
			shownPlace.Words = fmt.Sprintf("row %d", *place.Row)
		case place.Cell == nil:
			shownPlace.Words = "column " + shortened(text(place.Column))
		}
		if k < firstPlaces {
			w.Where = append(w.Where, shownPlace)
		} else {
			w.MoreWhere = append(w.MoreWhere, shownPlace)
		}
	}
	for _, remedy := range f.Remedies {
		do := webTrial{Text: remedy.Text}
		switch {
		case remedy.Tried && remedy.AnswerChanges:
			do.Judged = "Tried: an answer changes."
		case remedy.Tried:
			do.Judged = "Tried: the answers hold."
		}
		w.Do = append(w.Do, do)
	}
	return w
}

func (p *webPage) collectRemedies(f audit.Finding) {
	for _, remedy := range f.Remedies {
		t := webTrial{Rule: f.Rule, Text: remedy.Text, Source: text(remedy.Source), Why: text(remedy.Why)}
		switch {
		case !remedy.Tried && (f.IsOpen() || f.ConsequenceOf != nil):
			p.Untried = append(p.Untried, t)
		case remedy.Tried:
			t.Answers, t.Judged = triedFigures(remedy), "hold"
			if remedy.AnswerChanges {
				t.Judged = "change: " + wording.List(changedNames(remedy))
			}
			p.Trials = append(p.Trials, t)
		}
	}
}

// changedNames lists the answers that a remedy changes, in the order in which
// they are told.
func changedNames(r audit.Remedy) []string {
	var all []string
	for _, s := range r.Slopes {
		name := "slope"
		if s.Group != nil && *s.Group != "" {
			name += " " + *s.Group
		}
		if r.Judged[name] == string(audit.Changes) {
			all = append(all, name)
		}
	}
	if r.Judged["difference"] == string(audit.Changes) {
		all = append(all, "difference")
	}
	if len(all) == 0 {
		all = append(all, "an answer that is gone")
	}
	return all
}

func (p *webPage) fillHow(r *audit.Result) {
	if c := r.Calibration; c != nil {
		p.Seed = strconv.FormatUint(c.Seed, 10)
		if len(c.Rules) > 0 {
			how := fmt.Sprintf("by %d simulated tables of this design", c.Replicates)
			if c.Method == "formulas" {
				how = "by formulas, since the table is large"
			}
			p.Calibration = fmt.Sprintf("Sound tables alarm in at most %s of cases (%s; over %s).", wording.Percent(float64(c.FalseAlarm)), how, wording.List(c.Rules))
		}
		if c.Missed != nil {
			p.Missed = wording.Sentence("these rows would have missed " + *c.Missed)
		}
		if c.CaughtLeast.Defined() {
			p.Missed = strings.TrimSpace(p.Missed + fmt.Sprintf(" A trouble worth acting on would have been caught %s to %s times in 100.",
				wording.To(100*float64(c.CaughtLeast), 0), wording.To(100*float64(c.CaughtMost), 0)))
		}
	}
	if d := r.Drawing; d != nil && d.Trend != nil {
		p.Bands = fmt.Sprintf("Each holds in %s of 100 sound tables of this design, at all its places at once; found with streams of their own from the same seed.", wording.Number(100*d.Inside))
	}
	for _, f := range r.Findings {
		rule := rules.Named(f.Rule)
		if rule == nil {
			continue
		}
		p.Rules = append(p.Rules, webRule{
			Name: rule.Name, Asks: rule.Asks, Method: wording.Sentence(rule.Method), Limit: wording.Sentence(rule.Limit), Figures: statisticWords(f),
		})
	}
}

// statisticWords tells the figures behind a finding.
func statisticWords(f audit.Finding) []string {
	var all []string
	if f.Statistic != nil && f.Value.Defined() {
		all = append(all, *f.Statistic+" "+wording.Figure(float64(f.Value), 3))
	}
	for _, p := range []struct {
		name string
		v    audit.Number
	}{{"", f.P}, {"simulated ", f.PSimulated}, {"joint ", f.PJoint}} {
		if p.v.Defined() {
			all = append(all, p.name+wording.P(float64(p.v)))
		}
	}
	if f.Power.Defined() {
		all = append(all, "power "+wording.To(float64(f.Power), 2))
	}
	return all
}
