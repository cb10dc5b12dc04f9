package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// NumberFormat asks for numbers written unlike the others of their column.
var NumberFormat = &Rule{
	Name:   "number-format",
	Family: OfTable,
	Asks:   "Is a number written unlike the others of its column?",
	Why:    "Programs disagree about such a number: one drops it, another reads 6,4 as 64, and the answers differ with the program.",
	Method: "lists cells with the other decimal sign, beyond the range of doubles, infinite, or in a form that only some programs read; these are not used. " +
		"Numbers that a workbook holds as text among true numbers are listed too, and used",
	Limit:    "one such cell; text that is a plain number raises no alarm by itself. No chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendCells},
	Run:      numberFormat,
}

func numberFormat(p *Pass) (Outcome, error) {
	found, plain := p.tally(), p.tally()
	for _, col := range p.asNumbers() {
		for _, i := range p.strangers(col, written) {
			found.cell(col, i, func() string { return p.formatWords(col, i) })
		}
		for _, i := range textNumbers(p.Table, col) {
			plain.cell(col, i, func() string { return p.Table.Address(col, i) })
		}
	}
	o := found.outcome("every number is written like the others of its column", func(words string, n int) string {
		return fmt.Sprintf("%s %s written unlike %s column: %s; such a row is set aside", wording.Count(n, "number"), verb(n), its(n), words)
	})
	if n := plain.used.total + plain.unused.total; n > 0 {
		words := append(plain.used.said, plain.unused.said...)
		said := fmt.Sprintf("%s held as text, read as the plain numbers that they are: %s", wording.Count(n, "number")+isAre(n), wording.Some(words, mostSaid))
		if len(o.Where) == 0 {
			o.Message = said
		} else {
			o.Message += "; " + said
		}
		o.Where = append(append(o.Where, plain.used.where...), plain.unused.where...)
	}
	return o, nil
}

func its(n int) string {
	if n == 1 {
		return "its"
	}
	return "their"
}

// formatWords shows a cell with what is wrong with it.
func (p *Pass) formatWords(col *readers.Column, i int) string {
	cell := col.Cell(i)
	said := fmt.Sprintf("%s %q", p.Table.Address(col, i), cell.Text)
	switch cell.Look {
	case readers.OtherSign:
		sign := "comma"
		if p.decimal() == ',' {
			sign = "point"
		}
		return said + " (a decimal " + sign + "?)"
	case readers.OutOfRange:
		return said + " (beyond what a number can hold)"
	case readers.Infinite:
		return said + " (infinite)"
	}
	return said + " (a form that only some programs read)"
}

// textNumbers lists the cells that a workbook holds as text among true numbers;
// none when the whole column is text.
func textNumbers(t *readers.Table, col *readers.Column) []int {
	if t.Format != readers.Workbook || col.Count(readers.Number) == 0 {
		return nil
	}
	var rows []int
	for i := range col.Len() {
		if col.CellKind(i) == readers.Number && col.Cell(i).TextNumber {
			rows = append(rows, i)
		}
	}
	if len(rows) == col.Count(readers.Number) {
		return nil
	}
	return rows
}
