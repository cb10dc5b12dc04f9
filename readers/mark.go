package readers

import "math"

// Mark is a set of what a cell is beside its kind and value; zero is none.
type Mark uint8

// The marks of a cell; Cell has a field for each.
const (
	TextNumber Mark = 1 << iota // a number that a workbook holds as text
	Thousands                   // a number with signs between thousands
	Padded                      // spaces around the text
	Formula                     // the result of a formula, or a formula without one
	Filled                      // a value that holds because cells are merged
	WithUnit                    // a number whose unit was cut off
	Declared                    // a missing code that the owner declared
)

// marksOf reads the marks out of a stored cell.
func marksOf(stored, form uint8) Mark {
	var m Mark
	for _, f := range [...]struct {
		set  bool
		mark Mark
	}{
		{stored&markText != 0, TextNumber},
		{form&formThousands != 0, Thousands},
		{form&formPadded != 0, Padded},
		{stored&markResult != 0, Formula},
		{stored&markFilled != 0, Filled},
		{form&formUnit != 0, WithUnit},
		{CellKind(stored&kindMask) == declaredCode, Declared},
	} {
		if f.set {
			m |= f.mark
		}
	}
	return m
}

// Marks gives the marks of one cell; like CellKind and Style it makes no strings,
// so it may be asked of every cell of a long column.
func (c *Column) Marks(row int) Mark {
	at := c.table.at(row)
	return marksOf(c.store.kind(at), c.store.form(at))
}

// Marked gives the marks that any cell of the column has, in records with a
// RowFault too: where a mark is missing, no cell need be asked for it.
func (c *Column) Marked() Mark { return c.marked }

// Decimals counts the digits after the decimal sign as Cell.Decimals does; -1 when
// the cell is no number or has an exponent.
func (c *Column) Decimals(row int) int {
	at := c.table.at(row)
	stored, form := c.store.kind(at), c.store.form(at)
	switch CellKind(stored & kindMask) {
	case Number, declaredCode:
	default:
		return -1
	}
	if c.table.Format == Workbook || form&decimalsMask != decimalsOpen {
		return decimalsOf(c.store.value(at), form, stored)
	}
	text := ""
	if stored&markWord != 0 {
		text = c.store.words.text(c.store.word(at))
	} else {
		text = numberText(c.store.value(at), form, c.table.grid.decimal)
	}
	return decimalsIn(text, c.table.grid.decimal)
}

// Key gives a number that is equal for two records of the column exactly when their
// cells hold the same: the same value, or the same text, or neither; a date of a
// workbook and the number of its day are the same. It means nothing between columns
// or tables.
func (c *Column) Key(row int) uint64 {
	at := c.table.at(row)
	stored := c.store.kind(at)
	switch kind := CellKind(stored & kindMask); {
	case kind == Blank || kind == Uncached:
		return notNumber | uint64(kind)<<32
	case kind == Number || kind == declaredCode || stored&markWord == 0:
		v := c.store.value(at)
		if v == 0 {
			v = 0 // -0 is 0
		}
		return math.Float64bits(v)
	}
	return notNumber | 1<<40 | uint64(c.store.word(at))
}

// notNumber are the bits of a double that is none: no stored value has them.
const notNumber = 0xfff8 << 48

// AppendNumbers appends the usable numbers of the column to dst in the order of the
// records and gives the longer slice.
func (c *Column) AppendNumbers(dst []float64) []float64 {
	for row := range c.Len() {
		if v, ok := c.Number(row); ok {
			dst = append(dst, v)
		}
	}
	return dst
}
