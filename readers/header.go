package readers

import (
	"strconv"
	"strings"
)

// candidate is a record that may be a header, and the block of rows it heads.
type candidate struct {
	record int
	end    int // record after the last of its block
	rows   int // records of the block that hold numbers
}

// findHeader decides which record is the header and where its block ends.
func (l *layout) findHeader() error {
	switch l.opt.HeaderRow {
	case "":
		return l.seekHeader()
	case "none":
		return l.withoutHeader()
	}
	at := Pos{File: l.g.file, Sheet: l.g.sheet}
	row, err := strconv.Atoi(l.opt.HeaderRow)
	if err != nil || row < 1 {
		return refuse(at, "the header row %q is neither a row number nor none", l.opt.HeaderRow)
	}
	at.Row = row
	for r := range l.g.records {
		if l.g.lines.at(r) != row {
			continue
		}
		l.header, l.first, l.end = r, r+1, l.g.records
		l.comment = l.g.isComment(r)
		return l.mustHaveRows()
	}
	return refuse(at, "row %d is blank or not there, so it can't be the header", row)
}

// mustHaveRows refuses a header with nothing under it.
func (l *layout) mustHaveRows() error {
	for r := l.first; r < l.end; r++ {
		if l.filled[r] > 0 {
			return nil
		}
	}
	return refuse(Pos{File: l.g.file, Sheet: l.g.sheet, Row: l.g.lines.at(l.header)}, "has a header and no rows")
}

// withoutHeader takes the first record that is as full as most as the first row.
func (l *layout) withoutHeader() error {
	l.header = -1
	usual := l.usualFill()
	for r := range l.g.records {
		if l.numbers[r] > 0 && 2*int(l.filled[r]) >= usual {
			l.first, l.end = r, l.g.records
			return nil
		}
	}
	return refuse(Pos{File: l.g.file, Sheet: l.g.sheet}, "has no row with a number in it")
}

// usualFill is the number of filled cells that most rows with numbers have.
func (l *layout) usualFill() int {
	count := map[uint16]int{}
	best, most := 0, 0
	for r, n := range l.filled {
		if l.numbers[r] == 0 {
			continue
		}
		count[n]++
		if count[n] > most {
			best, most = int(n), count[n]
		}
	}
	return best
}

// seekHeader finds all records that may be headers and takes the one with the
// largest block under it.
func (l *layout) seekHeader() error {
	found := l.candidates()
	best := -1
	for i := range found {
		c := &found[i]
		c.end = l.g.records
		if i+1 < len(found) {
			c.end = found[i+1].record
		}
		for r := c.record + 1; r < c.end; r++ {
			if l.numbers[r] > 0 {
				c.rows++
			}
		}
		if l.namesNumbers(c) && (best < 0 || c.rows > found[best].rows) {
			best = i
		}
	}
	if best < 0 || l.headless(found, best) {
		if l.commentHeader() {
			return nil
		}
		return l.noHeader()
	}
	l.header, l.first, l.end = found[best].record, found[best].record+1, l.g.records
	l.others = append(found[:best:best], found[best+1:]...)
	return nil
}

// manyTables bounds the search: a file of hundreds of small tables is not one that
// can be read without --range.
const manyTables = 64

// candidates lists the records that hold only names and lie above rows with
// numbers, one for each run of rows that shares its names.
func (l *layout) candidates() []candidate {
	var found []candidate
	lastNumber := -1
	for r, n := range l.numbers {
		if n > 0 {
			lastNumber = r
		}
	}
	pending := -1 // a header that a blank row parts from its rows
	for a := 0; a < l.g.records && len(found) < manyTables; {
		b := a + 1
		for b < l.g.records && !l.g.isGap(b) {
			b++
		}
		c, sawNumbers := l.headerWithin(a, b, found)
		switch {
		case c >= 0 && sawNumbers:
			found = append(found, candidate{record: c})
			pending = -1
		case c >= 0:
			pending = c
		case sawNumbers && pending >= 0:
			if l.heads(pending, a, b) {
				found = append(found, candidate{record: pending})
			}
			pending = -1
		}
		a = b
		if a > lastNumber {
			break
		}
	}
	return found
}

// headerWithin looks for a header in one run of rows without a blank row between:
// the fullest row of names that has only titles above it.
func (l *layout) headerWithin(a, b int, found []candidate) (record int, sawNumbers bool) {
	record = -1
	above := 0 // most cells of a row above
	for r := a; r < b; r++ {
		n := int(l.filled[r])
		if n == 0 {
			continue
		}
		// Titles above have fewer cells; lines of names and values, which instruments
		// write above their tables, have far fewer.
		fuller := n > above && (!sawNumbers || above <= 2 || 5*above <= 3*n)
		switch {
		case l.numbers[r] > 0 && !(fuller && l.namedByMeasures(r)):
			sawNumbers = true
		case l.words[r] == 0 || !fuller || l.again(r, found) || l.repeatsData(r):
		case l.heads(r, r+1, b) || !l.numbersIn(r+1, b):
			record = r
		}
		above = max(above, n)
	}
	return record, sawNumbers
}

func (l *layout) numbersIn(a, b int) bool {
	for r := a; r < b; r++ {
		if l.numbers[r] > 0 {
			return true
		}
	}
	return false
}

// again tells whether a record has the names of a header above, in any order: then
// its rows belong to the same block.
func (l *layout) again(r int, found []candidate) bool {
	for i := range found {
		if same, permuted := l.sameNames(found[i].record, r); same || permuted {
			return true
		}
	}
	return false
}

// heads tells whether the first row with numbers in [a, b) lies under the names of
// a record: at least half of its cells must, and a number must.
func (l *layout) heads(record, a, b int) bool {
	for r := a; r < b; r++ {
		if l.numbers[r] == 0 {
			continue
		}
		under, number := 0, false
		for _, c := range l.columns {
			if l.g.kind(c, r) == Blank || l.g.kind(c, record) == Blank {
				continue
			}
			under++
			s := l.g.seek(c)
			number = number || class(s.kind(r)) == asNumber
		}
		return number && 2*under >= int(l.filled[r])
	}
	return false
}

// namesNumbers tells whether at least one named column of a block is numbers.
func (l *layout) namesNumbers(c *candidate) bool {
	for _, col := range l.columns {
		if l.g.kind(col, c.record) == Blank {
			continue
		}
		if l.isNumeric(col, c.record+1, c.end) {
			return true
		}
	}
	return false
}

// isNumeric tells whether more than half of a column's cells in [a, b) that are
// neither blank nor codes are or stand for numbers.
func (l *layout) isNumeric(col, a, b int) bool {
	numbers, words := 0, 0
	s := l.g.seek(col)
	if s == nil {
		return false
	}
	s.kinds(func(first int, kinds []uint8) {
		for r := max(a, first); r < min(b, first+len(kinds)); r++ {
			switch class(kinds[r-first]) {
			case asNumber:
				numbers++
			case asWord:
				words++
			}
		}
	})
	return numbers > words
}

// wordCounts counts how often each text of a column occurs.
type wordCounts struct{ n []uint32 }

func (l *layout) wordCount(col int, code uint32) int {
	if l.counts == nil {
		l.counts = map[int]*wordCounts{}
	}
	w := l.counts[col]
	if w == nil {
		s := l.g.seek(col)
		w = &wordCounts{n: make([]uint32, s.words.len())}
		for i, p := range s.pieces {
			if p == nil {
				continue
			}
			for k, kind := range p.kind {
				if kind&markWord != 0 && !l.g.isComment(i*pieceLen+k) {
					w.n[p.word[k]]++
				}
			}
		}
		l.counts[col] = w
	}
	return int(w.n[code])
}

// namedByMeasures tells whether the cells of a record that look like numbers are
// names such as "4 °C" or "10 cm", over columns of numbers without a unit.
func (l *layout) namedByMeasures(r int) bool {
	if l.words[r] == 0 {
		return false
	}
	for _, c := range l.columns {
		s := l.g.seek(c)
		k := s.kind(r)
		if class(k) != asNumber {
			continue
		}
		if CellKind(k&kindMask) != measureText {
			return false
		}
		plain, measures := 0, 0
		for i := r + 1; i < min(l.g.records, r+100); i++ {
			switch CellKind(s.kind(i) & kindMask) {
			case Number:
				plain++
			case measureText:
				measures++
			}
		}
		if plain <= measures {
			return false
		}
	}
	return true
}

// repeatsData tells whether a record of texts only is more likely a row with
// faults than a header: one of its texts stands elsewhere in the same column.
func (l *layout) repeatsData(r int) bool {
	for _, c := range l.columns {
		if s := l.g.seek(c); class(s.kind(r)) == asWord && s.kind(r)&markWord != 0 && l.wordCount(c, s.word(r)) > 2 {
			return true
		}
	}
	return false
}

// repeats tells whether another record has the same text in a column.
func (l *layout) repeats(c, r int) bool {
	s := l.g.seek(c)
	return s.kind(r)&markWord != 0 && l.wordCount(c, s.word(r)) > 1
}

// headless tells whether rows above the best candidate are data without a header:
// as full as the header itself, with numbers, and in no other block.
func (l *layout) headless(found []candidate, best int) bool {
	c := found[best]
	for r := range found[0].record {
		if l.numbers[r] > 0 && l.filled[r] >= l.filled[c.record] && l.filled[r] > 2 {
			return true
		}
	}
	return false
}

// commentHeader takes a line that starts with # and stands just above the first
// row as the header, when it has a name for each field.
func (l *layout) commentHeader() bool {
	first := 0
	for first < l.g.records && l.numbers[first] == 0 {
		first++
	}
	if first == 0 || first == l.g.records || !l.g.isComment(first-1) {
		return false
	}
	r := first - 1
	if l.g.fields.at(r) != l.g.fields.at(first) || l.g.fields.at(r) < 2 {
		return false
	}
	for _, c := range l.columns {
		s := l.g.seek(c)
		if k := s.kind(r); k != 0 && class(k) != asWord {
			return false
		}
	}
	l.header, l.first, l.end, l.comment = r, first, l.g.records, true
	l.note("row %d, which starts with #, names the columns", l.g.lines.at(r))
	return true
}

// noHeader says why there is no header.
func (l *layout) noHeader() error {
	at := Pos{File: l.g.file, Sheet: l.g.sheet}
	last, rows := -1, 0
	for r := range l.g.records {
		if l.filled[r] == 0 {
			continue
		}
		rows++
		if l.numbers[r] > 0 && (l.filled[r] > 2 || len(l.columns) <= 2) {
			return l.numbersForNames(r)
		}
		last = r
	}
	if last < 0 {
		return refuse(at, "has only comments")
	}
	fullest := true
	for r := range last {
		fullest = fullest && l.filled[r] < l.filled[last]
	}
	if l.numbers[last] == 0 && (rows == 1 || fullest) {
		at.Row = l.g.lines.at(last)
		return refuse(at, "has a header and no rows")
	}
	return refuse(at, "has no row of names with a column of numbers under it: give --header-row N, or --header-row none")
}

func (l *layout) numbersForNames(r int) error {
	for _, c := range l.columns {
		s := l.g.seek(c)
		if class(s.kind(r)) == asNumber {
			return refuse(l.g.pos(c, r), "has numbers where names are expected, the first is %q: give --header-row N, or --header-row none",
				shortened(l.g.text(c, r)))
		}
	}
	return nil
}

// splitUnit takes the unit off the end of a header: what stands in the last pair
// of brackets, round or square, when a name is left before it.
func splitUnit(header string) (name, unit string) {
	if header == "" {
		return "", ""
	}
	var opening, closing byte
	switch header[len(header)-1] {
	case ')':
		opening, closing = '(', ')'
	case ']':
		opening, closing = '[', ']'
	default:
		return header, ""
	}
	depth := 0
	for i := len(header) - 1; i >= 0; i-- {
		switch header[i] {
		case closing:
			depth++
		case opening:
			depth--
		}
		if depth == 0 {
			name = strings.TrimFunc(header[:i], isPadding)
			unit = strings.TrimFunc(header[i+1:len(header)-1], isPadding)
			if name == "" || unit == "" {
				return header, ""
			}
			return name, unit
		}
	}
	return header, ""
}
