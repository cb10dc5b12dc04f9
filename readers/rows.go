package readers

import (
	"sort"
	"strings"
)

// Marks of a record under the header, from one pass over the columns.
const (
	rowNumber  = 1 << iota // a number in a number column
	rowText                // plain text in a number column
	rowUnnamed             // a blank where nearly every row has a label
	rowLabel               // a label
	rowWord                // a word for a sum or mean in a label column
	rowFilled
)

// sortRows decides the fate of each record under the header.
func (b *body) sortRows() {
	b.marks = b.markRows()
	marks := b.marks
	b.figures = newFigures(b)
	other := false // below a header that is not ours
	lastNumber := b.end - 1
	for lastNumber > b.first && marks[lastNumber]&rowNumber == 0 {
		lastNumber--
	}
	for a := b.first; a < b.end; {
		end := a + 1
		for end < b.end && !b.g.isGap(end) {
			end++
		}
		b.sortRun(a, end, lastNumber, marks, &other)
		a = end
	}
	b.reading.Stray = append(b.reading.Stray, b.stray...)
}

func (b *body) markRows() []uint8 {
	marks := make([]uint8, b.g.records)
	for _, c := range b.numeric {
		b.g.seek(c).kinds(func(first int, kinds []uint8) {
			for i := max(b.first-first, 0); i < min(b.end-first, len(kinds)); i++ {
				switch class(kinds[i]) {
				case asNumber:
					marks[first+i] |= rowNumber | rowFilled
				case asWord:
					marks[first+i] |= rowText | rowFilled
				case asCode:
					marks[first+i] |= rowFilled
				}
			}
		})
	}
	for _, c := range b.labels {
		s := b.g.seek(c)
		words := s.words.summaries()
		for i, p := range s.pieces {
			if p == nil {
				continue
			}
			for k, kind := range p.kind {
				if kind == 0 {
					continue
				}
				marks[i*pieceLen+k] |= rowLabel | rowFilled
				if words != nil && kind&markWord != 0 && words[p.word[k]] != "" {
					marks[i*pieceLen+k] |= rowWord
				}
			}
		}
	}
	b.markUnnamed(marks)
	return marks
}

// markUnnamed marks the rows that lack a label where nearly every row has one. Rows
// with a word for a sum don't count: where each group has its mean, they are many.
func (b *body) markUnnamed(marks []uint8) {
	rows := 0
	for r := b.first; r < b.end; r++ {
		if marks[r]&(rowNumber|rowWord) == rowNumber {
			rows++
		}
	}
	for _, c := range b.labels {
		labelled := 0
		s := b.g.seek(c)
		s.kinds(func(first int, kinds []uint8) {
			for r := max(b.first, first); r < min(b.end, first+len(kinds)); r++ {
				if kinds[r-first] != 0 && marks[r]&(rowNumber|rowWord) == rowNumber {
					labelled++
				}
			}
		})
		if 10*(rows-labelled) > rows {
			continue
		}
		b.must = append(b.must, c)
		for r := b.first; r < b.end; r++ {
			if s.kind(r) == 0 {
				marks[r] |= rowUnnamed
			}
		}
	}
}

// sortRun sorts the records [a, end), a run without a blank row in it.
func (b *body) sortRun(a, end, lastNumber int, marks []uint8, other *bool) {
	if a > b.first && !b.hasOurShape(a, end, marks) && !b.startsAgain(a, end, marks) {
		b.strayRun(a, end, marks)
		return
	}
	// Rows at the end of a run, where totals stand.
	tail := end
	for tail > a && b.fate[tail-1] == drop {
		tail--
	}
	for r := a; r < end; r++ {
		m := marks[r]
		switch {
		case b.fate[r] == drop:
			continue
		case m&rowFilled == 0:
			// Only a table beside this one fills the row, or nothing: in a file of one
			// column a blank line between others is a blank cell.
			if !b.g.oneColumn || r > lastNumber {
				b.fate[r] = drop
			}
			continue
		case m&rowNumber == 0 && b.takeHeader(r, other):
			continue
		case *other:
			b.drop(r, UnderOther, "")
			continue
		case m&rowNumber == 0 && b.isNote(r, r > lastNumber):
			b.drop(r, Note, "")
			continue
		case m&(rowWord|rowUnnamed) != 0 || r == tail-1 || r+1 < end && marks[r+1]&rowNumber == 0:
			if word := b.figures.summary(r, m, b.onlyWordsFollow(r+1, tail)); word != "" {
				b.drop(r, Summary, word)
				continue
			}
		}
	}
}

// onlyWordsFollow tells whether all rows of [a, end) have a word for a sum: then the
// row before them may stand at the end of the table.
func (b *body) onlyWordsFollow(a, end int) bool {
	if end-a > 8 {
		return false
	}
	for ; a < end; a++ {
		if b.fate[a] == keep && b.marks[a]&rowWord == 0 {
			return false
		}
	}
	return true
}

func (b *body) drop(r int, kind StrayKind, word string) {
	b.fate[r] = drop
	b.stray = append(b.stray, b.layout.stray(r, kind, word))
}

// hasOurShape tells whether most rows of a run are rows of this table.
func (b *body) hasOurShape(a, end int, marks []uint8) bool {
	good, rows := 0, 0
	for r := a; r < end; r++ {
		m := marks[r]
		if b.fate[r] == drop || m&rowFilled == 0 {
			continue
		}
		rows++
		if b.g.sheet == "" && b.header >= 0 && b.g.fields.at(r) != b.g.fields.at(b.header) {
			continue
		}
		if m&rowNumber != 0 && m&rowText == 0 && (m&rowLabel != 0 || len(b.must) == 0) || b.isLabelled(r) {
			good++
		}
	}
	i := sort.Search(len(b.others), func(i int) bool { return b.others[i].record >= a })
	if i < len(b.others) && b.others[i].record < end {
		return false
	}
	return 2*good >= rows && good > 0
}

// isLabelled tells whether a row has all the labels that nearly every row has, and
// they look like those of other rows. Its numbers may be missing or faulty.
func (b *body) isLabelled(r int) bool {
	for _, c := range b.must {
		if class(b.g.seek(c).kind(r)) != asWord || !b.looksLikeLabel(c, r) {
			return false
		}
	}
	return len(b.must) > 0
}

// startsAgain tells whether a run starts with our header once more.
func (b *body) startsAgain(a, end int, marks []uint8) bool {
	for r := a; r < end; r++ {
		if b.fate[r] == drop || marks[r]&rowFilled == 0 {
			continue
		}
		if marks[r]&rowNumber != 0 || b.header < 0 {
			return false
		}
		same, permuted := b.sameNames(b.header, r)
		return same || permuted
	}
	return false
}

// strayRun drops a run that is not of the table's shape.
func (b *body) strayRun(a, end int, marks []uint8) {
	kind := Note
	numbers, rows := 0, 0
	for r := a; r < end; r++ {
		if b.fate[r] == drop {
			continue
		}
		rows++
		if b.numbers[r] > 0 {
			numbers++
		}
	}
	if numbers > 0 && rows > 1 {
		kind = OtherTable
	}
	for r := a; r < end; r++ {
		if b.fate[r] == drop || marks[r]&rowFilled == 0 {
			b.fate[r] = drop
			continue
		}
		k, word := kind, ""
		if k == Note && (marks[r]&rowWord != 0 || numbers > 0) {
			if word = b.summaryWord(r); word != "" {
				k = Summary
			}
		}
		b.drop(r, k, word)
	}
}

// takeHeader deals with a row that has the header's names once more; other is set
// while the rows belong to a header of another order.
func (b *body) takeHeader(r int, other *bool) bool {
	if b.header < 0 || !b.maySayNames(r) {
		return false
	}
	same, permuted := b.sameNames(b.header, r)
	switch {
	case same:
		*other = false
		b.drop(r, HeaderAgain, "")
	case permuted:
		*other = true
		b.drop(r, OtherOrder, "")
	default:
		return false
	}
	return true
}

// isNote tells whether a row without a number in a number column is a remark: none
// of its texts looks like a label of this table, and it is one text alone, or has
// too few fields, or stands at the end.
func (b *body) isNote(r int, tail bool) bool {
	filled, inNumbers := 0, 0
	for _, c := range b.numeric {
		switch class(b.g.seek(c).kind(r)) {
		case asBlank:
		case asWord:
			filled++
			inNumbers++
		default:
			return false // a missing code stands for a measurement
		}
	}
	for _, c := range b.labels {
		s := b.g.seek(c)
		switch class(s.kind(r)) {
		case asBlank:
			continue
		case asWord:
			if b.looksLikeLabel(c, r) {
				return false
			}
		}
		filled++
	}
	short := b.g.sheet == "" && b.header >= 0 && b.g.fields.at(r) < b.g.fields.at(b.header)
	switch {
	case filled == 0 || len(b.columns) < 2:
		return false
	case short:
		return true
	case filled == 1:
		return inNumbers == 0 || tail
	}
	return inNumbers == 0 && tail
}

// maySayNames is a quick look whether a row may be the header once more: one of its
// first two texts is a name of the header.
func (b *body) maySayNames(r int) bool {
	if b.names == nil {
		b.names = map[string]bool{}
		for _, c := range b.layout.columns {
			b.names[foldName(b.g.text(c, b.header))] = true
		}
	}
	seen := 0
	for _, c := range b.layout.columns {
		s := b.g.seek(c)
		if k := s.kind(r); class(k) != asWord || k&markWord == 0 {
			continue
		}
		if b.names[foldName(s.words.text(s.word(r)))] {
			return true
		}
		if seen++; seen == 2 {
			return false
		}
	}
	return false
}

// labelForms tells how the labels of a column are written, by the rows with numbers.
type labelForms struct {
	known    map[uint32]bool // words
	patterns map[string]int
}

// manyLabels is the number of rows that the labels' forms are taken from.
const manyLabels = 20_000

func (b *body) labelForms(c int) *labelForms {
	if f := b.forms[c]; f != nil {
		return f
	}
	if b.forms == nil {
		b.forms = map[int]*labelForms{}
	}
	f := &labelForms{known: map[uint32]bool{}, patterns: map[string]int{}}
	b.forms[c] = f
	s := b.g.seek(c)
	for r := b.first; r < min(b.end, b.first+manyLabels); r++ {
		if k := s.kind(r); b.marks[r]&rowNumber != 0 && class(k) == asWord && k&markWord != 0 {
			word := s.word(r)
			f.known[word] = true
			f.patterns[pattern(s.words.text(word))]++
		}
	}
	return f
}

// looksLikeLabel tells whether a text is one of the labels of its column, or made
// as they are: letters and digits in the same order.
func (b *body) looksLikeLabel(c, r int) bool {
	f := b.labelForms(c)
	s := b.g.seek(c)
	if s.kind(r)&markWord == 0 {
		return true // a date or a truth value, stored as such
	}
	word := s.word(r)
	return f.known[word] || f.patterns[pattern(s.words.text(word))] >= 2
}

// pattern writes a label as its sequence of letters (a), digits (9) and others.
func pattern(s string) string {
	var out strings.Builder
	last := rune(0)
	for _, r := range s {
		switch {
		case r >= '0' && r <= '9':
			r = '9'
		case r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= 0x80:
			r = 'a'
		}
		if r != last || r != '9' && r != 'a' {
			out.WriteRune(r)
		}
		last = r
	}
	return out.String()
}
