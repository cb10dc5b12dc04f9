package readers

import (
	"math"
	"math/bits"
	"slices"
	"sort"
	"strconv"
	"strings"
	"sync"
)

// Table is the table found in a file. Its records are the rows under the header
// that are measurements by their shape; rows that are not (titles, a header once
// more, totals, notes) are in Reading and have no index. A row that can't be used
// because its fields don't match the header keeps its index and has a RowFault.
//
// A Table is not changed once it is made; its methods may be called from several
// goroutines.
type Table struct {
	File      string
	Sheet     string // empty for text files
	Format    Format
	SHA256    string // of the whole file, in hexadecimal
	HeaderRow int    // line or sheet row of the header, 0 when there is none
	Columns   []*Column
	Reading   Reading

	grid    *grid
	length  int
	first   int     // grid record of the first, when index is nil
	index   []int32 // grid record by record
	faults  map[int]string
	isFault []uint64 // bit by record, nil when there are no faults
}

// Len gives the number of records, those with a RowFault included.
func (t *Table) Len() int { return t.length }

// at gives the grid's record of a record of the table.
func (t *Table) at(row int) int {
	if t.index != nil {
		return int(t.index[row])
	}
	if uint(row) >= uint(t.length) {
		panic("readers: record " + strconv.Itoa(row) + " of " + strconv.Itoa(t.length))
	}
	return t.first + row
}

// Row gives the line of the file on which record i starts, or its sheet row,
// counted from 1.
func (t *Table) Row(i int) int { return t.grid.lines.at(t.at(i)) }

// Record gives the index of the record that starts on a line or sheet row; ok is
// false when no record of the table does.
func (t *Table) Record(row int) (i int, ok bool) {
	return sort.Find(t.length, func(i int) int { return row - t.Row(i) })
}

// Address gives a cell as spreadsheets name it, such as C18; for a text file too,
// where the number is the line.
func (t *Table) Address(col *Column, i int) string { return Address(col.Index, t.Row(i)) }

// Pos gives the position of a cell.
func (t *Table) Pos(col *Column, i int) Pos {
	return Pos{File: t.File, Sheet: t.Sheet, Row: t.Row(i), Column: col.Index + 1}
}

// RowFault says why record i can't be used as a whole, "" when it can. Cell still
// gives what stands in such a row; Number, Ordinal and Label are false there.
func (t *Table) RowFault(i int) string { return t.faults[i] }

// faulty is RowFault for those who ask for every cell.
func (t *Table) faulty(row int) bool {
	return t.isFault != nil && t.isFault[row>>6]>>(uint(row)&63)&1 != 0
}

// Faults gives the indexes of the records with a RowFault, in order.
func (t *Table) Faults() []int {
	var out []int
	for i, w := range t.isFault {
		for ; w != 0; w &= w - 1 {
			out = append(out, i<<6+bits.TrailingZeros64(w))
		}
	}
	return out
}

// Kind says what a column holds.
type Kind uint8

// The kinds of a column. A column is of the kind that more than half of its
// filled cells have, missing codes left out; error values and formulas without a
// value count as numbers, since that is what they stand for.
const (
	EmptyColumn Kind = iota
	NumberColumn
	TextColumn
	DateColumn
	BoolColumn
	MixedColumn
)

// String gives "number", "text", "date", "bool", "empty" or "mixed".
func (k Kind) String() string {
	switch k {
	case EmptyColumn:
		return "empty"
	case NumberColumn:
		return "number"
	case TextColumn:
		return "text"
	case DateColumn:
		return "date"
	case BoolColumn:
		return "bool"
	case MixedColumn:
		return "mixed"
	}
	return "unknown"
}

// Column is one column of a table.
type Column struct {
	Header string // the whole header, line breaks as spaces; "" when the column has no name
	Name   string // the header without the unit
	Unit   string // from the header, or from a row of units under it, or from every cell
	Index  int    // place in the file or sheet, from 0
	Hidden bool

	table  *Table
	store  *store
	kind   Kind
	counts [declaredCode + 1]int
	marked Mark
	labels func() labels
}

// Letter gives the column's letter in the file or sheet.
func (c *Column) Letter() string { return Letter(c.Index) }

// Title gives the name to show: Name, or the letter of a column without a name.
func (c *Column) Title() string {
	if c.Name == "" {
		return c.Letter()
	}
	return c.Name
}

// Kind says what the column holds.
func (c *Column) Kind() Kind { return c.kind }

// Len gives the number of records, as Table.Len does.
func (c *Column) Len() int { return c.table.length }

// Count gives the number of records whose cell is of a kind, without the records
// that have a RowFault.
func (c *Column) Count(kind CellKind) int {
	switch kind {
	case Text:
		return c.counts[Text] + c.counts[measureText] + c.counts[otherSignText]
	case Code:
		return c.counts[Code] + c.counts[declaredCode]
	}
	return c.counts[kind]
}

// CellKind gives the kind of one cell; it is much cheaper than Cell.
func (c *Column) CellKind(row int) CellKind {
	return CellKind(c.store.kind(c.table.at(row)) & kindMask).public()
}

// Style gives what a workbook shows of one cell beside its value; it is much
// cheaper than Cell.
func (c *Column) Style(row int) Style {
	if n := int(c.store.style(c.table.at(row))); n < len(c.table.grid.styles) {
		return c.table.grid.styles[n]
	}
	return Style{}
}

// Cell gives one cell. It makes strings, so ask for what you show, not for every
// cell of a long column.
func (c *Column) Cell(row int) Cell {
	at := c.table.at(row)
	g, s := c.table.grid, c.store
	stored, form := s.kind(at), s.form(at)
	kind := CellKind(stored & kindMask)
	cell := Cell{
		Kind: kind.public(), Number: math.NaN(), Decimals: c.Decimals(row),
		TextNumber: stored&markText != 0,
		Formula:    stored&markResult != 0,
		Filled:     stored&markFilled != 0,
		Thousands:  form&formThousands != 0,
		Padded:     form&formPadded != 0,
		Declared:   kind == declaredCode,
		Hidden:     c.Hidden || g.facts.hides(g.lines.at(at)),
	}
	cell.Style = c.Style(row)
	if stored&markWord != 0 {
		cell.Text = s.words.text(s.word(at))
	}
	switch kind {
	case Number, declaredCode:
		cell.Number = s.value(at)
		if cell.Text == "" {
			cell.Text = numberText(cell.Number, form, g.decimal)
		}
		if form&formUnit != 0 {
			cell.Unit = c.Unit
		}
	case Date, Bool:
		cell.Number = s.value(at)
		if stored&markWord != 0 {
			cell.Number = wordOrdinal(kind, cell.Text)
		} else if kind == Date {
			cell.Text = dateText(cell.Number)
		} else {
			cell.Text = boolText(cell.Number)
		}
	case Text, measureText, otherSignText:
		cell.Look = lookOf(cell.Text, g.decimal)
	}
	return cell
}

// decimalsOf counts the decimals of a number as it was written, or those of its
// value rounded to 15 digits when only the value is known.
func decimalsOf(v float64, form, stored uint8) int {
	if d := form & decimalsMask; d != decimalsOpen {
		return int(d)
	}
	if stored&markWord != 0 && stored&markText == 0 {
		return -1
	}
	var buf [40]byte
	out := strconv.AppendFloat(buf[:0], v, 'e', 14, 64)
	e := slices.Index(out, 'e')
	exponent, _ := strconv.Atoi(string(out[e+1:]))
	digits := out[:e]
	for len(digits) > 1 && (digits[len(digits)-1] == '0' || digits[len(digits)-1] == '.') {
		digits = digits[:len(digits)-1]
	}
	n := len(digits)
	if digits[0] == '-' {
		n--
	}
	if n > 1 {
		n -= 2 // the first digit and the point
	} else {
		n = 0
	}
	return max(0, n-exponent)
}

// decimalsIn counts the digits after the decimal sign in the text of a number that
// has more of them than the form can hold; -1 with an exponent.
func decimalsIn(text string, decimal byte) int {
	_, fraction, _ := strings.Cut(text, string(decimal))
	n := 0
	for n < len(fraction) && fraction[n] >= '0' && fraction[n] <= '9' {
		n++
	}
	if n < len(fraction) && fraction[n]|0x20 == 'e' || fraction == "" && strings.ContainsAny(text, "eE") {
		return -1
	}
	return n
}

func boolText(v float64) string {
	if v != 0 {
		return "TRUE"
	}
	return "FALSE"
}

// wordOrdinal gives the number that stands for a date or a truth value in text.
func wordOrdinal(kind CellKind, text string) float64 {
	if kind == Bool {
		if equalFold(text, "true") {
			return 1
		}
		return 0
	}
	v, ok := readDate(text)
	if !ok {
		return math.NaN()
	}
	return v
}

// Number gives the value of a cell; ok is false unless it is a usable number in a
// row without a fault. A number that the owner declared to be a missing code is
// none; one that only looks like a code is a number.
func (c *Column) Number(row int) (value float64, ok bool) {
	at := c.table.at(row)
	p, k := c.store.cellAt(at)
	if p == nil || k >= len(p.kind) || CellKind(p.kind[k]&kindMask) != Number || c.table.faulty(row) {
		return math.NaN(), false
	}
	return p.value[k], true
}

// Ordinal gives a value to put rows in order by: the number of a Number, the day
// of a Date, 0 or 1 for a Bool. ok is false for all else, for dates that leave
// the day open, and in rows with a fault.
func (c *Column) Ordinal(row int) (value float64, ok bool) {
	if v, ok := c.Number(row); ok {
		return v, true
	}
	switch c.CellKind(row) {
	case Date, Bool:
		v := c.Cell(row).Number
		return v, !math.IsNaN(v) && !c.table.faulty(row)
	}
	return math.NaN(), false
}

// Label gives a cell as a label. Numbers are written in their shortest form, so
// that 3, 3.0 and the text "3" are one label; texts are as in the file. ok is
// false for a blank, a missing code, an error value, a formula without a value,
// and in rows with a fault.
func (c *Column) Label(row int) (label string, ok bool) {
	at := c.table.at(row)
	stored := c.store.kind(at)
	if c.table.faulty(row) {
		return "", false
	}
	switch kind := CellKind(stored & kindMask); kind {
	case Number:
		return c.numberLabel(at, stored), true
	case Text, measureText, otherSignText, Date, Bool:
		if stored&markWord != 0 {
			return c.store.words.text(c.store.word(at)), true
		}
		if kind == Date {
			return dateText(c.store.value(at)), true
		}
		return boolText(c.store.value(at)), true
	}
	return "", false
}

// numberLabel writes a number as a label. Digits with a zero before them (007) and
// numbers with a unit keep their text: they are names or say more than the value.
func (c *Column) numberLabel(at int, stored uint8) string {
	if stored&markWord != 0 {
		text := c.store.words.text(c.store.word(at))
		if c.store.form(at)&formUnit != 0 || len(text) > 1 && text[0] == '0' && text[1] >= '0' && text[1] <= '9' {
			return text
		}
	}
	v := c.store.value(at)
	if v == 0 {
		v = 0 // -0 is 0
	}
	return numberText(v, decimalsOpen, c.table.grid.decimal)
}

type labels struct {
	names []string
	codes []int32
}

// Levels gives the distinct labels of the column in the order of their first
// record, and for each record the index of its label, -1 where it has none. Both
// slices are shared: don't change them.
func (c *Column) Levels() (names []string, codes []int32) {
	l := c.labels()
	return l.names, l.codes
}

func (c *Column) makeLabels() labels {
	l := labels{codes: make([]int32, c.Len())}
	known := map[string]int32{}
	// Most cells repeat a text of the dictionary; its label is looked up once.
	byWord := make([]int32, c.store.words.len())
	for row := range l.codes {
		at := c.table.at(row)
		stored := c.store.kind(at)
		word := -1
		if stored&markWord != 0 && !c.table.faulty(row) {
			word = int(c.store.word(at))
			if n := byWord[word]; n > 0 {
				l.codes[row] = n - 1
				continue
			}
		}
		name, ok := c.Label(row)
		if !ok {
			l.codes[row] = -1
			continue
		}
		n, ok := known[name]
		if !ok {
			n = int32(len(l.names))
			known[name] = n
			l.names = append(l.names, name)
		}
		if word >= 0 {
			byWord[word] = n + 1
		}
		l.codes[row] = n
	}
	return l
}

// settle counts the kinds of a column's cells and decides its own.
func (c *Column) settle() {
	c.counts = [declaredCode + 1]int{}
	t := c.table
	if t.index == nil && t.isFault == nil {
		c.countWhole()
	} else {
		for row := range t.length {
			at := t.at(row)
			k := c.store.kind(at)
			c.mark(k, c.store.form(at))
			if !t.faulty(row) {
				c.counts[k&kindMask]++
			}
		}
	}
	c.kind = kindOf(&c.counts)
	c.labels = sync.OnceValue(c.makeLabels)
}

// countWhole counts a column whose records lie together, piece by piece.
func (c *Column) countWhole() {
	first, end := c.table.first, c.table.first+c.table.length
	filled := 0
	for i, p := range c.store.pieces {
		if p == nil {
			continue
		}
		from := i * pieceLen
		for at := max(first, from); at < min(end, from+len(p.kind)); at++ {
			k := p.kind[at-from]
			form := uint8(0)
			if at-from < len(p.form) {
				form = p.form[at-from]
			}
			c.mark(k, form)
			c.counts[k&kindMask]++
			filled++
		}
	}
	c.counts[Blank] += c.table.length - filled
}

// mark notes the marks of one cell of the column.
func (c *Column) mark(stored, form uint8) {
	if stored&^(kindMask|markWord) != 0 || form&^decimalsMask != 0 || stored&kindMask == uint8(declaredCode) {
		c.marked |= marksOf(stored, form)
	}
}

func kindOf(n *[declaredCode + 1]int) Kind {
	filled := 0
	for k, v := range n {
		switch CellKind(k) {
		case Blank, Code, declaredCode:
		default:
			filled += v
		}
	}
	more := func(v int) bool { return 2*v > filled }
	switch {
	case filled == 0:
		return EmptyColumn
	case more(n[Number] + n[Fault] + n[Uncached]):
		return NumberColumn
	case more(n[Date]):
		return DateColumn
	case more(n[Bool]):
		return BoolColumn
	case more(n[Text] + n[measureText] + n[otherSignText]):
		return TextColumn
	}
	return MixedColumn
}
