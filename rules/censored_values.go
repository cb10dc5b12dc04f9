package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// CensoredValues asks for values known only to lie beyond a limit.
var CensoredValues = &Rule{
	Name:   "censored-values",
	Family: OfTable,
	Asks:   "Are values known only to lie beyond a limit?",
	Why:    "Leaving out what is below a limit leaves out low values and not high ones: the answers are biased, and so they are with the limit put in its place.",
	Method: "lists texts such as <0.2, > 60, below LOD in columns of numbers, and nd in a column that has such texts",
	Limit:  "one such cell; no chance is involved, so no false alarms",
	Needs:  NeedsTable, Remedies: []*remedy.Remedy{remedy.SayLimits},
	Run: censoredValues,
}

func censoredValues(p *Pass) (Outcome, error) {
	found := p.tally()
	for _, col := range p.asNumbers() {
		for _, i := range p.strangers(col, beyondLimit) {
			found.cell(col, i, func() string { return fmt.Sprintf("%s %q", p.Table.Address(col, i), col.Cell(i).Text) })
		}
	}
	return found.outcome("no value lies beyond a limit", func(words string, n int) string {
		return fmt.Sprintf("%s known only to lie beyond a limit: %s; such a row is set aside, which biases the answers, as only values on one side are lost%s",
			wording.Count(n, "value")+isAre(n), words, sides(found.used.where))
	}), nil
}

// sides says on which side of a limit the values lie.
func sides(where []Place) string {
	n := map[string]int{}
	for _, w := range where {
		side := "below"
		if cell := w.Column.Cell(w.Row); cell.Kind != readers.Code {
			side, _ = limitIn(cell.Text)
		}
		n[side]++
	}
	if n["below"] > 0 && n["above"] > 0 {
		return fmt.Sprintf(" (%d below, %d above)", n["below"], n["above"])
	}
	return ""
}
