package rules

import (
	"fmt"
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Influence asks whether one row pulls a slope.
var Influence = &Rule{
	Name:   "influence",
	Family: OfModel,
	Asks:   "Does one row pull a slope further than chance would?",
	Why:    "A slope that one row makes is that row's, not the table's.",
	Method: "largest change of a slope by leaving a row out, in standard errors (DFBETAS; Belsley, Kuh and Welsch 1980, Regression Diagnostics); " +
		"Cook's distance (1977, Technometrics 19:15) is told beside it",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.SetAside},
	Tests:    influenceTests,
	Run:      influence,
}

// pull is the largest |DFBETAS| of a row over all slopes.
type pull struct {
	value float64
	row   int
	group int // -1 for a slope that all share
}

func largestPull(d *model.Diagnostics) (pull, bool) {
	best := pull{row: -1}
	for k, v := range d.DFBETAS {
		for i, b := range v {
			if !math.IsNaN(b) && (best.row < 0 || math.Abs(b) > best.value) {
				best = pull{value: math.Abs(b), row: i, group: d.SlopeOf[k]}
			}
		}
	}
	return best, best.row >= 0
}

func influenceTests(p *Pass) ([]Test, string) {
	best, ok := largestPull(p.Fit.Diagnostics())
	if !ok {
		return nil, "no slope, or too few rows to leave one out"
	}
	return []Test{{Name: "largest DFBETAS of a slope", Value: best.value, P: unionBound(p.Fit, best.value)}}, ""
}

// unionBound is the chance that any row of a sound table reaches a DFBETAS of
// t, bounded by the sum over the rows of the chance that its externally
// studentized residual reaches t/a, a = max_g |w_gi| / sqrt(1-h_i).
func unionBound(f *model.Fit, t float64) float64 {
	reach := make([]float64, f.N())
	for _, k := range f.AnswerTerms() {
		if k < 0 {
			continue
		}
		c := f.Term(k)
		for i, v := range c.Catcher {
			reach[i] = max(reach[i], math.Abs(v)/c.Length)
		}
	}
	total := 0.0
	for i, w := range reach {
		h := f.Leverage[i]
		if h >= 1 || w == 0 {
			continue
		}
		total += numeric.StudentTwoSided(t*math.Sqrt(1-h)/w, float64(f.DF-1))
	}
	return min(1, total)
}

func influence(p *Pass) (Outcome, error) {
	d := p.Fit.Diagnostics()
	best, _ := largestPull(d)
	at := p.Table.Row(p.Design.Rows[best.row])
	o := judged(p.Joint,
		fmt.Sprintf("row %d moves the slope%s by %s standard errors", at, ofGroup(p, best.group), wording.Figure(best.value, 2)),
		"no row pulls a slope further than chance lets one")
	o.Statistic = p.Joint.Tests[0].measure()
	cook, cookRow := largestCook(d.Cook)
	o.Evidence = map[string]any{"largest_dfbetas": best.value, "row": at, "largest_cook": cook}
	if cookRow >= 0 {
		o.Evidence["largest_cook_row"] = p.Table.Row(p.Design.Rows[cookRow])
	}
	o.Target.Rows = []int{best.row}
	o.Touches = p.ofRows(o.Target.Rows)
	o.Where = []Place{p.row(best.row)}
	return o, nil
}

func largestCook(cook []float64) (float64, int) {
	at := -1
	for i, v := range cook {
		if !math.IsNaN(v) && (at < 0 || v > cook[at]) {
			at = i
		}
	}
	if at < 0 {
		return math.NaN(), -1
	}
	return cook[at], at
}

func ofGroup(p *Pass, g int) string {
	if g < 0 || !p.Design.HasGroup() {
		return ""
	}
	return " of " + p.Design.Groups[g]
}
