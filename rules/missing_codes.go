package rules

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"footing/readers"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MissingCodes asks for values that may stand for a missing one.
var MissingCodes = &Rule{
	Name:   "missing-codes",
	Family: OfTable,
	Asks:   "Does a value such as -999 stand for a missing one?",
	Why:    "One -999 taken for a measurement can turn a slope round.",
	Method: "looks for numbers that are habitual codes (all nines, repeated sevens or eights, 0, -1, other repeated whole numbers), outside the bulk of their column " +
		"(the middle 96 % of the numbers that are no such codes), and repeated or impossible beside the rest, as a negative number among positive ones is. " +
		"These are used, and answers without them are told. Codes in words are taken as missing",
	Limit: "all nines beyond the bulk by its width, or by a quarter of it when repeated or impossible; 0 and -1 repeated, or -1 impossible, by half of it; repeated sevens or eights by its width; " +
		"other repeated whole numbers by twice it; and beyond the farthest of the others, unless it is a repeated or impossible nine, 0 or -1. 0 is no suspect in a column that was set by design. Two codes in words, or one that may mean another thing (a dash, nd)",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.AsMissing},
	Run:      missingCodes,
}

func missingCodes(p *Pass) (Outcome, error) {
	text, numbers := p.codesInWords(), p.tally()
	var flags []string
	for _, col := range p.measured() {
		f := p.Profile(col)
		for _, code := range suspectedCodes(f, p.mayBeSet(col)) {
			var where []Place
			var cells []string
			for k, v := range f.Values {
				if v == code {
					where = append(where, Place{Row: f.Rows[k], Column: col})
					if len(cells) <= mostSaid {
						cells = append(cells, p.Table.Address(col, f.Rows[k]))
					}
				}
			}
			numbers.set(col, where, fmt.Sprintf("%s is %s at %s", col.Title(), wording.Number(code), someOf(cells, len(where))))
			if p.Uses(col) {
				flags = append(flags, "--missing "+wording.Number(code))
			}
		}
	}
	if numbers.used.total == 0 {
		o := text.outcome()
		if numbers.unused.total > 0 {
			o.Message += "; only in columns that are not used: " + numbers.unused.words()
			o.Where = append(o.Where, numbers.unused.where...)
		}
		return o, nil
	}
	slices.Sort(flags)
	flags = slices.Compact(flags)
	o := numbers.outcome("", func(words string, _ int) string {
		return words + ", far from all other values: perhaps a code for a missing value; it is used as a number here"
	})
	if len(text.where) > 0 {
		o.Message += "; " + text.message()
		o.Where = append(o.Where, text.where...)
	}
	o.Advice = "run again with " + strings.Join(flags, " ") + " if the value stands for a missing one; mend the cell if it was mistyped"
	o.Evidence = map[string]any{"cells": len(numbers.used.where), "flags": flags}
	o.Target.Rows = p.target(numbers.used.where)
	return o, nil
}

// someOf lists the first cells and says how many more there are.
func someOf(cells []string, total int) string {
	shown := cells[:min(len(cells), mostSaid)]
	if total > len(shown) {
		return fmt.Sprintf("%s and %d more", strings.Join(shown, ", "), total-len(shown))
	}
	return wording.List(shown)
}

// wordCodes are the codes in words of the columns in use.
type wordCodes struct {
	times map[string]int
	where []Place
}

func (p *Pass) codesInWords() wordCodes {
	w := wordCodes{times: map[string]int{}}
	for _, col := range p.Table.Columns {
		if !p.Uses(col) || col == p.Columns.Label || col == p.Columns.Order || col.Count(readers.Code) == 0 {
			continue
		}
		limits := col.Kind() == readers.NumberColumn && tellsLimits(col)
		for i := range col.Len() {
			if col.CellKind(i) != readers.Code || contentOf(col, i, limits) == beyondLimit {
				continue
			}
			if cell := col.Cell(i); !cell.Declared {
				w.times[strings.ToLower(cell.Text)]++
				w.where = append(w.where, Place{Row: i, Column: col})
			} else {
				w.times[cell.Text+", as you said"]++
			}
		}
	}
	return w
}

func (w wordCodes) message() string {
	var named []string
	for code, n := range w.times {
		if plain, declared := strings.CutSuffix(code, ", as you said"); declared {
			named = append(named, fmt.Sprintf("%q (%d, as you said)", plain, n))
		} else {
			named = append(named, fmt.Sprintf("%q (%d)", code, n))
		}
	}
	slices.Sort(named)
	return "taken as missing: " + wording.List(named)
}

// outcome tells of codes in words alone.
func (w wordCodes) outcome() Outcome {
	if len(w.times) == 0 {
		return sound("no code for a missing value was seen")
	}
	kinds, doubtful := 0, false
	for code := range w.times {
		if strings.HasSuffix(code, ", as you said") {
			continue
		}
		kinds++
		switch code {
		case "-", "–", "nd", "n.d.", "?", "none":
			doubtful = true
		}
	}
	o := sound(w.message())
	o.Where = w.where
	if kinds < 2 && !doubtful {
		return o
	}
	o.Answer = Breach
	if doubtful {
		o.Message += "; a dash, nd, none or a question mark may also mean zero, below a limit, or a doubt"
	} else {
		o.Message += "; two codes may have meant two things"
	}
	o.Advice = "write one code, or leave the cell empty, wherever a value is missing"
	return o
}

// suspectedCodes lists the numbers of a column that may be codes.
func suspectedCodes(f *Profile, set bool) []float64 {
	if len(f.Sorted) == 0 {
		return nil
	}
	values, times := f.Levels()
	var bulk []float64
	for k, v := range values {
		if !habitualCode(v, times[k], set) {
			for range times[k] {
				bulk = append(bulk, v)
			}
		}
	}
	if len(bulk) < 3 {
		return nil
	}
	low, high := numeric.Quantile(bulk, 0.02), numeric.Quantile(bulk, 0.98)
	if low == high {
		low, high = bulk[0], bulk[len(bulk)-1]
	}
	var codes []float64
	for k, v := range values {
		if !habitualCode(v, times[k], set) {
			continue
		}
		gap := max(low-v, v-high)
		impossible := v < 0 && bulk[0] >= 0
		// A code that nothing but its distance speaks for must lie beyond even the
		// farthest of the others: long tails come through 99 and 77 too.
		farthest := max(bulk[0]-v, v-bulk[len(bulk)-1])
		switch {
		case times[k] == 1 && !impossible && farthest <= 0.5*(high-low),
			!allOf(v, '9') && v != 0 && v != -1 && farthest <= 0:
			continue
		}
		if enough, asked := farGap(v, times[k], impossible); asked && gap > 0 && gap > enough*(high-low) {
			codes = append(codes, v)
		}
	}
	return codes
}

// habitualCode tells values that people write for a missing one. Whole numbers
// that are no habit count only when they are repeated.
func habitualCode(v float64, times int, set bool) bool {
	switch {
	case v == 0:
		return times > 1 && !set
	case v == -1 || allOf(v, '9'):
		return true
	case times > 1 && v == math.Trunc(v):
		return math.Abs(v) >= 10 && !set || allOf(v, '8') || allOf(v, '7')
	}
	return false
}

// farGap is how far beyond the bulk, in widths of it, a code lies; asked is
// false when it would have to be repeated or impossible.
func farGap(v float64, times int, impossible bool) (gap float64, asked bool) {
	repeated := times > 1
	switch {
	case allOf(v, '9') && (repeated || impossible):
		return 0.25, true
	case (allOf(v, '8') || allOf(v, '7')) && repeated:
		return 1, true
	case allOf(v, '9'):
		return 1, true
	case v == 0 || v == -1:
		return 0.5, repeated || impossible
	}
	return 2, repeated
}

// allOf tells -9, 99, -999, 99.9 and the like: one digit over and over, and
// more than a single one unless it is negative.
func allOf(v float64, digit byte) bool {
	if k := v * 1000; k != math.Trunc(k) {
		return false // no code has more decimals, and most measurements end here
	}
	n := 0
	for _, c := range []byte(wording.Number(v)) {
		switch c {
		case digit:
			n++
		case '-', '.':
		default:
			return false
		}
	}
	return n > 1 || n == 1 && v < 0
}
