package rules

import (
	"math"
	"slices"

	"footing/readers"
	"footing/rules/numeric"
)

// Profiles keeps what several rules ask of the numbers of a column, so that a
// long column is sorted once. It only saves time: a Pass without one answers
// the same.
type Profiles map[*readers.Column]*Profile

// Profile is what the numbers of one column look like. Its slices are shared
// and must not be changed.
type Profile struct {
	Rows     []int     // records with a number, in file order
	Values   []float64 // their numbers
	Sorted   []float64 // the same upwards
	Distinct int       // different numbers, or different labels when the column has no numbers
	Step     float64   // the power of ten of which all are multiples, as far as 12 digits tell; 0 when all are 0
	Set      bool      // chosen rather than measured
}

// Profile gives the profile of a column, made at the first question.
func (p *Pass) Profile(col *readers.Column) *Profile {
	if made, ok := p.Profiles[col]; ok {
		return made
	}
	made := newProfile(col)
	if p.Profiles != nil {
		p.Profiles[col] = made
	}
	return made
}

func newProfile(col *readers.Column) *Profile {
	f := &Profile{}
	if n := col.Count(readers.Number); n > 0 && col.Kind() == readers.NumberColumn {
		f.Rows, f.Values = make([]int, 0, n), make([]float64, 0, n)
		for i := range col.Len() {
			if v, ok := col.Number(i); ok {
				f.Rows, f.Values = append(f.Rows, i), append(f.Values, v)
			}
		}
	}
	if len(f.Values) == 0 {
		names, _ := col.Levels()
		f.Distinct = len(names)
		return f
	}
	f.Sorted = slices.Clone(f.Values)
	slices.Sort(f.Sorted)
	f.Step = resolution(f.Values)
	f.settle()
	return f
}

// settle counts the different numbers and tells whether they were chosen. A set
// column has at most a third as many different numbers as rows, each at least
// twice (up to a twentieth of the rows may be slips); or each number equally
// often and at least twice, as in a crossed design; or numbers in equal steps
// or growing by one factor, as nobody measures them.
func (f *Profile) settle() {
	n := len(f.Sorted)
	alone, least, most := 0, n, 0
	var levels []float64
	for from := 0; from < n; {
		to := from + 1
		for to < n && f.Sorted[to] == f.Sorted[from] {
			to++
		}
		f.Distinct++
		least, most = min(least, to-from), max(most, to-from)
		if to-from == 1 {
			alone++
		}
		levels = append(levels, f.Sorted[from])
		from = to
	}
	replicated := 3*f.Distinct <= n && 20*alone <= n
	evenly := least == most
	crossed := evenly && least >= 2
	f.Set = replicated || crossed || inSteps(levels, f.Step, evenly) || byFactors(levels)
}

// inSteps tells levels that lie equally far apart, up to rounding when the gap
// is wide enough for it not to matter. Neighbours on the grid of rounding are
// no such steps, unless each stands equally often, as row numbers do.
func inSteps(levels []float64, step float64, evenly bool) bool {
	if len(levels) < 5 {
		return false
	}
	gap := (levels[len(levels)-1] - levels[0]) / float64(len(levels)-1)
	slack := 1e-6 * gap
	if gap > 5*step {
		slack += 1.01 * step
	} else if gap < 1.5*step && !evenly {
		return false
	}
	for k := 1; k < len(levels); k++ {
		if math.Abs(levels[k]-levels[k-1]-gap) > slack {
			return false
		}
	}
	return true
}

// byFactors tells levels of which each is the one before times one factor.
func byFactors(levels []float64) bool {
	if len(levels) < 4 || levels[0] <= 0 || levels[1] < 1.2*levels[0] {
		return false
	}
	for k := 2; k < len(levels); k++ {
		if math.Abs(levels[k]/levels[k-1]/(levels[1]/levels[0])-1) > 0.03 {
			return false
		}
	}
	return true
}

// Levels gives the different numbers upwards with how often each stands.
func (f *Profile) Levels() (values []float64, times []int) {
	for k, v := range f.Sorted {
		if k == 0 || v != f.Sorted[k-1] {
			values, times = append(values, v), append(times, 0)
		}
		times[len(times)-1]++
	}
	return values, times
}

// Quantile is the number that a share of the column lies below.
func (f *Profile) Quantile(share float64) float64 { return numeric.Quantile(f.Sorted, share) }

// resolution is the step to which values were rounded: the smallest power of
// ten of which all are multiples, no finer than 1e-12 of the largest.
func resolution(values []float64) float64 {
	largest := 0.0
	for _, v := range values {
		largest = max(largest, math.Abs(v))
	}
	if largest == 0 {
		return 0
	}
	exponent := int(math.Floor(math.Log10(largest)))
	// A finer step has all values of a coarser one as multiples, so that the
	// search goes on from the value that stopped it.
	at, stop := 0, exponent-12
	for at < len(values) && exponent > stop {
		if multiple(values[at], exponent) {
			at++
		} else {
			exponent--
		}
	}
	return math.Pow10(exponent)
}

// multiple tells multiples of a power of ten, up to what doubles can show.
func multiple(v float64, exponent int) bool {
	var k float64
	if exponent < 0 {
		k = v * math.Pow10(-exponent)
	} else {
		k = v / math.Pow10(exponent)
	}
	return math.Abs(k-math.Round(k)) <= 1e-6+4e-16*math.Abs(k)
}

// countsRows tells identifiers: labels that are all different, or whole numbers
// of which each is the one before and one more.
func countsRows(col *readers.Column, f *Profile) bool {
	if len(f.Values) == 0 {
		_, codes := col.Levels()
		filled := 0
		for _, c := range codes {
			if c >= 0 {
				filled++
			}
		}
		return f.Distinct > 1 && f.Distinct == filled
	}
	for k := 1; k < len(f.Values); k++ {
		if f.Values[k] != f.Values[k-1]+1 {
			return false
		}
	}
	return len(f.Values) > 1
}
