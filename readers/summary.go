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
// which. It must say so by a word in a label column or agree in its numbers; a word
// alone counts where a label that every row has is missing, or at the end.
func (f *figures) summary(r int, m uint8, last bool) string {
	b := f.b
	column, word := b.rowWord(r, m)
	switch {
	case word == "":
		word = f.byArithmetic(r, m)
	case f.agrees(r, word):
	case m&rowUnnamed != 0 && !b.isLevel(column, r):
	case last && b.closesTable(column, r):
	case f.last == r-1 && !b.g.isGap(r) && f.lastColumn == column:
		// The deviations under the means, and the like.
	default:
		word = ""
	}
	if word != "" {
		f.startBlock(r)
		f.last, f.lastColumn = r, column
	}
	return word
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
	if b.wordCount(column, word) < 2 {
		return false
	}
	for k := b.first; k < b.end; k++ {
		if s.kind(k)&markWord != 0 && s.word(k) == word && b.marks[k]&rowUnnamed == 0 {
			if n++; n == 2 {
				return true
			}
		}
	}
	return false
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

// agrees tells whether the numbers of a row are what its word says of the rows
// above.
func (f *figures) agrees(r int, word string) bool {
	f.catchUp(r)
	for _, over := range [...][]running{f.block, f.all} {
		if _, ok := f.compare(r, word, over); ok {
			return true
		}
	}
	return false
}

// byArithmetic tells whether a row without a word has the sums or the means of the
// rows above. Only a row that lacks a label, or stands at the end, is asked, and
// its numbers must agree so closely that it would happen by accident once in a
// thousand rows at most.
func (f *figures) byArithmetic(r int, m uint8) string {
	if m&rowUnnamed == 0 && !f.b.endsTable(r) {
		return ""
	}
	f.catchUp(r)
	for _, over := range [...][]running{f.block, f.all} {
		for _, name := range [...]string{"mean", "sum"} {
			if chance, ok := f.compare(r, name, over); ok && 4*chance < 1e-3 {
				return name + " of the rows above"
			}
		}
	}
	return ""
}

// compare holds the numbers of a row against a figure of the rows above, within
// half a unit of their last decimal. ok is true when all agree; chance is how often
// they would by accident.
func (f *figures) compare(r int, name string, over []running) (chance float64, ok bool) {
	chance = 1
	for i, c := range f.b.numeric {
		s := f.b.g.seek(c)
		kind := s.kind(r)
		if CellKind(kind&kindMask) == Blank {
			continue
		}
		if CellKind(kind&kindMask) != Number || over[i].n < 2 {
			return 1, false
		}
		want, spread := 0.0, over[i].high-over[i].low
		switch name {
		case "mean":
			want = over[i].sum / float64(over[i].n)
		case "sum":
			want = over[i].sum
			spread = math.Max(spread, math.Abs(want))
		case "count":
			want = float64(over[i].n)
		default:
			return 1, false
		}
		v := s.value(r)
		unit := math.Pow(10, -float64(max(0, decimalsOf(v, s.form(r), kind))))
		if math.Abs(v-want) > unit/2+1e-9*math.Abs(want) {
			return 1, false
		}
		ok = true
		chance *= math.Min(1, unit/math.Max(spread, unit))
	}
	return chance, ok
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
