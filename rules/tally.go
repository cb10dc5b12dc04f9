package rules

import (
	"slices"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/wording"
)

// tally collects the cells that a rule names, those of the columns in use apart
// from the others: what stands in a column that nobody uses is told and never
// warned of.
type tally struct {
	p      *Pass
	used   pile
	unused pile
}

// pile is one side of a tally: places in the order found, and words for some.
type pile struct {
	where []Place
	said  []string
	total int
}

// mostSaid is how many cells a message names; the others are in Where.
const mostSaid = 5

func (p *Pass) tally() *tally { return &tally{p: p} }

// side gives the pile of a column.
func (t *tally) side(col *readers.Column) *pile {
	if t.p.Uses(col) {
		return &t.used
	}
	return &t.unused
}

// cell adds one cell. The words are asked for only while they will be shown.
func (t *tally) cell(col *readers.Column, row int, words func() string) {
	pile := t.side(col)
	pile.where = append(pile.where, Place{Row: row, Column: col})
	pile.count(words)
}

// set adds cells that are one finding together.
func (t *tally) set(col *readers.Column, where []Place, words string) {
	pile := t.side(col)
	pile.where = append(pile.where, where...)
	pile.count(func() string { return words })
}

func (s *pile) count(words func() string) {
	s.total++
	if len(s.said) < mostSaid {
		s.said = append(s.said, words())
	}
}

// words lists what was said, and how many more there are.
func (s *pile) words() string {
	if s.total > len(s.said) {
		return wording.Some(append(s.said[:len(s.said):len(s.said)], make([]string, s.total-len(s.said))...), len(s.said))
	}
	return wording.List(s.said)
}

// outcome makes a breach of what was found in columns in use, a note of what
// was found elsewhere, and quiet of nothing. alarm is given the words of the
// cells and their number.
func (t *tally) outcome(quiet string, alarm func(words string, n int) string) Outcome {
	switch {
	case t.used.total > 0:
		o := breach(alarm(t.used.words(), len(t.used.where)))
		o.Where = t.used.where
		if t.unused.total > 0 {
			o.Message += "; also in columns that are not used: " + t.unused.words()
		}
		return o
	case t.unused.total > 0:
		o := sound("only in columns that are not used: " + t.unused.words())
		o.Where = t.unused.where
		return o
	}
	return sound(quiet)
}

// Uses reports whether a column has a role; without roles all are in use.
func (p *Pass) Uses(col *readers.Column) bool {
	return p.Design == nil || p.Columns.RoleOf(col) != ""
}

// asNumbers lists the columns that hold numbers and are taken as numbers: not
// the group, the subject or the label.
func (p *Pass) asNumbers() []*readers.Column {
	var all []*readers.Column
	for _, col := range p.Table.Columns {
		if col.Kind() == readers.NumberColumn && col != p.Columns.Group && col != p.Columns.Subject && col != p.Columns.Label {
			all = append(all, col)
		}
	}
	return all
}

// measured lists the columns of numbers whose values rules may doubt: not the
// order, nor numbers that only count the rows.
func (p *Pass) measured() []*readers.Column {
	var all []*readers.Column
	for _, col := range p.asNumbers() {
		if col != p.Columns.Order && !p.counts(col) {
			all = append(all, col)
		}
	}
	return all
}

// counts tells a column without a role that only counts the rows.
func (p *Pass) counts(col *readers.Column) bool {
	return p.Columns.RoleOf(col) == "" && countsRows(col, p.Profile(col))
}

// mayBeSet reports whether a column's numbers were set by design, which the
// response's are not.
func (p *Pass) mayBeSet(col *readers.Column) bool {
	return col != p.Columns.Response && p.Profile(col).Set
}

// target names the used rows at these places as what remedies act on.
func (p *Pass) target(where []Place) []int {
	if p.Design == nil {
		return nil
	}
	rows := make([]int, len(where))
	for k, w := range where {
		rows[k] = w.Row
	}
	return p.Design.RowsAt(rows)
}

// changes leaves of numbers to be replaced those that a fit would use.
func (p *Pass) changes(all []model.Change) []model.Change {
	if p.Design == nil {
		return nil
	}
	var used []model.Change
	for _, c := range all {
		if len(p.Design.RowsAt([]int{c.Row})) > 0 && p.fitted(c.Column) {
			used = append(used, c)
		}
	}
	return used
}

// fitted reports whether a column enters the fit.
func (p *Pass) fitted(col *readers.Column) bool {
	switch p.Columns.RoleOf(col) {
	case "response", "predictor", "covariate", "group":
		return true
	}
	return false
}

// toldElsewhere gives the rows whose number in a column another rule doubts for
// a reason that makes it lie far out: a code, the number of a day, a cell of
// another column.
func (p *Pass) toldElsewhere(col *readers.Column) map[int]bool {
	told := map[int]bool{}
	f := p.Profile(col)
	codes := suspectedCodes(f, p.mayBeSet(col))
	for k, v := range f.Values {
		if slices.Contains(codes, v) {
			told[f.Rows[k]] = true
		}
	}
	for _, i := range serials(f) {
		told[i] = true
	}
	for _, other := range p.measured() {
		if other == col {
			continue
		}
		for _, i := range p.swapped(col, other) {
			told[i] = true
		}
	}
	return told
}
