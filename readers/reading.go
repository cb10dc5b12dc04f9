package readers

// Format says what a file is.
type Format uint8

// The formats. The zero value is text.
const (
	TextFile Format = iota
	Workbook
)

// String gives "text" or "workbook".
func (f Format) String() string {
	if f == Workbook {
		return "workbook"
	}
	return "text"
}

// Reading tells how a file was taken: what was decided for the whole file, and
// what was found beside the table. Positions are those of the file; record
// indexes are those of the table.
type Reading struct {
	Encoding  string   // "UTF-8", "Windows-1252", ...; empty for workbooks
	Delimiter string   // one character, "" when each line is one field, and for workbooks
	Decimal   string   // "." or ","
	Given     []string // the steps that an option fixed, by the option's name without dashes
	// Notes are sentences for the reader of the report, in the order of the steps.
	Notes []string

	Titles []Stray  // rows above the header
	Stray  []Stray  // rows within and below the table, and tables beside it, that are no measurements
	Uneven []Uneven // rows whose fields do not match the header; text files only

	Hidden   Hidden
	Merged   []Merged
	Colored  bool // some cell of the table has a fill or a colour of its own
	Date1904 bool
}

// StrayKind says what a stray row is.
type StrayKind uint8

// The kinds of stray rows. The zero value is a title above the header.
const (
	Title       StrayKind = iota
	HeaderAgain           // the header's names once more, in the same columns
	OtherOrder            // the header's names in other columns; the rows under it come as UnderOther
	UnderOther            // a row under a header of another order
	Summary               // a total, mean, count or the like, by its word or by arithmetic
	Note                  // text alone: a remark, a footer, a section's name
	OtherTable            // a row of another table below or beside this one
	UnitsRow              // the units under the header
)

// String names the kind as messages do.
func (k StrayKind) String() string {
	switch k {
	case Title:
		return "title"
	case HeaderAgain:
		return "header again"
	case OtherOrder:
		return "header in another order"
	case UnderOther:
		return "row under another header"
	case Summary:
		return "summary"
	case Note:
		return "note"
	case OtherTable:
		return "another table"
	case UnitsRow:
		return "units"
	}
	return "unknown"
}

// Stray is a row of the file that is no record of the table.
type Stray struct {
	Row   int // line or sheet row
	Kind  StrayKind
	Word  string   // for a summary what it is: "average", "sum of the rows above"
	Cells []string // what the row holds, from the first column of the file on, blanks at the end left out; nil after the first thousand rows
	// Beside is true for a table that stands beside this one: Row is its first row
	// and the other fields speak of its header.
	Beside bool
}

// UnevenKind says what became of a row with more or fewer fields than the header.
type UnevenKind uint8

// The kinds of uneven rows. The zero value is a row with more fields.
const (
	TooMany   UnevenKind = iota // more fields, something in them: set aside, never shifted
	TooFew                      // fewer fields of the wrong kinds: set aside
	ExtraVoid                   // more fields, but those are blank: used
	CutShort                    // fewer fields of the right kinds, the rest counts as blank: used
)

// Used tells whether the row's cells can be used.
func (k UnevenKind) Used() bool { return k == ExtraVoid || k == CutShort }

// Uneven is a record with more or fewer fields than the header.
type Uneven struct {
	Record int // index in the table
	Row    int // line of the file
	Fields int
	Want   int
	Kind   UnevenKind
}

// Hidden lists what a workbook hides of the table; all of it was read.
type Hidden struct {
	Records []int     // records whose row is hidden
	Columns []*Column // columns that are hidden
	Filter  string    // the range of a filter over the rows, such as A1:F60; "" when there is none
	Struck  int       // cells that are struck through
}

// Merged is a range of merged cells that touches the table.
type Merged struct {
	Range string // as a spreadsheet writes it
	// Rows from 1 and columns from 0, all inclusive.
	Top, Bottom, Left, Right int
	// Filled is true for a range down one column of labels: its value holds for all
	// its rows. Otherwise only the first cell has it.
	Filled bool
	Title  bool // above the header or in it
}
