package rules

import (
	"fmt"
	"math"

	"footing/rules/remedy"
	"footing/rules/wording"
)

// RoundingHeaps asks for last digits that come too often.
var RoundingHeaps = &Rule{
	Name:   "rounding-heaps",
	Family: OfTable,
	Asks:   "Are some values rounded more coarsely than others of their column?",
	Why:    "Values read to the nearest 5 or 10 beside finer ones are less exact than they look, and often come from another observer, instrument or day.",
	Method: "binomial chance of so many multiples of 10, 5 and 2 in the last digit, once with a fixed number of decimals and once with a fixed number of significant digits, " +
		"whichever explains the column better; digits that fewer than 1 in 20 values have are passed over",
	Limit: "a chance of at most 0.2 % over all columns and multiples; at least 20 rows that span 30 steps, or five times the root of their number. A column in which all values are multiples has a coarser step, which is no heap. " +
		"Columns set by design are not asked",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.AskReading},
	Run:      roundingHeaps,
}

// heap is how often the last digit is a multiple.
type heap struct {
	of     int
	times  int
	rows   int
	step   float64
	chance float64
}

func roundingHeaps(p *Pass) (Outcome, error) {
	found := p.tally()
	smallest, asked := 1.0, 0
	worst := map[int]heap{}
	columns := p.measured()
	for k, col := range columns {
		f := p.Profile(col)
		if p.mayBeSet(col) || len(f.Values) < 20 {
			continue
		}
		if h, ok := heapOf(f); ok {
			asked++
			worst[k] = h
		}
	}
	for k, col := range columns {
		h, ok := worst[k]
		if !ok {
			continue
		}
		chance := min(1, h.chance*float64(asked))
		smallest = min(smallest, chance)
		if chance > tableChance {
			continue
		}
		found.set(col, []Place{whole(col)}, h.words(col.Title()))
	}
	o := found.outcome("last digits are as even as measurements make them", func(words string, _ int) string {
		return words + ": perhaps read more coarsely than the others"
	})
	o.Evidence = map[string]any{"chance": smallest}
	return o, nil
}

func (h heap) words(column string) string {
	expected := wording.Percent(1 / float64(h.of))
	share := wording.Percent(float64(h.times) / float64(h.rows))
	if h.step == 0 {
		return fmt.Sprintf("%s of %s end in a multiple of %d in the last digit (%s expected)", share, column, h.of, expected)
	}
	return fmt.Sprintf("%s of %s are multiples of %s, where the others go by %s (%s expected)",
		share, column, wording.Number(float64(h.of)*h.step), wording.Number(h.step), expected)
}

// mostHeaped is how many numbers show a heap; longer columns are seen at as many
// places, evenly spaced.
const mostHeaped = 20000

// sample takes at most so many numbers of a profile, evenly spaced in the file.
func (f *Profile) sample(most int) *Profile {
	n := len(f.Values)
	if n <= most {
		return f
	}
	s := &Profile{Step: f.Step, Values: make([]float64, most), Sorted: make([]float64, most)}
	for k := range most {
		s.Values[k] = f.Values[k*n/most]
		s.Sorted[k] = f.Sorted[k*n/most]
	}
	return s
}

// heapOf finds the multiple that comes most unexpectedly often, under the way of
// rounding that explains the column better; ok is false when the column spans
// too few steps to tell.
func heapOf(f *Profile) (heap, bool) {
	f = f.sample(mostHeaped)
	decimals, ok := finestDecimals(f)
	if !ok {
		return heap{}, false
	}
	fixed, ok := worstMultiple(f, func(float64) int { return decimals })
	if !ok {
		return heap{}, false
	}
	fixed.step = math.Pow10(-decimals)
	digits := finestDigits(f)
	if digits == 0 {
		return fixed, true
	}
	significant, ok := worstMultiple(f, func(v float64) int { return digits - 1 - exponentOf(v) })
	if ok && significant.chance > fixed.chance {
		return significant, true
	}
	return fixed, true
}

// finestDecimals is the number of decimals, negative for tens and more, of
// which at least 1 in 20 values, and three, have need.
func finestDecimals(f *Profile) (int, bool) {
	if f.Step == 0 {
		return 0, false
	}
	decimals := -int(math.Round(math.Log10(f.Step)))
	most := max(2, len(f.Values)/20)
	for range 15 {
		finer := 0
		for _, v := range f.Values {
			if !multiple(v, 1-decimals) {
				finer++
			}
		}
		if finer > most {
			break
		}
		decimals--
	}
	step := math.Pow10(-decimals)
	// At its edges a narrow column favours some digits; the more rows, the
	// smaller the excess that would be seen.
	return decimals, f.Quantile(0.95)-f.Quantile(0.05) >= step*max(30, 5*math.Sqrt(float64(len(f.Values))))
}

// finestDigits is the same for significant digits, 0 when there are none.
func finestDigits(f *Profile) int {
	most := max(2, len(f.Values)/20)
	for digits := 12; digits > 1; digits-- {
		finer := 0
		for _, v := range f.Values {
			if v != 0 && !multiple(v, exponentOf(v)-digits+2) {
				finer++
			}
		}
		if finer > most {
			return digits
		}
	}
	return 0
}

// exponentOf is the power of ten of the first digit.
func exponentOf(v float64) int {
	if v == 0 {
		return 0
	}
	// Rounding to a few digits may raise 9.996 to 10.00; that is the digit seen.
	return int(math.Floor(math.Log10(math.Abs(v)) + 1e-12))
}

// worstMultiple counts multiples of 10, 5 and 2 in the last decimal. When all
// values are multiples, that is the step of the column, and no heap.
func worstMultiple(f *Profile, decimals func(float64) int) (heap, bool) {
	times := map[int]int{}
	rows := 0
	for _, v := range f.Values {
		d := decimals(v)
		if v == 0 || !multiple(v, -d) {
			continue
		}
		rows++
		k := math.Round(math.Abs(v) * math.Pow10(d))
		for _, of := range []int{2, 5, 10} {
			if math.Mod(k, float64(of)) == 0 {
				times[of]++
			}
		}
	}
	if rows < 20 {
		return heap{}, false
	}
	worst := heap{of: 10, rows: rows, times: times[10], chance: 1}
	base := 1
	for _, of := range []int{2, 5} {
		if times[of] == rows {
			base = of // the step itself
		}
	}
	tests := 0
	for _, of := range []int{10, 5, 2} {
		if of <= base || of%base != 0 {
			continue
		}
		tests++
		if times[of] == rows {
			continue
		}
		h := heap{of: of, times: times[of], rows: rows, chance: binomialUpper(rows, times[of], float64(base)/float64(of))}
		if h.chance < worst.chance {
			worst = h
		}
	}
	worst.chance = min(1, worst.chance*float64(max(1, tests)))
	return worst, true
}
