package readers

import (
	"strconv"
	"strings"
)

// The largest address of a spreadsheet is XFD1048576; text files may have more
// rows, never more columns.
const (
	lastSheetRow    = 1 << 20
	lastSheetColumn = 1 << 14
)

// Pos is a place in a file as its owner would look it up: rows and columns count
// from 1, a row is a line of a text file or a row of a sheet, and 0 means unknown
// or the whole. The zero value is no place at all.
type Pos struct {
	File   string // as it was named by the user
	Sheet  string // empty for text files
	Row    int    // line on which the record starts, or row of the sheet
	Column int    // field of the record, or column of the sheet
}

// String gives "kelp.csv:14:3" for a text file and "kelp.xlsx:Sheet1!C14" for a
// workbook, leaving out what is unknown.
func (p Pos) String() string {
	if p.Sheet == "" {
		s := p.File
		if p.Row > 0 {
			s += ":" + strconv.Itoa(p.Row)
			if p.Column > 0 {
				s += ":" + strconv.Itoa(p.Column)
			}
		}
		return s
	}
	s := p.File + ":" + quoteSheet(p.Sheet)
	if p.Row == 0 && p.Column == 0 {
		return s
	}
	s += "!"
	if p.Column > 0 {
		s += Letter(p.Column - 1)
	}
	if p.Row > 0 {
		s += strconv.Itoa(p.Row)
	}
	return s
}

// quoteSheet writes a sheet's name as formulas do: in single quotes when it is
// more than letters, digits and underscores.
func quoteSheet(name string) string {
	for _, r := range name {
		switch {
		case r == '_', r >= '0' && r <= '9', r >= 'A' && r <= 'Z', r >= 'a' && r <= 'z', r >= 0x80:
		default:
			return "'" + strings.ReplaceAll(name, "'", "''") + "'"
		}
	}
	return name
}

// Letter gives the spreadsheet's name of a column counted from 0: A, B, ... Z,
// AA. A negative index gives "".
func Letter(index int) string {
	var b [8]byte
	i := len(b)
	for n := index + 1; n > 0 && i > 0; n = (n - 1) / 26 {
		i--
		b[i] = byte('A' + (n-1)%26)
	}
	return string(b[i:])
}

// Address gives the spreadsheet's name of a cell, such as C18, for a column
// counted from 0 and a row counted from 1.
func Address(column, row int) string {
	return Letter(column) + strconv.Itoa(row)
}

// columnIndex reads a column letter; ok is false for anything but one to three
// letters up to XFD.
func columnIndex(letters string) (index int, ok bool) {
	if len(letters) == 0 || len(letters) > 3 {
		return 0, false
	}
	n := 0
	for i := range len(letters) {
		c := letters[i] &^ 0x20
		if c < 'A' || c > 'Z' {
			return 0, false
		}
		n = n*26 + int(c-'A') + 1
	}
	return n - 1, n <= lastSheetColumn
}

// splitAddress reads an address such as C18 (capital letters, no signs); the
// column counts from 0, the row from 1.
func splitAddress(s []byte) (column, row int, ok bool) {
	i := 0
	for i < len(s) && i < 4 && s[i] >= 'A' && s[i] <= 'Z' {
		column = column*26 + int(s[i]-'A') + 1
		i++
	}
	digits := s[i:]
	if i == 0 || i > 3 || len(digits) == 0 || len(digits) > 7 || digits[0] == '0' {
		return 0, 0, false
	}
	for _, c := range digits {
		if c < '0' || c > '9' {
			return 0, 0, false
		}
		row = row*10 + int(c-'0')
	}
	return column - 1, row, column <= lastSheetColumn && row <= lastSheetRow
}

// box is a rectangle of cells; columns count from 0, rows from 1, all inclusive.
type box struct {
	left, right int
	top, bottom int
}

// parseBox reads A1:F60 or a single address; dollar signs and lower case are
// forgiven, since people copy them from formulas.
func parseBox(s string) (box, bool) {
	s = strings.ToUpper(strings.ReplaceAll(strings.TrimSpace(s), "$", ""))
	from, to, two := strings.Cut(s, ":")
	if !two {
		to = from
	}
	left, top, ok1 := splitAddress([]byte(from))
	right, bottom, ok2 := splitAddress([]byte(to))
	if !ok1 || !ok2 {
		return box{}, false
	}
	return box{min(left, right), max(left, right), min(top, bottom), max(top, bottom)}, true
}

// String gives the box as a spreadsheet writes it.
func (b box) String() string {
	from, to := Address(b.left, b.top), Address(b.right, b.bottom)
	if from == to {
		return from
	}
	return from + ":" + to
}
