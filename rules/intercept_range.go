package rules

import (
	"fmt"
	"slices"

	"footing/rules/wording"
)

// InterceptRange warns of quoting an intercept far from the data.
var InterceptRange = &Rule{
	Name:   "intercept-range",
	Family: OfModel,
	Asks:   "Does an intercept lie outside the data?",
	Why:    "An intercept is the fitted response where the predictor is 0; where nothing was measured near there, it is a guess.",
	Method: "compares 0 with the range of the predictor in each group, a tenth of it allowed at each end",
	Limit:  "never alarms; it limits what may be quoted",
	Needs:  NeedsFit,
	Bears:  OnlySlopes,

	OnlyLimits: true,
	Run:        interceptRange,
}

func interceptRange(p *Pass) (Outcome, error) {
	d := p.Design
	x := d.X()
	if x == nil {
		return notAsked("no predictor"), nil
	}
	name := p.Columns.Predictors[0].Title()
	var outside []string
	from, to := slices.Min(x), slices.Max(x)
	for g, label := range d.Groups {
		own := d.OfGroup(x, g)
		low, high := slices.Min(own), slices.Max(own)
		if margin := (high - low) / 10; 0 < low-margin || 0 > high+margin {
			outside = append(outside, inGroup(label))
		}
	}
	if len(outside) == 0 {
		return sound(name + " 0 lies within or near the data"), nil
	}
	which := "The intercept"
	if len(outside) > 1 {
		which = "The intercepts"
	}
	if d.HasGroup() {
		which += " of " + wording.Some(outside, 5)
	}
	o := sound(fmt.Sprintf("%s 0 lies outside the data, which run from %s to %s", name, wording.Number(from), wording.Number(to)))
	o.Limits = []Limit{{Sentence: fmt.Sprintf("%s: %s 0 lies outside the data (%s to %s).", which, name, wording.Number(from), wording.Number(to))}}
	return o, nil
}
