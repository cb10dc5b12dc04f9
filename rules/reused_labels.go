package rules

import (
	"fmt"

	"footing/rules/remedy"
	"footing/rules/wording"
)

// ReusedLabels asks whether the label of one row stands in another too.
var ReusedLabels = &Rule{
	Name:     "reused-labels",
	Family:   OfTable,
	Asks:     "Does one label name several rows?",
	Why:      "A label that stands twice is a row entered twice, a slip in the label, or one thing measured twice, whose rows do not count as two.",
	Method:   "compares the cells of the label column as they are written",
	Limit:    "one label in two rows; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.OneLabelEach},
	Run:      reusedLabels,
}

func reusedLabels(p *Pass) (Outcome, error) {
	col := p.Columns.Label
	if col == nil {
		return notAsked("no column of labels is named"), nil
	}
	names, codes := col.Levels()
	times := make([]int, len(names))
	for _, c := range codes {
		if c >= 0 {
			times[c]++
		}
	}
	var said []string
	var where []Place
	cells := make([][]string, len(names))
	for i, c := range codes {
		if c >= 0 && times[c] > 1 {
			where = append(where, Place{Row: i, Column: col})
			if len(cells[c]) <= mostSaid {
				cells[c] = append(cells[c], p.Table.Address(col, i))
			}
		}
	}
	labels := 0
	for c, at := range cells {
		if len(at) == 0 {
			continue
		}
		labels++
		if len(said) < mostSaid {
			said = append(said, fmt.Sprintf("%q at %s", names[c], wording.Some(at, mostSaid)))
		}
	}
	if labels == 0 {
		return sound("every label names one row"), nil
	}
	more := ""
	if labels > len(said) {
		more = fmt.Sprintf(" and %d more", labels-len(said))
	}
	o := breach(fmt.Sprintf("%s several rows: %s%s", wording.Count(labels, "label")+nameOrNames(labels), wording.List(said), more))
	o.Where = where
	return o, nil
}

func nameOrNames(n int) string {
	if n == 1 {
		return " names"
	}
	return " name"
}
