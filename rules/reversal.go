package rules

import (
	"fmt"
	"math"
	"strings"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Reversal asks whether the slope over all rows runs against those within
// groups.
var Reversal = &Rule{
	Name:   "reversal",
	Family: OfModel,
	Asks:   "Does the slope over all rows run against the slopes within groups?",
	Why:    "Groups that differ in level and in where they were measured can turn a slope round when they are thrown together.",
	Method: "compares the slope with groups ignored and the common slope within groups, each with its interval; with no group in the model, for every column of labels that could be one",
	Limit: "both slopes clear and of opposite sign: with the group in the model the pooled slope may not be quoted; " +
		"for a column that is not in the model it is a breach. Both intervals must exclude zero on opposite sides, which chance brings about in fewer than 1 in 1,000 sound tables",
	Needs:    NeedsScatter,
	Bears:    OnlySlopes,
	Remedies: []*remedy.Remedy{remedy.AddGroup},
	Run:      reversal,
}

func reversal(p *Pass) (Outcome, error) {
	if p.Design.X() == nil {
		return notAsked("no predictor"), nil
	}
	if p.Design.HasGroup() {
		if len(p.Design.Groups) < 2 {
			return notAsked("one group"), nil
		}
		return p.reversalIn(p.Columns.Group), nil
	}
	o := notAsked("no column of labels that could be a group")
	for _, col := range p.Table.Columns {
		if !p.couldBeGroup(col) {
			continue
		}
		o = p.reversalIn(col)
		if o.Answer == Breach {
			return o, nil
		}
	}
	return o, nil
}

// couldBeGroup tells a column of a few labels, each in several used rows, that
// has no role.
func (p *Pass) couldBeGroup(col *readers.Column) bool {
	if p.Columns.RoleOf(col) != "" || col.Kind() != readers.TextColumn {
		return false
	}
	labels, _ := col.Levels()
	return len(labels) >= 2 && len(labels) <= 12 && 5*len(labels) <= p.Fit.N()
}

// reversalIn compares the pooled slope with the common one within the labels
// of a column, over the rows that have a label.
func (p *Pass) reversalIn(col *readers.Column) Outcome {
	columns := p.Columns
	columns.Group = col
	within, ok1 := p.slopeOf(columns, true)
	columns.Group = nil
	pooled, ok2 := p.slopeOf(columns, true)
	if !ok1 || !ok2 {
		return notAsked("the slopes cannot be compared")
	}
	evidence := map[string]any{"pooled_slope": pooled.Value, "within_slope": within.Value}
	o := sound("the slope over all rows and those within groups do not run against each other")
	if pooled.Clear() && within.Clear() && pooled.Value*within.Value < 0 {
		o = p.reversed(col, pooled, within)
	}
	o.Evidence = evidence
	return o
}

func (p *Pass) slopeOf(columns model.Columns, common bool) (model.Estimate, bool) {
	d := model.NewDesign(p.Table, columns, common)
	f, err := model.NewFit(d)
	if err != nil || !f.HasScatter() {
		return model.Estimate{}, false
	}
	slopes := f.Answers(p.Settings.Confidence).Slopes
	if len(slopes) == 0 || !slopes[0].Exists || math.IsNaN(slopes[0].Low) {
		return model.Estimate{}, false
	}
	return slopes[0], true
}

func (p *Pass) reversed(col *readers.Column, pooled, within model.Estimate) Outcome {
	y, x := p.Columns.Response.Title(), p.Columns.Predictors[0].Title()
	words := fmt.Sprintf("over all rows %s %s with %s (slope %s), within each %s it %s (%s)", y, risesOrFalls(pooled.Value), x,
		wording.To(pooled.Value, wording.Places(pooled.SE)), col.Title(), risesOrFalls(within.Value), wording.To(within.Value, wording.Places(within.SE)))
	if p.Design.HasGroup() {
		o := sound(words)
		o.Limits = []Limit{{Sentence: fmt.Sprintf("The slope over all rows together, %s: it runs against the slopes within groups (%s).",
			wording.To(pooled.Value, wording.Places(pooled.SE)), strings.TrimSpace(wording.To(within.Value, wording.Places(within.SE))))}}
		return o
	}
	o := breach(words + ": " + col.Title() + " belongs into the model")
	o.Where = []Place{{Row: -1, Column: col}}
	o.Advice = "run again with -g " + wording.Shell(col.Title())
	return o
}

func risesOrFalls(slope float64) string {
	if slope > 0 {
		return "rises"
	}
	return "falls"
}
