package readers

import (
	"fmt"
	"slices"
	"strings"
)

// layout is the search for the table in a grid: which record is the header, which
// columns and records belong to it, and what the others are.
type layout struct {
	g       *grid
	opt     Options
	reading *Reading

	columns []int // grid columns that are looked at, in order
	filled  []uint16
	numbers []uint16 // cells that are or stand for a number
	words   []uint16 // cells of plain text

	header  int // record of the header, -1 for none
	comment bool
	first   int         // first record under the header
	end     int         // record after the last of the block
	others  []candidate // headers of other tables
	strays  int
	counts  map[int]*wordCounts
}

// shape of a record, as far as its cells alone tell it.
func (l *layout) shape() {
	n := l.g.records
	l.filled, l.numbers, l.words = make([]uint16, n), make([]uint16, n), make([]uint16, n)
	for _, c := range l.columns {
		s := l.g.seek(c)
		if s == nil {
			continue
		}
		s.kinds(func(first int, kinds []uint8) {
			filled, numbers, words := l.filled[first:], l.numbers[first:], l.words[first:]
			for i, k := range kinds {
				switch class(k) {
				case asBlank:
				case asNumber:
					numbers[i]++
					filled[i]++
				case asWord:
					words[i]++
					filled[i]++
				default:
					filled[i]++
				}
			}
		})
	}
	for _, r := range l.g.comments {
		l.filled[r], l.numbers[r], l.words[r] = 0, 0, 0
	}
}

// cellClass sorts cells for the search: what can name a column, what measures.
type cellClass uint8

const (
	asBlank cellClass = iota
	asNumber
	asWord
	asCode
)

func class(stored uint8) cellClass {
	switch CellKind(stored & kindMask) {
	case Blank:
		return asBlank
	case Number, Fault, Uncached, measureText, otherSignText:
		return asNumber
	case Date, Bool:
		if stored&markWord == 0 {
			return asNumber // stored as a value, so it is no name
		}
		return asWord
	case Code, declaredCode:
		return asCode
	}
	return asWord
}

// columnsWithCells lists the columns that hold anything.
func (g *grid) columnsWithCells() []int {
	var out []int
	for i, s := range g.columns {
		if s != nil && s.filled > 0 {
			out = append(out, i)
		}
	}
	return out
}

// findTable finds the table in a grid and makes it.
func findTable(g *grid, opt Options, reading Reading) (*Table, error) {
	at := Pos{File: g.file, Sheet: g.sheet}
	columns := g.columnsWithCells()
	if g.records == 0 || len(columns) == 0 {
		return nil, refuse(at, "is empty")
	}
	l := &layout{g: g, opt: opt, reading: &reading, columns: columns}
	l.shape()
	if err := l.findHeader(); err != nil {
		// Another table beside this one may keep the rows from lining up.
		if other := l.apart(); other != nil {
			l = other
		} else {
			return nil, err
		}
	}
	return l.table()
}

// apart looks for a header in each group of columns on its own, where empty
// columns divide them, and gives the group with the largest block; nil when none
// has a header.
func (l *layout) apart() *layout {
	groups := gapsBetween(l.columns)
	if len(groups) < 2 || len(groups) > manyTables || l.opt.HeaderRow != "" {
		return nil
	}
	var best *layout
	rows := 0
	for _, group := range groups {
		try := &layout{g: l.g, opt: l.opt, reading: l.reading, columns: group}
		try.shape()
		if try.findHeader() != nil {
			continue
		}
		n := 0
		for r := try.first; r < try.end; r++ {
			if try.numbers[r] > 0 {
				n++
			}
		}
		if n > rows {
			best, rows = try, n
		}
	}
	if best == nil {
		return nil
	}
	for _, group := range groups {
		if group[0] != best.columns[0] {
			best.beside(group)
		}
	}
	return best
}

// beside notes what stands beside the table: another table, or remarks.
func (l *layout) beside(group []int) {
	out := Stray{Kind: Note, Beside: true, Word: "column " + Letter(group[0])}
	if len(group) > 1 {
		out.Word = "columns " + Letter(group[0]) + " to " + Letter(group[len(group)-1])
	}
	numbers := 0
	for r := range l.g.records {
		if l.g.isComment(r) {
			continue
		}
		var cells []string
		number := false
		for _, c := range group {
			if s := l.g.seek(c); s.kind(r) != 0 {
				number = number || class(s.kind(r)) == asNumber
				if out.Row == 0 {
					cells = append(cells, l.g.text(c, r))
				}
			}
		}
		if len(cells) > 0 {
			out.Row, out.Cells = l.g.lines.at(r), cells
		}
		if number {
			if numbers++; numbers == 2 {
				out.Kind = OtherTable
				break
			}
		}
	}
	if out.Row > 0 {
		l.reading.Stray = append(l.reading.Stray, out)
	}
}

// gapsBetween splits columns where an empty one lies between.
func gapsBetween(columns []int) [][]int {
	var out [][]int
	for i, c := range columns {
		if i == 0 || c != columns[i-1]+1 {
			out = append(out, nil)
		}
		out[len(out)-1] = append(out[len(out)-1], c)
	}
	return out
}

// name gives the header's cell of a column as a name.
func (l *layout) name(c int) string {
	if l.header < 0 {
		return ""
	}
	s := l.g.text(c, l.header)
	if l.comment && c == l.columns[0] && strings.TrimLeft(s, "# ") != "" {
		s = strings.TrimLeft(s, "# ")
	}
	return oneLine(trimPadding(s))
}

// cells gives what a record holds, for messages.
func (l *layout) cells(record int) []string {
	var out []string
	for c := range l.g.columns {
		out = append(out, l.g.text(c, record))
	}
	for len(out) > 0 && out[len(out)-1] == "" {
		out = out[:len(out)-1]
	}
	return out
}

func (l *layout) stray(record int, kind StrayKind, word string) Stray {
	s := Stray{Row: l.g.lines.at(record), Kind: kind, Word: word}
	if l.strays++; l.strays <= manyStrays {
		s.Cells = l.cells(record)
	}
	return s
}

// manyStrays is the number of stray rows whose texts are kept.
const manyStrays = 1000

// titles notes the rows above the header, or above the first row where there is
// none.
func (l *layout) titles() {
	end := l.header
	if end < 0 {
		end = l.first
	}
	for r := range end {
		switch {
		case l.filled[r] == 0:
		case l.inTable(r):
			l.reading.Stray = append(l.reading.Stray, l.stray(r, OtherTable, ""))
		default:
			l.reading.Titles = append(l.reading.Titles, l.stray(r, Title, ""))
		}
	}
	switch n := len(l.reading.Titles); {
	case n == 1:
		t := l.reading.Titles[0]
		l.note("row %d is a title: %q", t.Row, shortened(strings.Join(t.Cells, " ")))
	case n > 1:
		l.note("rows %d to %d are titles: %q and so on", l.reading.Titles[0].Row, l.reading.Titles[n-1].Row,
			shortened(strings.Join(l.reading.Titles[0].Cells, " ")))
	}
}

// inTable tells whether a row above the header belongs to another table: a block of
// rows of three cells or of numbers alone. Names with a value each are titles.
func (l *layout) inTable(r int) bool {
	for _, c := range l.others {
		if r < c.record || r >= c.end || c.rows < 2 || r != c.record && l.numbers[r] == 0 {
			continue
		}
		for k := c.record + 1; k < c.end; k++ {
			if l.numbers[k] > 0 {
				return l.filled[k] >= 3 || l.filled[k] == l.numbers[k]
			}
		}
	}
	return false
}

func (l *layout) note(format string, args ...any) {
	l.reading.Notes = append(l.reading.Notes, fmt.Sprintf(format, args...))
}

// shortened keeps a note to one line.
func shortened(s string) string {
	s = oneLine(trimPadding(s))
	r := []rune(s)
	if len(r) > 60 {
		return string(r[:40]) + " ... " + string(r[len(r)-15:])
	}
	return s
}

// sameNames compares two records as headers: same tells that they have the same
// names in the same columns, permuted that they have the same names in others.
func (l *layout) sameNames(a, b int) (same, permuted bool) {
	var first, second []string
	agree, names := 0, 0
	for _, c := range l.columns {
		x, y := foldName(l.g.text(c, a)), foldName(l.g.text(c, b))
		if x != "" {
			first = append(first, x)
		}
		if y != "" {
			second = append(second, y)
			names++
			if x == y {
				agree++
			}
		}
	}
	if names == 0 || len(first) == 0 {
		return false, false
	}
	if agree == names && 2*names >= len(first) && (names > 1 || len(first) == 1) {
		return true, false
	}
	// Most of it agrees: a header typed again with a slip in it.
	if agree >= 2 && 4*agree >= 3*names && 4*agree >= 3*len(first) {
		return true, false
	}
	known := 0
	for _, y := range second {
		if slices.Contains(first, y) {
			known++
		}
	}
	return false, known >= 2 && known > agree && 4*known >= 3*names && 2*known >= len(first)
}

func foldName(s string) string { return strings.ToLower(oneLine(trimPadding(s))) }
