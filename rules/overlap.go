package rules

import (
	"fmt"
	"math"
	"slices"

	"footing/rules/remedy"
	"footing/rules/wording"
)

// Overlap asks whether the groups share a range of the predictor.
var Overlap = &Rule{
	Name:     "overlap",
	Family:   OfModel,
	Asks:     "Were the groups measured over a common range of the predictor?",
	Why:      "Where they were not, two slopes may be two parts of one curve.",
	Method:   "range of the predictor that all groups cover, and the share of rows inside it",
	Limit:    "two groups without a common range are thin; a breach when a clear difference goes once one curve through all groups is allowed, and that curve is clear",
	Needs:    NeedsFit,
	Bears:    OnlyDifference,
	Remedies: []*remedy.Remedy{remedy.CommonCurve},
	Run:      overlap,
}

func overlap(p *Pass) (Outcome, error) {
	d := p.Design
	x := d.X()
	if len(d.Groups) < 2 || x == nil {
		return notAsked("one group, or no predictor"), nil
	}
	low, high := make([]float64, len(d.Groups)), make([]float64, len(d.Groups))
	for g := range d.Groups {
		own := d.OfGroup(x, g)
		low[g], high[g] = slices.Min(own), slices.Max(own)
	}
	from, to := slices.Max(low), slices.Min(high)
	share := inside(x, from, to)
	name := p.Columns.Predictors[0].Title()
	o := sound(fmt.Sprintf("the groups share %s from %s to %s, with %s of the rows", name, wording.Number(from), wording.Number(to), wording.Percent(share)))
	if from > to {
		o.Message = fmt.Sprintf("no %s is covered by all groups", name)
	}
	for a := range d.Groups {
		for b := a + 1; b < len(d.Groups); b++ {
			if !d.CommonSlope && math.Max(low[a], low[b]) > math.Min(high[a], high[b]) {
				o = cannotTell(fmt.Sprintf("%s and %s were measured over different ranges of %s: their slopes may be two parts of one curve", d.Groups[a], d.Groups[b], name))
				o.Touches = []Question{{Difference: true}}
			}
		}
	}
	if share < 0.5 && !d.CommonSlope && p.curveInstead() {
		o.IfChanges = Breach
		o.IfChangesMessage = fmt.Sprintf("different slopes or one curve: with %s of the rows in the range of %s that the groups share, these rows cannot say", wording.Percent(share), name)
	}
	o.Statistic = figure("share of rows in the common range", share)
	o.Evidence = map[string]any{"share_inside": share}
	return o, nil
}

// curveInstead reports whether a difference is shown and one bend over all rows
// would be clear as well.
func (p *Pass) curveInstead() bool {
	c := p.Answers.Difference
	alpha := 1 - p.Settings.Confidence
	if c == nil || !p.Fit.HasScatter() || !(c.P < alpha) {
		return false
	}
	x := centred(p.Design.X())
	for i, v := range x {
		x[i] = v * v
	}
	return p.Fit.Added(x).P < alpha
}

func inside(x []float64, from, to float64) float64 {
	if from > to {
		return 0
	}
	n := 0
	for _, v := range x {
		if v >= from && v <= to {
			n++
		}
	}
	return float64(n) / float64(len(x))
}
