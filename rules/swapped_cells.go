package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// SwappedCells asks for cells that stand in each other's column.
var SwappedCells = &Rule{
	Name:   "swapped-cells",
	Family: OfTable,
	Asks:   "Do two cells stand in each other's column?",
	Why:    "A row whose two numbers were entered the wrong way round lies far off both columns and pulls the line hard.",
	Method: "looks for rows whose number lies outside the bulk of its column (1.5 times the middle half's width beyond it) and inside the bulk of another, whose number lies inside the first in turn; " +
		"and for two columns of labels that hold one set of labels in different orders, as lists pasted side by side do",
	Limit:    "one such row; in sound tables a number far off one way would have to meet one far off the other way in the same row, which was not seen",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.SwapBack, remedy.ApartAgain},
	Run:      swappedCells,
}

func swappedCells(p *Pass) (Outcome, error) {
	found := p.tally()
	var changes []model.Change
	var doubted []Place
	columns := p.measured()
	for i, a := range columns {
		for k := i + 1; k < len(columns) && k <= i+mostBefore; k++ {
			b := columns[k]
			for _, row := range p.swapped(a, b) {
				v, _ := a.Number(row)
				w, _ := b.Number(row)
				where := []Place{{Row: row, Column: a}, {Row: row, Column: b}}
				side := a
				if !p.Uses(a) {
					side = b
				}
				found.set(side, where, fmt.Sprintf("%s is %s and %s is %s", p.Table.Address(a, row), wording.Number(v), p.Table.Address(b, row), wording.Number(w)))
				if p.Uses(side) {
					doubted = append(doubted, where...)
				}
				changes = append(changes, model.Change{Row: row, Column: a, Value: w}, model.Change{Row: row, Column: b, Value: v})
			}
		}
	}
	o := found.outcome("no two cells stand in each other's column", func(words string, _ int) string {
		return words + ": each fits the other's column and not its own; entered the wrong way round?"
	})
	o.Target.Values = p.changes(changes)
	o.Target.Rows = p.target(doubted)
	p.pastedLists(&o)
	return o, nil
}

// swapped lists the rows in which a's number fits b and b's fits a, and neither
// its own column.
func (p *Pass) swapped(a, b *readers.Column) []int {
	f, g := p.Profile(a), p.Profile(b)
	if len(f.Values) < 8 || len(g.Values) < 8 || f.Distinct < 3 || g.Distinct < 3 {
		return nil
	}
	aLow, aHigh := f.fences()
	bLow, bHigh := g.fences()
	inside := func(v, low, high float64) bool { return v >= low && v <= high }
	var rows []int
	for k, v := range f.Values {
		if inside(v, aLow, aHigh) || !inside(v, bLow, bHigh) {
			continue
		}
		w, ok := b.Number(f.Rows[k])
		if ok && !inside(w, bLow, bHigh) && inside(w, aLow, aHigh) {
			rows = append(rows, f.Rows[k])
		}
	}
	if 5*len(rows) > len(f.Values) {
		return nil // so many make two kinds of rows, and no slips
	}
	return rows
}

// fences enclose the bulk: 1.5 times the width of the middle half beyond it.
func (f *Profile) fences() (low, high float64) {
	q1, q3 := f.Quantile(0.25), f.Quantile(0.75)
	return q1 - 1.5*(q3-q1), q3 + 1.5*(q3-q1)
}

// fewestPasted is the number of labels from which two columns of them are taken
// for lists of the same things.
const fewestPasted = 5

// pastedLists adds two columns that name the same things in different orders.
func (p *Pass) pastedLists(o *Outcome) {
	var lists []*readers.Column
	for _, col := range p.Table.Columns {
		if col.Kind() != readers.TextColumn {
			continue // the labels of a million numbers cost more than they tell
		}
		if names, _ := col.Levels(); len(names) >= fewestPasted && 2*len(names) >= col.Len() {
			lists = append(lists, col)
		}
	}
	for i, a := range lists {
		for _, b := range lists[i+1:] {
			apart := pastedApart(a, b)
			if len(apart) == 0 {
				continue
			}
			said := fmt.Sprintf("%s and %s hold the same labels in different orders (%s): lists pasted side by side? What stands in one row then belongs to two things",
				a.Title(), b.Title(), wording.Count(len(apart), "row"))
			if o.Answer == Breach {
				o.Message += "; " + said
			} else {
				o.Answer, o.Message, o.Where = Breach, said, nil
			}
			for _, row := range apart {
				o.Where = append(o.Where, Place{Row: row, Column: a}, Place{Row: row, Column: b})
			}
		}
	}
}

// pastedApart lists the rows in which two columns with one set of labels differ;
// none when the sets are not nearly one.
func pastedApart(a, b *readers.Column) []int {
	names, codes := a.Levels()
	others, theirs := b.Levels()
	known := make(map[string]bool, len(names))
	for _, name := range names {
		known[name] = true
	}
	shared := 0
	for _, name := range others {
		if known[name] {
			shared++
		}
	}
	if 10*shared < 9*max(len(names), len(others)) {
		return nil
	}
	var rows []int
	for i := range codes {
		if codes[i] >= 0 && theirs[i] >= 0 && names[codes[i]] != others[theirs[i]] {
			rows = append(rows, i)
		}
	}
	return rows
}
