package rules

import (
	"fmt"
	"maps"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/cases"
	"golang.org/x/text/unicode/norm"

	"footing/readers"
	"footing/rules/remedy"
)

// LabelVariants asks whether one label is written in several ways.
var LabelVariants = &Rule{
	Name:   "label-variants",
	Family: OfTable,
	Asks:   "Is one label written in several ways?",
	Why:    "Each spelling becomes a group of its own, with a line of its own, and leaves the group it belongs to.",
	Method: "compares labels after folding case, spaces, punctuation, compatibility forms (Unicode NFKC) and letters of other scripts that look alike; " +
		"and rare labels one letter away from a common one",
	Limit: "two labels that fold to the same, or a label of one row or at most 5 % of them one letter from one five times as frequent; labels that differ in a digit, " +
		"and those of less than four letters, are left alone; no chance is involved",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MergeLabels},
	Run:      labelVariants,
}

func labelVariants(p *Pass) (Outcome, error) {
	found := p.tally()
	merge := map[string]string{}
	for _, col := range p.labelColumns() {
		variants := variantsOf(col)
		names, codes := col.Levels()
		for _, rare := range slices.Sorted(maps.Keys(variants)) {
			common := variants[rare]
			var cells []string
			var where []Place
			at := int32(slices.Index(names, rare))
			for i, c := range codes {
				if c == at {
					where = append(where, Place{Row: i, Column: col})
					cells = append(cells, p.Table.Address(col, i))
				}
			}
			found.set(col, where, fmt.Sprintf("%q at %s may be %q%s", rare, someOf(cells, len(cells)), common, foreignLetter(rare, common)))
			if col == p.Columns.Group {
				merge[rare] = common
			}
		}
	}
	o := found.outcome("no label is written in several ways", func(words string, _ int) string {
		return fmt.Sprintf("one label in two spellings: %s; each spelling counts as a label of its own here", words)
	})
	if len(merge) > 0 {
		o.Target.Labels = merge
	}
	return o, nil
}

// labelColumns are the columns whose labels make groups, and other columns of
// text; a column of row labels has rules of its own.
func (p *Pass) labelColumns() []*readers.Column {
	var all []*readers.Column
	for _, col := range p.Table.Columns {
		if col == p.Columns.Group || col == p.Columns.Subject && col.Kind() != readers.NumberColumn || col.Kind() == readers.TextColumn && col != p.Columns.Label {
			all = append(all, col)
		}
	}
	return all
}

// mostLabels is the number of labels beyond which they are not compared pair
// by pair.
const mostLabels = 1000

// variantsOf maps each label that looks like a spelling of a commoner one to
// that one.
func variantsOf(col *readers.Column) map[string]string {
	count := map[string]int{}
	total := 0
	names, codes := col.Levels()
	for _, c := range codes {
		if c >= 0 {
			count[names[c]]++
			total++
		}
	}
	variants := map[string]string{}
	if 2*len(names) > total && len(names) > 50 || len(names) > mostLabels {
		return variants // a column of identifiers, not of labels
	}
	labels := slices.Sorted(maps.Keys(count))
	slices.SortStableFunc(labels, func(a, b string) int { return count[b] - count[a] })
	byFold := map[string]string{}
	for _, label := range labels {
		key := fold(label)
		if common, seen := byFold[key]; seen {
			variants[label] = common
			continue
		}
		byFold[key] = label
		if count[label] > 1 && count[label]*20 > total {
			continue
		}
		for _, common := range labels {
			if count[common] >= 5*count[label] && oneLetterApart(fold(common), key) {
				variants[label] = common
				break
			}
		}
	}
	return variants
}

// fold strips a label of what spelling habits add: case, spaces, punctuation,
// compatibility forms, and letters of other scripts that look like Latin ones.
// A label of signs only is kept as it is.
func fold(label string) string {
	var b strings.Builder
	for _, r := range cases.Fold().String(strings.Map(capitalAlike, norm.NFKC.String(label))) {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			b.WriteRune(lookAlike(r))
		} else if r == '+' || r == '-' && b.Len() == 0 || r == '.' && followsDigit(b.String()) {
			b.WriteRune(r) // +1 and -1, 0.5 and 05 are not one label
		}
	}
	if b.Len() == 0 {
		return label
	}
	return b.String()
}

func followsDigit(s string) bool {
	r, _ := utf8.DecodeLastRuneInString(s)
	return unicode.IsDigit(r)
}

// lookAlike gives the Latin letter that a small Cyrillic or Greek one looks
// like; the pairs are common practice.
func lookAlike(r rune) rune {
	const foreign, latin = "авеікмнорстухѕјһԁԛԝαβικνορτυχ", "abeikmhopctyxsjhdqwabikvoptux"
	return alike(r, foreign, latin)
}

// capitalAlike does the same for capitals, whose small forms may look like
// another letter: the Greek capital H is a small eta.
func capitalAlike(r rune) rune {
	const foreign, latin = "АВЕІКМНОРСТУХЅЈԌΑΒΕΖΗΙΚΜΝΟΡΤΥΧ", "ABEIKMHOPCTYXSJGABEZHIKMNOPTYX"
	return alike(r, foreign, latin)
}

func alike(r rune, foreign, latin string) rune {
	if r < utf8.RuneSelf {
		return r
	}
	at := strings.IndexRune(foreign, r)
	if at < 0 {
		return r
	}
	return rune(latin[utf8.RuneCountInString(foreign[:at])])
}

// foreignLetter names the letter of another script that sets two labels
// apart, as it cannot be seen.
func foreignLetter(a, b string) string {
	for _, label := range []string{a, b} {
		for _, r := range label {
			latin := lookAlike(capitalAlike(r))
			if latin != r && unicode.In(r, unicode.Cyrillic, unicode.Greek) {
				return fmt.Sprintf(" (%q holds U+%04X, %s %c)", label, r, scriptOf(r), latin)
			}
		}
	}
	return ""
}

func scriptOf(r rune) string {
	if unicode.Is(unicode.Cyrillic, r) {
		return "Cyrillic"
	}
	return "Greek"
}

// oneLetterApart tells labels of four letters or more that one inserted, lost,
// replaced or swapped letter sets apart; a digit in the difference does not
// count, since plot1 and plot2 are two plots.
func oneLetterApart(a, b string) bool {
	x, y := []rune(a), []rune(b)
	if len(x) > len(y) {
		x, y = y, x
	}
	if len(x) < 4 || len(y)-len(x) > 1 {
		return false
	}
	head := 0
	for head < len(x) && x[head] == y[head] {
		head++
	}
	tail := 0
	for tail < len(x)-head && x[len(x)-1-tail] == y[len(y)-1-tail] {
		tail++
	}
	left, right := x[head:len(x)-tail], y[head:len(y)-tail]
	if slices.ContainsFunc(left, unicode.IsDigit) || slices.ContainsFunc(right, unicode.IsDigit) {
		return false
	}
	swapped := len(left) == 2 && len(right) == 2 && left[0] == right[1] && left[1] == right[0]
	return len(right) == 1 || swapped
}
