package readers

import "strings"

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
	marks := b.markRows()
	b.figures = newFigures(b)
	other := false // below a header that is not ours
	for a := b.first; a < b.end; {
		end := a + 1
		for end < b.end && !b.g.isGap(end) {
			end++
		}
		b.sortRun(a, end, marks, &other)
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
	for _, c := range b.must {
		s := b.g.seek(c)
		for r := b.first; r < b.end; r++ {
			if s.kind(r) == 0 {
				marks[r] |= rowUnnamed
			}
		}
	}
	return marks
}

// sortRun sorts the records [a, end), a run without a blank row in it.
func (b *body) sortRun(a, end int, marks []uint8, other *bool) {
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
			// Only a table beside this one fills the row.
			b.fate[r] = drop
			continue
		case m&rowNumber == 0 && b.takeHeader(r, other):
			continue
		case *other:
			b.drop(r, UnderOther, "")
			continue
		case m&rowNumber == 0 && b.isNote(r, m):
			b.drop(r, Note, "")
			continue
		case m&(rowWord|rowUnnamed) != 0 || r == tail-1 || r+1 < end && marks[r+1]&rowNumber == 0:
			if word := b.figures.summary(r, m, r >= tail-8); word != "" {
				b.drop(r, Summary, word)
				continue
			}
		}
		b.figures.take(r)
	}
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
		if m&rowNumber != 0 && m&rowText == 0 && (m&rowLabel != 0 || len(b.must) == 0) {
			good++
		}
	}
	for i := range b.others {
		if b.others[i].record >= a && b.others[i].record < end {
			return false
		}
	}
	return 2*good >= rows && good > 0
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
		if b.fate[r] == drop || b.filled[r] == 0 {
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
	if b.header < 0 {
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

// isNote tells whether a row without a number is a remark: one text alone, which
// does not look like the labels of its column.
func (b *body) isNote(r int, m uint8) bool {
	if len(b.columns) < 3 {
		return false
	}
	at := -1
	for _, c := range b.columns {
		switch class(b.g.seek(c).kind(r)) {
		case asBlank:
		case asWord:
			if at >= 0 {
				return false
			}
			at = c
		default:
			return false
		}
	}
	if at < 0 {
		return false
	}
	for _, c := range b.numeric {
		if c == at {
			return false // a text in place of a number is a fault of that cell
		}
	}
	return !b.looksLikeLabel(at, r)
}

// looksLikeLabel tells whether a text is one of the labels of its column, or made
// as they are: letters and digits in the same order.
func (b *body) looksLikeLabel(c, r int) bool {
	s := b.g.seek(c)
	word := s.word(r)
	if b.wordCount(c, word) > 1 {
		return true
	}
	want := pattern(s.words.text(word))
	alike := 0
	for k := b.first; k < min(b.end, b.first+2000); k++ {
		if k != r && b.numbers[k] > 0 && class(s.kind(k)) == asWord && pattern(s.words.text(s.word(k))) == want {
			alike++
			if alike >= 2 {
				return true
			}
		}
	}
	return false
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
