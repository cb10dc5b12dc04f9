package readers

import (
	"math"
	"strings"
)

// summaries gives for each text of a dictionary the word for a sum, mean or the
// like that it is, nil when none is.
func (d *dictionary) summaries() []string {
	var out []string
	for code := range d.at {
		if word := summaryName(d.text(uint32(code))); word != "" {
			if out == nil {
				out = make([]string, d.len())
			}
			out[code] = word
		}
	}
	return out
}

// summaryName tells what a label says of the rows above it: the word, when the
// label begins or ends with one.
func summaryName(s string) string {
	if len(s) == 0 || len(s) > 32 || s[0] >= '0' && s[0] <= '9' {
		return ""
	}
	first, _, several := strings.Cut(s, " ")
	if w := summaryToken(first, several); w != "" {
		return w
	}
	if several {
		return summaryToken(s[strings.LastIndexByte(s, ' ')+1:], true)
	}
	return ""
}

func summaryToken(s string, several bool) string {
	s = strings.Trim(s, ".:=()")
	if len(s) > 20 || len(s) == 0 {
		return ""
	}
	if several && len(s) < 3 {
		return ""
	}
	switch c := s[0] | 0x20; c {
	case 'm', 'a', 't', 's', 'c', 'n', 'v', 'g', 'p', 'u', 0xf8, 0xe9, 0xee, 0xef, 0xc3 | 0x20:
	default:
		if s[0] < 0x80 {
			return ""
		}
	}
	switch strings.ToLower(s) {
	case "mean", "average", "avg", "mittelwert", "mittel", "moyenne", "media", "promedio", "ø", "means", "averages":
		return "mean"
	case "total", "totals", "sum", "subtotal", "sub-total", "summe", "gesamt", "insgesamt", "somme", "suma", "σ", "∑":
		return "sum"
	case "count", "n", "anzahl", "nombre", "number":
		return "count"
	case "sd", "s.d", "std", "stdev", "st.dev", "stddev", "standardabweichung", "écart-type", "se", "s.e", "sem", "s.e.m":
		return "spread"
	case "median":
		return "median"
	case "max", "maximum", "min", "minimum":
		return "extreme"
	case "var", "variance", "varianz", "cv":
		return "spread"
	case "grand", "pooled":
		return ""
	}
	return ""
}

// summaryWord gives the word for a sum or mean in a record, "" when there is none.
func (b *body) summaryWord(r int) string {
	for _, c := range b.layout.columns {
		s := b.g.seek(c)
		if k := s.kind(r); class(k) == asWord && k&markWord != 0 {
			if w := summaryName(s.words.text(s.word(r))); w != "" {
				return w
			}
		}
	}
	return ""
}

// figures keeps sums over the rows read so far, since the last sum or header, to
// know a row of totals by arithmetic.
type figures struct {
	b     *body
	all   []running // one per number column, over the table so far
	block []running // since the last summary
	next  int       // first row that is not in the sums yet
	// The last summary and the column of its word.
	last, lastColumn int
}

type running struct {
	n         int
	sum       float64
	low, high float64
}

func (r *running) add(v float64) {
	if r.n == 0 || v < r.low {
		r.low = v
	}
	if r.n == 0 || v > r.high {
		r.high = v
	}
	r.n++
	r.sum += v
}

func newFigures(b *body) *figures {
	return &figures{b: b, all: make([]running, len(b.numeric)), block: make([]running, len(b.numeric)), next: b.first, last: -2}
}

// catchUp sums the rows above r that are kept.
func (f *figures) catchUp(r int) {
	for i, c := range f.b.numeric {
		s := f.b.g.seek(c)
		for k := f.next; k < r; k++ {
			if f.b.fate[k] == keep && CellKind(s.kind(k)&kindMask) == Number {
				v := s.value(k)
				f.all[i].add(v)
				f.block[i].add(v)
			}
		}
	}
	f.next = max(f.next, r)
}

// summary tells whether a row is a sum, a mean or the like of the rows above, and
// which. It must say so by a word in a label column and agree in its numbers, or
// lack a label that every row has, or stand at the end; or its numbers alone must
// agree beyond accident. A group may be called total, max or N, so a word is not
// enough.
func (f *figures) summary(r int, m uint8, last bool) string {
	b := f.b
	column, word := b.rowWord(r, m)
	if word == "" {
		word = f.byArithmetic(r, m)
	} else if !f.isMeant(r, column, word, m&rowUnnamed != 0, last) {
		word = ""
	}
	if word != "" {
		f.startBlock(r)
		f.last, f.lastColumn = r, column
	}
	return word
}

// isMeant tells whether a word in a label column is meant as that, and is no name
// of a group.
func (f *figures) isMeant(r, column int, word string, unnamed, last bool) bool {
	b := f.b
	first := column == b.labels[0]
	a := f.agreement(r, word)
	level := unnamed && b.isLevel(column, r)
	if a.ok && (unnamed && !level || first && (a.cells > 1 || a.chance < 0.05) || a.chance < rare) {
		return true
	}
	s := b.g.seek(column)
	switch text := s.words.text(s.word(r)); {
	case len(text) == 1, word == "extreme" && len(text) == 3:
		return false // n, max and min say so by their numbers or not at all
	case unnamed && !level:
		return true
	case last && b.closesTable(column, r):
		return true
	}
	// The deviations under the means, and the like.
	return first && f.last == r-1 && f.lastColumn == column && !b.g.isGap(r)
}

// closesTable tells whether the word for a sum stands nowhere else in the first
// column of labels, and is long enough to be no label by accident: sd may follow sc.
func (b *body) closesTable(column, r int) bool {
	s := b.g.seek(column)
	text := s.words.text(s.word(r))
	return column == b.labels[0] && (len(text) > 3 || equalFold(text, "sum")) && b.wordCount(column, s.word(r)) == 1
}

// isLevel tells whether the word for a sum stands in two or more rows that have all
// their labels: then it is a group's name, such as max among levels of a dose.
func (b *body) isLevel(column, r int) bool {
	s := b.g.seek(column)
	word, n := s.word(r), 0
	key := [2]int{column, int(word)}
	if known, ok := b.levels[key]; ok {
		return known
	}
	for k := b.first; k < b.end && n < 2; k++ {
		if s.kind(k)&markWord != 0 && s.word(k) == word && b.marks[k]&rowUnnamed == 0 {
			n++
		}
	}
	if b.levels == nil {
		b.levels = map[[2]int]bool{}
	}
	b.levels[key] = n == 2
	return n == 2
}

// rowWord gives the word for a sum or mean in a record, and its column. A single
// letter, such as n, is one only where another label is missing: it may be the name
// of a group.
func (b *body) rowWord(r int, m uint8) (column int, word string) {
	if m&rowWord == 0 {
		return -1, ""
	}
	for _, c := range b.labels {
		s := b.g.seek(c)
		if k := s.kind(r); class(k) != asWord || k&markWord == 0 {
			continue
		}
		text := s.words.text(s.word(r))
		if w := summaryName(text); w != "" && (len(text) > 1 || m&rowUnnamed != 0) {
			return c, w
		}
	}
	return -1, ""
}

// rare is the chance below which no accident is believed: two figures of two blocks
// are compared, and one row in a thousand may be taken wrongly.
const rare = 1e-3 / 4

// agreement is how the numbers of a row compare with a figure of the rows above.
type agreement struct {
	ok     bool
	cells  int
	chance float64 // that they would agree by accident
}

// agreement compares a row with the rows since the last summary, then with all.
func (f *figures) agreement(r int, word string) agreement {
	f.catchUp(r)
	if a := f.compare(r, word, f.block); a.ok {
		return a
	}
	return f.compare(r, word, f.all)
}

// byArithmetic tells whether a row without a word has the means or the sums of the
// rows above. Only a row that lacks a label, or stands at the end, is asked.
func (f *figures) byArithmetic(r int, m uint8) string {
	if m&rowUnnamed == 0 && !f.b.endsTable(r) {
		return ""
	}
	for _, word := range [...]string{"mean", "sum"} {
		if a := f.agreement(r, word); a.ok && a.chance < rare {
			return word + " of the rows above"
		}
	}
	return ""
}

// compare holds the numbers of a row against a figure of the rows above, within
// half a unit of their last decimal.
func (f *figures) compare(r int, word string, over []running) agreement {
	a := agreement{chance: 1}
	for i, c := range f.b.numeric {
		s := f.b.g.seek(c)
		kind := s.kind(r)
		if CellKind(kind&kindMask) == Blank {
			continue
		}
		if CellKind(kind&kindMask) != Number || over[i].n < 2 {
			return agreement{}
		}
		v := s.value(r)
		unit := math.Pow(10, -float64(max(0, decimalsOf(v, s.form(r), kind))))
		spread := over[i].high - over[i].low
		var want float64
		switch word {
		case "mean":
			want = over[i].sum / float64(over[i].n)
		case "sum":
			want = over[i].sum
			spread = math.Max(spread, math.Abs(want))
		case "count":
			want = float64(over[i].n)
		case "extreme":
			want = over[i].low
			if math.Abs(v-over[i].high) < math.Abs(v-want) {
				want = over[i].high
			}
		default:
			return agreement{}
		}
		if math.Abs(v-want) > unit/2+1e-9*math.Abs(want) {
			return agreement{}
		}
		a.ok = true
		a.cells++
		// A value that other rows have too, such as a level that was set, proves nothing.
		if !f.b.occursElsewhere(c, r) {
			a.chance *= math.Min(1, unit/math.Max(spread, unit))
		}
	}
	return a
}

// occursElsewhere tells whether another record has the same number in a column.
func (b *body) occursElsewhere(c, r int) bool {
	s := b.g.seek(c)
	v := s.value(r)
	for k := b.first; k < b.end; k++ {
		if k != r && CellKind(s.kind(k)&kindMask) == Number && s.value(k) == v {
			return true
		}
	}
	return false
}

// endsTable tells whether a row is the last of the file or stands before a gap.
func (b *body) endsTable(r int) bool {
	for k := r + 1; k < b.end; k++ {
		if b.fate[k] == drop {
			continue
		}
		return b.g.isGap(k)
	}
	return true
}

// startBlock begins a new block of rows after a summary.
func (f *figures) startBlock(r int) {
	f.catchUp(r)
	for i := range f.block {
		f.block[i] = running{}
	}
}
