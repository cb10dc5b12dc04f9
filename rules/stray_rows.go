package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// StrayRows asks for rows within, below and beside the table that are no
// measurements.
var StrayRows = &Rule{
	Name:   "stray-rows",
	Family: OfTable,
	Asks:   "Are there rows in the sheet that are no measurements?",
	Why:    "A total or mean taken for a measurement pulls the line; a measurement taken for a total is lost.",
	Method: "lists headers that stand again, totals and means (by their word, or by arithmetic over the rows above), notes, and rows of other tables; none of them is used",
	Limit:  "a row that is not used although it fills the columns that measurements fill, or rows under a header in another order; footers and notes are only told. No chance is involved",
	Needs:  NeedsTable, Remedies: []*remedy.Remedy{remedy.CheckStray},
	Run: strayRows,
}

func strayRows(p *Pass) (Outcome, error) {
	stray := p.Table.Reading.Stray
	if len(stray) == 0 {
		return sound("every row under the header is a measurement"), nil
	}
	var where []Place
	var doubted, told []string
	for _, s := range stray {
		where = append(where, Place{Row: -1, Stray: s.Row})
		said := strayWords(s)
		if p.looksMeasured(s) {
			doubted = append(doubted, said)
		} else {
			told = append(told, said)
		}
	}
	o := sound("not used: " + wording.Some(told, mostSaid))
	if len(doubted) > 0 {
		o = breach("not used, but perhaps measurements: " + wording.Some(doubted, mostSaid))
		if len(told) > 0 {
			o.Message += "; not used either: " + wording.Some(told, mostSaid)
		}
	}
	o.Where = where
	return o, nil
}

func strayWords(s readers.Stray) string {
	word := s.Kind.String()
	if s.Word != "" {
		word = s.Word
	}
	if s.Beside {
		word = "another table beside this one"
	}
	return fmt.Sprintf("row %d (%s)", s.Row, word)
}

// looksMeasured reports whether a row that is not used may hold measurements:
// it has a label and numbers in the columns that measurements fill, or stands
// under a header in another order. A sum of the rows above says what it is.
func (p *Pass) looksMeasured(s readers.Stray) bool {
	switch s.Kind {
	case readers.OtherOrder, readers.UnderOther:
		return true
	case readers.Summary, readers.OtherTable:
	default:
		return false
	}
	if s.Beside {
		return false
	}
	labels, numbers := 0, 0
	for _, col := range p.Table.Columns {
		filled := col.Len() - col.Count(readers.Blank)
		if 10*filled < 9*col.Len() {
			continue
		}
		if col.Index >= len(s.Cells) || s.Cells[col.Index] == "" {
			return false
		}
		_, number := readers.ParseNumber(s.Cells[col.Index], p.decimal())
		switch {
		case col.Kind() == readers.NumberColumn && !number:
			return false
		case number:
			numbers++
		default:
			labels++
		}
	}
	return labels > 0 && numbers > 0
}
