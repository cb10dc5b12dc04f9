package rules

import (
	"fmt"
	"slices"

	"footing/rules/remedy"
	"footing/rules/wording"
)

// GroupBalance asks whether some group is very small.
var GroupBalance = &Rule{
	Name:     "group-balance",
	Family:   OfModel,
	Asks:     "Is a group too small to be compared?",
	Why:      "A slope through two or three rows is hardly checked by any other; groups of unequal size alone do no harm.",
	Method:   "counts the used rows of each group",
	Limit:    "a group of at most three rows is thin; unequal sizes never alarm, since they harm only together with unequal scatter, which has its own rule",
	Needs:    NeedsFit,
	Bears:    OnlyDifference,
	Remedies: []*remedy.Remedy{remedy.MoreRows},
	Run:      groupBalance,
}

func groupBalance(p *Pass) (Outcome, error) {
	d := p.Design
	if len(d.Groups) < 2 {
		return notAsked("one group"), nil
	}
	sizes := d.GroupSizes()
	ratio := float64(slices.Max(sizes)) / float64(slices.Min(sizes))
	var small, all []string
	for g, n := range sizes {
		all = append(all, fmt.Sprintf("%s %d", d.Groups[g], n))
		if n <= 3 {
			small = append(small, fmt.Sprintf("%s has %s", d.Groups[g], wording.Count(n, "row")))
		}
	}
	o := sound("rows per group: " + wording.Some(all, 8))
	if len(small) > 0 {
		o = cannotTell(wording.Some(small, 5) + ": too few for a line to be checked")
		o.Touches = []Question{{Difference: true}}
		for g, n := range sizes {
			if n <= 3 {
				o.Touches = append(o.Touches, Question{Group: d.Groups[g]})
			}
		}
	}
	o.Statistic = figure("largest over smallest group", ratio)
	o.Evidence = map[string]any{"size_ratio": ratio}
	return o, nil
}
