package rules

import (
	"fmt"
	"strings"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MixedContent asks for cells that are no numbers in columns of numbers.
var MixedContent = &Rule{
	Name:   "mixed-content",
	Family: OfTable,
	Asks:   "Does a column of numbers hold cells that are not numbers?",
	Why:    "Such a cell was meant as a measurement; without it the answers rest on fewer rows than its owner believes.",
	Method: "reads each cell of a column of which more than half are numbers; text that is neither number nor code for a missing value is listed, " +
		"with the number that it would be without a unit or with digits for letters that look like them; " +
		"so are merged cells across columns or in a column of numbers, of which only the first holds the value",
	Limit:    "one such cell; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendCells},
	Run:      mixedContent,
}

func mixedContent(p *Pass) (Outcome, error) {
	found := p.tally()
	for _, col := range p.asNumbers() {
		for _, i := range p.strangers(col, other) {
			found.cell(col, i, func() string { return p.strangeWords(col, i) })
		}
	}
	for _, m := range p.Table.Reading.Merged {
		if !m.Filled && !m.Title {
			p.mergedCells(found, m.Range)
		}
	}
	return found.outcome("every cell of the number columns is a number or missing", func(words string, n int) string {
		return fmt.Sprintf("%s in a column of numbers %s not a number: %s; such a row is set aside", wording.Count(n, "cell"), verb(n), words)
	}), nil
}

// strangeWords shows a cell with what was probably meant.
func (p *Pass) strangeWords(col *readers.Column, i int) string {
	cell := col.Cell(i)
	said := fmt.Sprintf("%s %q", p.Table.Address(col, i), cell.Text)
	decimal := p.decimal()
	meant, letters := digitsForLetters(cell.Text, decimal)
	_, unit, measure := readers.ParseMeasure(cell.Text, decimal)
	switch {
	case letters && (!measure || hasDigit(unit)):
		return fmt.Sprintf("%s (%s?)", said, meant)
	case measure:
		guess := strings.TrimSpace(strings.TrimSuffix(cell.Text, unit)) + " with the unit " + unit
		if col.Unit != "" && unit != col.Unit {
			guess += ", where the column is in " + col.Unit
		}
		if letters {
			guess += ", or " + meant
		}
		return fmt.Sprintf("%s (%s?)", said, guess)
	}
	return said
}

// mergedCells adds the cells of a merged range that lie in the table.
func (p *Pass) mergedCells(found *tally, merged string) {
	for _, col := range p.Table.Columns {
		var where []Place
		for i := range cellsOf(p.Table, col, merged) {
			where = append(where, Place{Row: i, Column: col})
		}
		if len(where) > 0 {
			found.set(col, where, "the merged cells "+merged)
		}
	}
}

// cellsOf gives the records of a column that lie in a range such as C5:D7.
func cellsOf(t *readers.Table, col *readers.Column, merged string) func(yield func(int) bool) {
	return func(yield func(int) bool) {
		from, to, _ := strings.Cut(merged, ":")
		left, top := splitCell(from)
		right, bottom := splitCell(to)
		if col.Index < left || col.Index > right {
			return
		}
		for row := top; row <= bottom; row++ {
			if i, ok := t.Record(row); ok && !yield(i) {
				return
			}
		}
	}
}

// splitCell reads an address such as C5; the column counts from 0.
func splitCell(address string) (column, row int) {
	for _, c := range []byte(address) {
		switch {
		case c >= 'A' && c <= 'Z':
			column = column*26 + int(c-'A') + 1
		case c >= '0' && c <= '9':
			row = row*10 + int(c-'0')
		}
	}
	return column - 1, row
}

// decimal is the decimal sign of the file.
func (p *Pass) decimal() byte {
	if p.Table.Reading.Decimal == "," {
		return ','
	}
	return '.'
}

// digitsForLetters reads a number in which letters stand for the digits that
// they look like, and at least one digit is itself.
func digitsForLetters(text string, decimal byte) (meant string, ok bool) {
	if !hasDigit(text) {
		return "", false
	}
	meant = strings.Map(func(r rune) rune {
		switch r {
		case 'O', 'o', 'О', 'о', 'Ο', 'ο':
			return '0'
		case 'l', 'I', 'i', '|', 'І', 'і':
			return '1'
		case 'Z', 'z':
			return '2'
		case 'S', 's', 'Ѕ':
			return '5'
		case 'B', 'В':
			return '8'
		}
		return r
	}, text)
	if meant == text {
		return "", false
	}
	_, ok = readers.ParseNumber(meant, decimal)
	return meant, ok
}

func verb(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}
