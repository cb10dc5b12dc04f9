package readers

import (
	"slices"
)

// body sorts the records under the header: which are records of the table, and
// what the others are.
type body struct {
	*layout
	columns []int // grid columns of the table
	numeric []int // those that are numbers
	labels  []int // those that are text
	must    []int // label columns that are filled in nearly every row that is no sum
	fate    []fate
	stray   []Stray
	units   map[int]string  // from the row of units, by grid column
	names   map[string]bool // of the header, as foldName makes them
	forms   map[int]*labelForms
	marks   []uint8         // by record, see markRows
	levels  map[[2]int]bool // by column and word, see isLevel
	figures *figures
}

// fate of a record under the header.
type fate uint8

const (
	keep fate = iota
	drop      // blank, a remark, or stray
)

// table makes the table once the header is known.
func (l *layout) table() (*Table, error) {
	b := &body{layout: l}
	b.chooseColumns()
	b.fate = make([]fate, l.g.records)
	b.passComments()
	b.titles()
	b.unitsRow()
	b.sortColumns()
	b.fillMerged()
	b.sortRows()
	return b.build()
}

// chooseColumns takes the columns that have a name or hold something under the
// header, without those of a table beside this one.
func (b *body) chooseColumns() {
	all := b.layout.columns
	var columns []int
	for _, c := range all {
		if b.name(c) != "" || b.holdsAny(c) {
			columns = append(columns, c)
		}
	}
	columns = b.withinHeader(columns)
	b.columns = b.splitRepeated(b.splitBeside(columns))
}

// withinHeader leaves out the columns of a text file that lie beyond the fields of
// the header: what stands there makes a row uneven, no column.
func (b *body) withinHeader(columns []int) []int {
	if b.g.sheet != "" || b.header < 0 {
		return columns
	}
	n := b.g.fields.at(b.header)
	if b.opt.Range != "" {
		return columns
	}
	return slices.DeleteFunc(slices.Clone(columns), func(c int) bool { return c >= n })
}

// holdsAny tells whether a column has a cell under the header.
func (b *body) holdsAny(c int) bool {
	s := b.g.seek(c)
	found := false
	s.kinds(func(first int, kinds []uint8) {
		for r := max(b.first, first); r < min(b.end, first+len(kinds)) && !found; r++ {
			found = kinds[r-first] != 0 && !b.g.isComment(r)
		}
	})
	return found
}

// extent of a group of columns: how many records have something in it, and how
// far down.
type extent struct {
	rows, last int
	has        []bool
}

func (b *body) extentOf(columns []int) extent {
	e := extent{has: make([]bool, b.end-b.first), last: -1}
	for _, c := range columns {
		b.g.seek(c).kinds(func(first int, kinds []uint8) {
			for r := max(b.first, first); r < min(b.end, first+len(kinds)); r++ {
				if kinds[r-first] != 0 {
					e.has[r-b.first] = true
				}
			}
		})
	}
	for i, has := range e.has {
		if has {
			e.rows++
			e.last = i
		}
	}
	return e
}

// splitBeside parts a table from others that stand beside it after an empty
// column. An empty column alone parts nothing: the groups must differ in the rows
// they fill, or bear the same names.
func (b *body) splitBeside(columns []int) []int {
	groups := gapsBetween(columns)
	if len(groups) < 2 || len(groups) > manyTables {
		return columns
	}
	extents := make([]extent, len(groups))
	for i, g := range groups {
		extents[i] = b.extentOf(g)
	}
	main := 0
	for i := range groups {
		if extents[i].rows > extents[main].rows || extents[i].rows == extents[main].rows && len(groups[i]) > len(groups[main]) {
			main = i
		}
	}
	out := slices.Clone(groups[main])
	for i, g := range groups {
		if i == main {
			continue
		}
		if b.isBeside(g, groups[main], extents[i], extents[main]) {
			b.beside(g)
			continue
		}
		out = append(out, g...)
	}
	slices.Sort(out)
	return out
}

// isBeside tells whether a group of columns is a table of its own.
func (b *body) isBeside(group, main []int, e, m extent) bool {
	names, repeated := 0, 0
	for _, c := range group {
		n := foldName(b.name(c))
		if n == "" {
			continue
		}
		names++
		for _, k := range main {
			if foldName(b.name(k)) == n {
				repeated++
				break
			}
		}
	}
	if names == 0 || repeated == names {
		return true
	}
	// A table of its own is filled from the top and then ends; a sparse column of
	// this table is filled here and there.
	both := 0
	top := 0
	for i, has := range e.has {
		if has && m.has[i] {
			both++
		}
		if has && top < e.rows {
			if seen := i + 1; seen <= e.rows+e.rows/10 {
				top++
			}
		}
	}
	different := 10*both < 9*max(e.rows, m.rows)
	return different && 10*top >= 9*e.rows && e.last+1 < len(e.has)*9/10
}

// splitRepeated parts tables that stand side by side without a gap: the header
// says the same names again from left to right.
func (b *body) splitRepeated(columns []int) []int {
	names := make([]string, len(columns))
	for i, c := range columns {
		names[i] = foldName(b.name(c))
	}
	for k := 2; k+2 <= len(names); k++ {
		again := 0
		for i := k; i < len(names) && names[i] != "" && names[i] == names[i%k]; i++ {
			again++
		}
		if again < 2 || k+again < len(names) {
			continue
		}
		for i := k; i < len(columns); i += k {
			b.beside(columns[i:min(i+k, len(columns))])
		}
		return columns[:k]
	}
	return columns
}

// passComments drops the lines that start with # unless they are rows.
func (b *body) passComments() {
	passed := 0
	var numeric []int
	if len(b.g.comments) > 0 {
		numeric = b.numericColumns()
	}
	for _, r := range b.g.comments {
		record := int(r)
		if record == b.header || record >= b.first && b.isRow(record, numeric) {
			continue
		}
		b.fate[record] = drop
		passed++
	}
	switch {
	case passed == 1:
		b.note("1 line that starts with # was passed over")
	case passed > 1:
		b.note("%s lines that start with # were passed over", count(passed))
	}
}

// isRow tells whether a line that starts with # is a row all the same: it has as
// many fields as the header and numbers where they belong.
func (b *body) isRow(record int, numeric []int) bool {
	if b.header >= 0 && b.g.fields.at(record) != b.g.fields.at(b.header) {
		return false
	}
	numbers := 0
	for _, c := range numeric {
		switch class(b.g.seek(c).kind(record)) {
		case asNumber:
			numbers++
		case asWord:
			return false
		}
	}
	return numbers > 0
}

// unitsRow takes the row under the header for its units, if it is one.
func (b *body) unitsRow() {
	r := b.first
	for r < b.end && (b.fate[r] == drop || b.filled[r] == 0) {
		r++
	}
	if b.header < 0 || r >= b.end || b.numbers[r] > 0 {
		return
	}
	if b.isRuler(r) {
		b.fate[r] = drop
		b.first = r + 1
		b.unitsRow()
		return
	}
	known, other, label := 0, 0, 0
	for _, c := range b.columns {
		text := b.g.text(c, r)
		if text == "" {
			continue
		}
		dash := text == "-" || text == "–"
		switch {
		case class(b.g.seek(c).kind(r)) == asCode && !dash:
			return // a row with a missing value
		case !b.isNumeric(c, r+1, b.end):
			if b.repeats(c, r) {
				return // a label that other rows have
			}
			label++
		case isUnit(text):
			known++
		case dash:
		default:
			other++
			if len([]rune(text)) > 15 {
				return
			}
		}
	}
	// Labels beside the units are forgiven only when the units are known ones, unknown
	// units only when the label columns are blank.
	if known == 0 && (other == 0 || label > 0) || known < other {
		return
	}
	b.fate[r] = drop
	b.units = map[int]string{}
	for _, c := range b.columns {
		if text := b.g.text(c, r); text != "" && text != "-" && text != "–" && b.isNumeric(c, r+1, b.end) {
			b.units[c] = trimBrackets(text)
		}
	}
	b.reading.Titles = append(b.reading.Titles, b.layout.stray(r, UnitsRow, ""))
	b.note("row %d holds units, no data", b.g.lines.at(r))
	b.first = r + 1
}

// isRuler tells whether a record is a line drawn with dashes under the header.
func (b *body) isRuler(r int) bool {
	any := false
	for _, c := range b.layout.columns {
		text := b.g.text(c, r)
		if len(text) == 1 || trimRunes(text, "-=_:+|") != "" {
			return false
		}
		any = any || text != ""
	}
	return any
}

// sortColumns tells number columns from label columns by the rows below.
func (b *body) sortColumns() {
	b.numeric = b.numericColumns()
	for _, c := range b.columns {
		if !slices.Contains(b.numeric, c) {
			b.labels = append(b.labels, c)
		}
	}
}

func (b *body) numericColumns() []int {
	var out []int
	for _, c := range b.columns {
		if b.isNumeric(c, b.first, b.end) {
			out = append(out, c)
		}
	}
	return out
}
