package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// SpreadsheetErrors asks for error values.
var SpreadsheetErrors = &Rule{
	Name:     "spreadsheet-errors",
	Family:   OfTable,
	Asks:     "Do cells hold error values in place of results?",
	Why:      "An error value hides a measurement or a mistake in a formula, and other cells may rest on the same formula.",
	Method:   "lists the error cells of a workbook, and in text the words that spreadsheets write for them (#DIV/0!, #N/A, rows of #)",
	Limit:    "one such cell in a column in use; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendCells},
	Run:      spreadsheetErrors,
}

func spreadsheetErrors(p *Pass) (Outcome, error) {
	found := p.tally()
	for _, col := range p.Table.Columns {
		if col.Count(readers.Fault) == 0 {
			continue
		}
		for i := range col.Len() {
			if col.CellKind(i) == readers.Fault && p.Table.RowFault(i) == "" {
				found.cell(col, i, func() string { return p.Table.Address(col, i) + " " + col.Cell(i).Text })
			}
		}
	}
	return found.outcome("no cell holds an error value", func(words string, n int) string {
		return fmt.Sprintf("%s an error value: %s; a row without its value is set aside", wording.Count(n, "cell")+holdOrHolds(n), words)
	}), nil
}

func holdOrHolds(n int) string {
	if n == 1 {
		return " holds"
	}
	return " hold"
}
