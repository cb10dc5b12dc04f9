package rules

import (
	"fmt"
	"math"

	"footing/rules/wording"
)

// SlopeContrast warns of reading a difference out of one clear and one unclear
// slope.
var SlopeContrast = &Rule{
	Name:   "slope-contrast",
	Family: OfModel,
	Asks:   "Is one slope clear and another not, without a clear difference between them?",
	Why:    "That one is clear and another is not says nothing about a difference: with equal true slopes it happens in about half of all tables at a power of one half.",
	Method: "compares which intervals exclude zero with the test of equal slopes (Gelman and Stern 2006, Am. Stat. 60:328)",
	Limit:  "never alarms; it limits what may be quoted",
	Needs:  NeedsScatter,
	Bears:  OnlyDifference,

	OnlyLimits: true,
	Run:        slopeContrast,
}

func slopeContrast(p *Pass) (Outcome, error) {
	d := p.Answers.Difference
	if d == nil || p.Design.X() == nil {
		return notAsked("one group, or no slopes to compare"), nil
	}
	var clear, unclear []string
	for _, s := range p.Answers.Slopes {
		switch {
		case !s.Exists || math.IsNaN(s.Low):
		case s.Clear():
			clear = append(clear, s.Group)
		default:
			unclear = append(unclear, s.Group)
		}
	}
	if len(clear) == 0 || len(unclear) == 0 || !(d.P >= 1-p.Settings.Confidence) {
		return sound("no difference could be read out of the slopes that their comparison does not show"), nil
	}
	o := sound(fmt.Sprintf("the slope is clear in %s and not in %s, and no difference between them is shown (%s)", wording.List(clear), wording.List(unclear), wording.P(d.P)))
	o.Limits = []Limit{{Sentence: fmt.Sprintf(
		"\"%s changes with %s in %s but not in %s\": one clear slope and one unclear one are no evidence of a difference (%s).",
		p.Columns.Response.Title(), p.Columns.Predictors[0].Title(), wording.List(clear), wording.List(unclear), wording.P(d.P))}}
	o.Touches = []Question{{Difference: true}}
	return o, nil
}
