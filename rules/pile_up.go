package rules

import (
	"fmt"
	"math"
	"slices"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// PileUp asks for ties at the least or greatest value of a column.
var PileUp = &Rule{
	Name:   "pile-up",
	Family: OfTable,
	Asks:   "Do values pile up at the least or greatest one?",
	Why:    "An instrument or a scale that stops there has cut off what lay beyond: these are limits and not measurements, and the line bends towards them.",
	Method: "binomial chance of so many ties in the last cell of the grid of rounding, among the outer quarter of the column, " +
		"as if this cell were filled twice as densely as the quarter is; and three times as many as in the five cells beside it hold on average",
	Limit:    "three ties or more, and a chance of at most 0.2 % over all columns and both ends; columns set by design are not asked",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.AskLimit},
	Run:      pileUp,
}

func pileUp(p *Pass) (Outcome, error) {
	found := p.tally()
	var asked []*readers.Column
	for _, col := range p.measured() {
		if f := p.Profile(col); !p.mayBeSet(col) && len(f.Values) >= 8 && f.Distinct > 2 {
			asked = append(asked, col)
		}
	}
	smallest := 1.0
	for _, col := range asked {
		f := p.Profile(col)
		for _, end := range []string{"least", "greatest"} {
			limit, ties, chance := tiesAt(f, end == "greatest")
			chance = min(1, chance*2*float64(len(asked)))
			smallest = min(smallest, chance)
			if ties < 3 || chance > tableChance {
				continue
			}
			var where []Place
			for k, v := range f.Values {
				if v == limit {
					where = append(where, Place{Row: f.Rows[k], Column: col})
				}
			}
			found.set(col, where, fmt.Sprintf("%s of %s are %s, its %s value", wording.Count(ties, "row"), col.Title(), wording.Number(limit), end))
		}
	}
	o := found.outcome("no more ties at the ends than rounding brings about", func(words string, _ int) string {
		return words + ": perhaps a limit of the instrument or the scale, or a value filled in"
	})
	o.Evidence = map[string]any{"chance": smallest}
	return o, nil
}

// tiesAt counts the rows at one end and gives the chance of so many: of the m
// values in the outer quarter, which spans w cells of the grid, k - 1 more fall
// into the last one when each does with probability 2/w.
func tiesAt(f *Profile, greatest bool) (limit float64, ties int, chance float64) {
	v := f.Sorted
	if greatest {
		v = make([]float64, len(f.Sorted))
		for i, x := range f.Sorted {
			v[len(v)-1-i] = -x
		}
	}
	limit = v[0]
	for ties < len(v) && v[ties] == limit {
		ties++
	}
	// The quarter begins behind the ties when these fill it themselves.
	quarter := v[min(len(v)-1, max(len(v)/4, ties+len(v)/10))]
	m := ties
	for m < len(v) && v[m] <= quarter {
		m++
	}
	// Rounding to significant digits makes a coarser grid at the greater end.
	step := resolution(v[:m])
	cells := math.Round((quarter-limit)/step) + 1
	beside, _ := slices.BinarySearch(v, limit+5.5*step)
	if greatest {
		limit = -limit
	}
	if ties < 3 || float64(ties) < 3*max(0.2, float64(beside-ties)/5) || cells < 4 {
		return limit, ties, 1
	}
	return limit, ties, binomialUpper(m-1, ties-1, min(1, 2/cells))
}

// binomialUpper is the chance of k or more out of n, each with probability p.
func binomialUpper(n, k int, p float64) float64 {
	if k <= 0 || p >= 1 {
		return 1
	}
	if p <= 0 {
		return 0
	}
	sum := 0.0
	for i := k; i <= n; i++ {
		term := math.Exp(logChoose(n, i) + float64(i)*math.Log(p) + float64(n-i)*math.Log1p(-p))
		sum += term
		if float64(i) > float64(n)*p && term < 1e-18*sum {
			break
		}
	}
	return min(1, sum)
}
