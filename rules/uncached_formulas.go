package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// UncachedFormulas asks for formulas whose value was never stored.
var UncachedFormulas = &Rule{
	Name:     "uncached-formulas",
	Family:   OfTable,
	Asks:     "Do cells hold formulas that were never calculated?",
	Why:      "Some programs read such a cell as 0 or as missing without a word; footing never calculates, so its value is not known.",
	Method:   "lists the cells of a workbook that have a formula and no stored value",
	Limit:    "one such cell in a column in use; a stop when they are most of the cells of a fitted column. No chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.Calculate},
	Run:      uncachedFormulas,
}

func uncachedFormulas(p *Pass) (Outcome, error) {
	found := p.tally()
	var most []string
	for _, col := range p.Table.Columns {
		n := col.Count(readers.Uncached)
		if n == 0 {
			continue
		}
		if 2*n > col.Len()-col.Count(readers.Blank) && p.Uses(col) {
			most = append(most, col.Title())
		}
		for i := range col.Len() {
			if col.CellKind(i) == readers.Uncached && p.Table.RowFault(i) == "" {
				found.cell(col, i, func() string { return p.Table.Address(col, i) })
			}
		}
	}
	o := found.outcome("no formula lacks its value", func(words string, n int) string {
		return fmt.Sprintf("%s a formula without a stored value: %s; a row without its value is set aside", wording.Count(n, "cell")+holdOrHolds(n), words)
	})
	if len(most) > 0 {
		o.Message += "; they are most of " + wording.List(most)
		o.Denies = p.everyQuestion()
	}
	return o, nil
}
