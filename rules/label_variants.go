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
	"footing/rules/wording"
)

// LabelVariants asks whether one label is written in several ways.
var LabelVariants = &Rule{
	Name:   "label-variants",
	Family: OfTable,
	Asks:   "Is one label written in several ways?",
	Why:    "Each spelling becomes a group of its own, with a line of its own, and leaves the group it belongs to.",
	Method: "compares labels after folding case, spaces, punctuation, compatibility forms (Unicode NFKC) and letters of other scripts that look alike; " +
		"and rare labels one letter away from a common one",
	Limit:    "two labels that fold to the same, or a label of at most 5 % of the rows one letter from one ten times as frequent; labels that differ in a digit are left alone",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MergeLabels},
	Run:      labelVariants,
}

func labelVariants(p *Pass) (Outcome, error) {
	var said []string
	var where []Place
	o := sound("no label is written in several ways")
	for _, col := range p.labelColumns() {
		variants := variantsOf(col)
		for _, rare := range slices.Sorted(maps.Keys(variants)) {
			common := variants[rare]
			var cells []string
			for i := range col.Len() {
				if label, ok := col.Label(i); ok && label == rare {
					where = append(where, Place{Row: i, Column: col})
					cells = append(cells, p.Table.Address(col, i))
				}
			}
			said = append(said, fmt.Sprintf("%q at %s may be %q%s", rare, wording.Some(cells, 5), common, foreignLetter(rare, common)))
			if col == p.Columns.Group {
				if o.Target.Labels == nil {
					o.Target.Labels = map[string]string{}
				}
				o.Target.Labels[rare] = common
			}
		}
	}
	if len(said) == 0 {
		return o, nil
	}
	target := o.Target
	o = breach(fmt.Sprintf("one label in two spellings: %s; each spelling counts as a label of its own here", wording.List(said)))
	o.Where, o.Target = where, target
	return o, nil
}

// labelColumns are the columns whose labels make groups.
func (p *Pass) labelColumns() []*readers.Column {
	if p.Design == nil {
		var text []*readers.Column
		for _, col := range p.Table.Columns {
			if col.Kind() == readers.TextColumn {
				text = append(text, col)
			}
		}
		return text
	}
	var all []*readers.Column
	for _, col := range append([]*readers.Column{p.Columns.Group, p.Columns.Subject}, p.Columns.Covariates...) {
		if col != nil && (col.Kind() != readers.NumberColumn || col == p.Columns.Group) {
			all = append(all, col)
		}
	}
	return all
}

// variantsOf maps each label that looks like a spelling of a commoner one to
// that one.
func variantsOf(col *readers.Column) map[string]string {
	count := map[string]int{}
	total := 0
	for i := range col.Len() {
		if label, ok := col.Label(i); ok {
			count[label]++
			total++
		}
	}
	labels := slices.Sorted(maps.Keys(count))
	variants := map[string]string{}
	if len(labels) > total/2 && len(labels) > 50 {
		return variants // a column of identifiers, not of labels
	}
	slices.SortStableFunc(labels, func(a, b string) int { return count[b] - count[a] })
	byFold := map[string]string{}
	for _, label := range labels {
		key := fold(label)
		if common, seen := byFold[key]; seen {
			variants[label] = common
			continue
		}
		byFold[key] = label
		if count[label]*20 > total {
			continue
		}
		for _, common := range labels {
			if count[common] >= 10*count[label] && oneLetterApart(fold(common), key) {
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
	for _, r := range cases.Fold().String(norm.NFKC.String(label)) {
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
			if unicode.In(r, unicode.Cyrillic, unicode.Greek) && lookAlike(unicode.ToLower(r)) != unicode.ToLower(r) {
				return fmt.Sprintf(" (%q holds U+%04X, %s)", label, r, scriptOf(r))
			}
		}
	}
	return ""
}

func scriptOf(r rune) string {
	if unicode.Is(unicode.Cyrillic, r) {
		return "a Cyrillic letter"
	}
	return "a Greek letter"
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
