package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MixedContent asks for cells that are no numbers in columns of numbers.
var MixedContent = &Rule{
	Name:     "mixed-content",
	Family:   OfTable,
	Asks:     "Does a column of numbers hold cells that are not numbers?",
	Why:      "Such a cell was meant as a measurement; without it the answers rest on fewer rows than its owner believes.",
	Method:   "reads each cell of a column of which more than half are numbers; text that is neither number nor code for a missing value is listed",
	Limit:    "one such cell; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendCells},
	Run:      mixedContent,
}

func mixedContent(p *Pass) (Outcome, error) {
	var where []Place
	var shown []string
	for _, col := range p.Asked() {
		if col.Kind() != readers.NumberColumn || col == p.Columns.Group || col == p.Columns.Subject || col == p.Columns.Label {
			continue
		}
		for i := range col.Len() {
			if p.Table.RowFault(i) != "" || !strange(col.Cell(i).Kind) {
				continue
			}
			where = append(where, Place{Row: i, Column: col})
			shown = append(shown, fmt.Sprintf("%s %q", p.Table.Address(col, i), col.Cell(i).Text))
		}
	}
	if len(where) == 0 {
		return sound("every cell of the number columns is a number or missing"), nil
	}
	o := breach(fmt.Sprintf("%s in a column of numbers %s not a number: %s; these rows are set aside",
		wording.Count(len(where), "cell"), verb(len(where)), wording.Some(shown, 5)))
	o.Where = where
	return o, nil
}

// strange tells a cell that holds something, but no number.
func strange(k readers.CellKind) bool {
	switch k {
	case readers.Number, readers.Blank, readers.Code:
		return false
	}
	return true
}

func verb(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}
