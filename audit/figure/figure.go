// Package figure draws a result: SVG by hand, small, with a title and a
// description that tell in figures what is to be seen. It computes nothing; what
// it shows comes from the result, where it is put on the page is decided here.
package figure

import (
	"fmt"
	"slices"
	"strconv"

	"footing/audit"
	"footing/rules/wording"
)

// Figure is one drawing.
type Figure struct {
	Name  string // words joined by hyphens, fit for a file
	Title string
	Desc  string // what is to be seen, in words
	SVG   []byte // a whole document, to be put into HTML as it is
	// Beside is the rule whose finding the figure makes visible; "" for a figure
	// that shows nothing amiss, or no single finding.
	Beside string
}

// The names of the figures.
const (
	Data      = "data"
	Residuals = "residuals"
	Quantiles = "quantiles"
	Sizes     = "sizes"
	Pulls     = "pulls"
	Order     = "order"
	Remedies  = "remedies"
	Power     = "power"
)

// shows lists for each figure the rules whose findings it makes visible.
var shows = []struct {
	name  string
	rules []string
	draw  func(*sheet) bool
}{
	{Data, []string{
		"missing-codes", "label-variants", "overlap", "reversal", "slope-contrast", "leverage", "group-balance", "intercept-range",
		"copied-rows", "fragility", "far-values", "swapped-cells", "unit-shift", "out-of-range", "repeated-run", "pile-up", "censored-values", "rounding-heaps", "sample-size", "repeated-subjects",
	}, drawData},
	{Residuals, []string{"linearity", "outliers"}, drawResiduals},
	{Quantiles, []string{"normality"}, drawQuantiles},
	{Sizes, []string{"constant-variance"}, drawSizes},
	{Pulls, []string{"influence"}, drawPulls},
	{Order, []string{"independence", "order-drift"}, drawOrder},
}

// All draws what the result holds: first the figures that stand beside a
// finding, in the order of the findings, then the answers under the remedies,
// then the figures that show nothing amiss. Without Result.Drawing only the power
// of the checks is drawn.
func All(r *audit.Result) []Figure {
	var beside, quiet []Figure
	rank := map[string]int{}
	for k, f := range r.Findings {
		rank[f.Rule] = k
	}
	for _, s := range shows {
		if r.Drawing == nil || len(r.Drawing.Points) == 0 {
			break
		}
		sh := &sheet{name: s.name, result: r, drawing: r.Drawing}
		sh.gather(s.rules)
		if !s.draw(sh) {
			continue
		}
		if f := sh.figure(); f.Beside != "" {
			beside = append(beside, f)
		} else {
			quiet = append(quiet, f)
		}
	}
	slices.SortStableFunc(beside, func(a, b Figure) int { return rank[a.Beside] - rank[b.Beside] })
	all := beside
	for _, s := range []struct {
		name string
		draw func(*sheet) bool
	}{{Remedies, drawRemedies}, {Power, drawPower}} {
		sh := &sheet{name: s.name, result: r, drawing: r.Drawing}
		if !s.draw(sh) {
			continue
		}
		if s.name == Remedies {
			all = append(all, sh.figure())
		} else {
			quiet = append(quiet, sh.figure())
		}
	}
	return append(all, quiet...)
}

// sheet is a figure in the making.
type sheet struct {
	name    string
	result  *audit.Result
	drawing *audit.Drawing
	title   string
	desc    []string
	beside  string
	named   map[int]string // rows of the table named by the findings shown, with the rule
	beyond  []string       // rows that are drawn at the edge
	canvas
}

// gather collects the open findings that a figure makes visible: the first is
// what it stands beside, and their rows are marked.
func (s *sheet) gather(rules []string) {
	s.named = map[int]string{}
	for _, f := range s.result.Findings {
		if !slices.Contains(rules, f.Rule) || !isOpen(f) {
			continue
		}
		if s.beside == "" {
			s.beside = f.Rule
		}
		s.mark(f)
	}
}

// mark names the rows of a finding.
func (s *sheet) mark(f audit.Finding) {
	for _, w := range f.Where {
		if w.Row != nil && s.named[*w.Row] == "" {
			s.named[*w.Row] = f.Rule
		}
	}
}

// isOpen tells findings that ask for a decision.
func isOpen(f audit.Finding) bool {
	return f.State == audit.Stop || f.State == audit.Warn || (f.State == audit.Thin && !f.ByPower)
}

// say adds a sentence to the description.
func (s *sheet) say(format string, args ...any) {
	s.desc = append(s.desc, wording.Printable(wording.Sentence(fmt.Sprintf(format, args...))))
}

func (s *sheet) figure() Figure {
	desc := ""
	for k, sentence := range s.desc {
		if k > 0 {
			desc += " "
		}
		desc += sentence
	}
	f := Figure{Name: s.name, Title: wording.Printable(s.title), Desc: desc, Beside: s.beside}
	f.SVG = s.document(f.Name, f.Title, f.Desc)
	return f
}

// sayThinned says that only some rows are drawn.
func (s *sheet) sayThinned() {
	if n := len(s.drawing.Points); n < s.drawing.Rows {
		s.say("%d of the %d rows are drawn: those that are named, the extreme ones and others by lot", n, s.drawing.Rows)
	}
}

// sayMarked says which rows are marked.
func (s *sheet) sayMarked(rows []int) {
	if len(rows) == 0 {
		return
	}
	slices.Sort(rows)
	var words []string
	for _, row := range rows {
		words = append(words, fmt.Sprint(row))
	}
	noun := "rows"
	if len(rows) == 1 {
		noun = "row"
	}
	s.say("marked: %s %s", noun, wording.Some(words, 6))
}

// inside writes the share of sound tables: "95 of 100".
func (s *sheet) inside() string {
	return fmt.Sprintf("%s of 100", wording.Number(100*s.drawing.Inside))
}

// group is the label of a group; one that is a number gets the name of its
// column.
func (s *sheet) group(g int) string { return s.labelled(s.drawing.Groups[g]) }

func (s *sheet) labelled(label string) string {
	if _, err := strconv.ParseFloat(label, 64); err == nil && s.result.Model.Group != nil {
		return *s.result.Model.Group + " " + label
	}
	return label
}

// unit is that of the response with a space before it.
func (s *sheet) unit() string {
	if u := s.drawing.Response.Unit; u != "" {
		return " " + u
	}
	return ""
}

func title(a audit.DrawnAxis) string {
	if a.Unit == "" {
		return a.Name
	}
	return a.Name + " (" + a.Unit + ")"
}
