package rules

import (
	"fmt"
	"math"
	"slices"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// FarValues asks for numbers far from the bulk of their group.
var FarValues = &Rule{
	Name:   "far-values",
	Family: OfTable,
	Asks:   "Does a number lie far from all others of its group?",
	Why:    "A slipped point or digit makes a number that reads well and is wrong; far out, one such row can make the slope.",
	Method: "distance from the median of the group, in robust standard deviations (1.4826 times the median absolute deviation, over all groups together); " +
		"more where the outer tenth on that side lies further out; and for positive numbers with a long tail above, or wide beside their size, on the scale of logarithms too. " +
		"Suspected codes, day numbers and swapped cells are left to their own rules. A number that comes among its like when divided or multiplied by 10, 100 or 1000 is told as a slipped point",
	Limit: "7 + 60/n robust standard deviations with n numbers in the column, and 4.5 + 30/n of the logarithms; at most a twentieth of the numbers; of a column set by design, numbers beyond the others by more than twice their range. " +
		"Normal measurements do not reach so far in 1 of 500 tables",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendPoint, remedy.WithoutDoubted},
	Run:      farValues,
}

func farValues(p *Pass) (Outcome, error) {
	found := p.tally()
	var slips []model.Change
	for _, col := range p.measured() {
		b := p.bulkOf(col)
		far := b.far()
		if len(far) == 0 {
			continue
		}
		told := p.toldElsewhere(col)
		low, high := b.without(far, told)
		for _, k := range far {
			if told[b.f.Rows[k]] {
				continue
			}
			row, v := b.f.Rows[k], b.f.Values[k]
			factor := b.slip(k)
			found.cell(col, row, func() string {
				said := fmt.Sprintf("%s %s is %s beside %s to %s", p.Table.Address(col, row), col.Title(), wording.Number(v), wording.Number(low), wording.Number(high))
				if factor != 0 {
					said += fmt.Sprintf(" (%s with the point moved?)", wording.Number(v*factor))
				}
				return said
			})
			if factor != 0 {
				slips = append(slips, model.Change{Row: row, Column: col, Value: v * factor})
			}
		}
	}
	o := found.outcome("no number lies far from the others of its group", func(words string, n int) string {
		return words + ": far from the bulk; mistyped, in another unit, or truly so?"
	})
	if o.Answer == Breach {
		o.Target.Rows = p.target(found.used.where)
		o.Target.Values = p.changes(slips)
	}
	return o, nil
}

// bulk is where the numbers of a column lie, group by group.
type bulk struct {
	f         *Profile
	centre    []float64 // of each number's group
	scale     float64   // robust standard deviation about it
	logCentre []float64 // the same for logarithms; nil unless they are nearly all positive, with a long tail above or wide beside their size
	logScale  float64
	below     float64 // scale on that side, from the outer tenth; at least scale
	above     float64
	set       bool
}

// bulkOf measures a column against its groups, or against the whole when there
// are none or they are too small.
func (p *Pass) bulkOf(col *readers.Column) *bulk {
	f := p.Profile(col)
	b := &bulk{f: f, set: p.mayBeSet(col)}
	if len(f.Values) < 8 {
		return b
	}
	group := make([]int32, len(f.Values))
	groups := 1
	if g := p.Columns.Group; g != nil {
		names, codes := g.Levels()
		if 4*len(names) <= len(f.Values) {
			groups = len(names) + 1
			for k, i := range f.Rows {
				group[k] = codes[i] + 1
			}
		}
	}
	b.centre, b.scale = aboutMedians(f.Values, group, groups)
	rest := make([]float64, len(f.Values))
	for k, v := range f.Values {
		rest[k] = v - b.centre[k]
	}
	slices.Sort(rest)
	const tenth = 1.2816 // normal quantile of 0.9
	below, above := -numeric.Quantile(rest, 0.1)/tenth, numeric.Quantile(rest, 0.9)/tenth
	b.below, b.above = max(b.scale, below), max(b.scale, above)
	tail := above >= (1.6-2.5/math.Sqrt(float64(len(rest))))*below
	// A few codes or slips below 0 do not make a column of positive numbers
	// another one, and neither do small ones that rounding made 0.
	negative, _ := slices.BinarySearch(f.Sorted, 0)
	if 20*negative <= len(f.Sorted) && f.Step > 0 {
		logs := make([]float64, len(f.Values))
		for k, v := range f.Values {
			logs[k] = math.Log(max(v, f.Step/2))
		}
		centre, scale := aboutMedians(logs, group, groups)
		// A column that is even, and narrow beside its own size, is judged as it
		// is; a wide one may have a long tail that few rows do not show.
		if tail || scale > 0.2 {
			b.logCentre, b.logScale = centre, scale
		}
	}
	return b
}

// without is the range of the numbers that lie neither far out nor are doubted
// by another rule.
func (b *bulk) without(far []int, told map[int]bool) (low, high float64) {
	out := make(map[int]bool, len(far))
	for _, k := range far {
		out[k] = true
	}
	low, high = math.Inf(1), math.Inf(-1)
	for k, v := range b.f.Values {
		if !out[k] && !told[b.f.Rows[k]] {
			low, high = min(low, v), max(high, v)
		}
	}
	return low, high
}

// aboutMedians gives each value the median of its group, of all when the group has
// fewer than four, and the robust standard deviation about it.
func aboutMedians(values []float64, group []int32, groups int) (centre []float64, scale float64) {
	of := make([][]float64, groups)
	for k, v := range values {
		of[group[k]] = append(of[group[k]], v)
	}
	middle := make([]float64, groups)
	all := numeric.Median(values)
	spent := 0
	for g, v := range of {
		middle[g] = all
		if len(v) >= 4 {
			middle[g] = numeric.Median(v)
			spent++
		}
	}
	centre = make([]float64, len(values))
	rest := make([]float64, len(values))
	for k, v := range values {
		centre[k] = middle[group[k]]
		rest[k] = math.Abs(v - centre[k])
	}
	// With many ties at the middle the median deviation is 0; a wider share of
	// the deviations then stands for it.
	if scale = numeric.Median(rest) / 0.6745; scale == 0 {
		slices.Sort(rest)
		if scale = numeric.Quantile(rest, 0.75) / 1.1503; scale == 0 {
			scale = numeric.Quantile(rest, 0.9) / 1.6449
		}
	}
	return centre, scale * math.Sqrt(float64(len(values))/float64(max(1, len(values)-spent)))
}

// isFar tells a number far from its like: on its own scale, and when a long tail
// above asks for it on that of logarithms too.
func (b *bulk) isFar(k int) bool {
	v, n := b.f.Values[k], float64(len(b.f.Values))
	limit := 7 + 60/n
	if d := v - b.centre[k]; d <= limit*b.above && -d <= limit*b.below {
		return false
	}
	return b.logCentre == nil || v <= 0 || math.Abs(math.Log(v)-b.logCentre[k]) > (4.5+30/n)*b.logScale
}

// far lists the numbers that lie far out, as positions in the profile.
func (b *bulk) far() []int {
	n := len(b.f.Values)
	if n < 8 || !(b.scale > 0) {
		return nil
	}
	if b.set {
		return b.beyondLevels()
	}
	var far []int
	for k := range b.f.Values {
		if b.isFar(k) {
			far = append(far, k)
		}
	}
	if len(far) > max(2, n/20) {
		return nil // so many are another kind of rows, or a long tail
	}
	return far
}

// beyondLevels lists numbers of a set column that lie beyond all others by more
// than twice the range of these.
func (b *bulk) beyondLevels() []int {
	v := b.f.Sorted
	n := len(v)
	most := max(2, n/20)
	low, high := v[0], v[n-1]
	for k := 1; k <= most; k++ {
		if v[n-k]-v[n-k-1] > 2*(v[n-k-1]-v[0]) && v[n-k-1] > v[0] {
			high = v[n-k-1]
		}
		if v[k]-v[k-1] > 2*(v[n-1]-v[k]) && v[n-1] > v[k] {
			low = v[k]
		}
	}
	if low == v[0] && high == v[n-1] {
		return nil
	}
	var far []int
	for k, x := range b.f.Values {
		if x < low || x > high {
			far = append(far, k)
		}
	}
	return far
}

// slip is the factor that brings the k-th number among its like, 0 when no
// moved point does.
func (b *bulk) slip(k int) float64 {
	best, nearest := 0.0, 2.5
	for _, factor := range []float64{0.1, 10, 0.01, 100, 0.001, 1000} {
		v := b.f.Values[k] * factor
		if d := math.Abs(v-b.centre[k]) / b.scale; d < nearest && !b.set || b.set && slices.Contains(b.f.Values, v) {
			best, nearest = factor, d
		}
	}
	return best
}
