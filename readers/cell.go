package readers

// CellKind says what one cell holds.
type CellKind uint8

// The kinds of a cell. The zero value is a blank cell.
const (
	Blank    CellKind = iota
	Number            // a usable number
	Code              // a code for a missing value: one of the usual texts, or what the owner declared
	Text              // anything else that is written
	Bool              // true or false
	Date              // a date or a time of day, by number format or by its text
	Fault             // an error value of a spreadsheet, such as #DIV/0!
	Uncached          // a formula whose value was never stored
)

// String gives the kind in lower case, as messages use it.
func (k CellKind) String() string {
	switch k {
	case Blank:
		return "blank"
	case Number:
		return "number"
	case Code:
		return "missing code"
	case Text:
		return "text"
	case Bool:
		return "bool"
	case Date:
		return "date"
	case Fault:
		return "error value"
	case Uncached:
		return "formula without a value"
	}
	return "unknown"
}

// Two kinds of text are told apart inside the package, because a column of them
// is a column of numbers all the same: a number followed by a unit, and a number
// written with the decimal sign that the file does not use. Outside they are Text.
const (
	measureText CellKind = 8 + iota
	otherSignText
	declaredCode // a Code because the owner said so
)

func (k CellKind) public() CellKind {
	switch k {
	case measureText, otherSignText:
		return Text
	case declaredCode:
		return Code
	}
	return k
}

// Look says why a text that resembles a number is none.
type Look uint8

// The looks of a text. The zero value is a text that does not resemble a number.
const (
	Wording    Look = iota
	OtherSign       // a number with the decimal sign that the file does not use: 6,4 among points
	OutOfRange      // beyond the largest double or nearer to zero than the smallest
	Infinite        // Inf, Infinity
	Foreign         // hexadecimal, 1_000, 1d5, digits of another script
	Measure         // a number and a unit: 4.1 °C
)

// Cell is one cell. Its zero value is a blank.
type Cell struct {
	Kind CellKind
	// Number is the value of a Number, and of a Code that the owner declared as a
	// number. For a Date it is the day counted from 1899-12-30, NaN when the text
	// leaves the day open; for a Bool 1 or 0. Otherwise it is NaN.
	Number float64
	// Text is what the file has, without outer spaces. A number of a workbook is
	// written in its shortest exact form, a date of a workbook as 2024-06-04.
	Text string
	// Unit was cut off the number because every cell of the column bears it.
	Unit string
	// Decimals counts the digits after the decimal sign, for a workbook those of
	// the value rounded to 15 digits; -1 when it is no number or has an exponent.
	Decimals int
	Look     Look  // why a Text that resembles a number is none
	Style    Style // zero for text files

	TextNumber bool // a number that a workbook holds as text; Kind is Number
	Thousands  bool // written with signs between thousands
	Declared   bool // Kind is Code because of Options.Missing
	Formula    bool // the stored result of a formula
	Filled     bool // holds for this row because its cells are merged
	Padded     bool // had spaces around it
	Hidden     bool // in a hidden row or column
}

// Style is what a workbook shows of a cell beside its value; the zero value is an
// unmarked cell.
type Style struct {
	Fill    string // colour of the background as RRGGBB, "unknown" if it can't be told, "" for none
	Ink     string // colour of the letters as RRGGBB or by number, as "theme 4", "" for the standard one
	Struck  bool   // struck through
	Percent bool   // shown as per cent, while the value is a fraction
}

// The low four bits of a stored kind are the CellKind, the others these marks.
const (
	kindMask   = 0x0f
	markWord   = 0x10 // the text is in the dictionary, for a number too
	markText   = 0x20 // a number stored as text
	markResult = 0x40 // result of a formula
	markFilled = 0x80 // value of a merged cell
)

// The low four bits of a stored form count the decimals of a number.
const (
	decimalsMask  = 0x0f
	decimalsOpen  = 0x0f // the shortest form that reads back exactly
	formThousands = 0x10
	formPadded    = 0x20
	formUnit      = 0x40 // a unit was cut off
)
