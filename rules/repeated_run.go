package rules

import (
	"fmt"
	"math"

	"footing/rules/remedy"
	"footing/rules/wording"
)

// RepeatedRun asks for values that follow each other twice.
var RepeatedRun = &Rule{
	Name:   "repeated-run",
	Family: OfTable,
	Asks:   "Does a run of values stand in the column a second time?",
	Why:    "Measurements do not repeat each other in sequence; a run that does was copied, filled down, or pasted over others.",
	Method: "looks for three or more values in consecutive rows that stand again, digit for digit, elsewhere in the column, against the chance of it: " +
		"pairs of places, times the share of equal pairs, times the share of equal pairs that an equal pair follows, once for each further value",
	Limit:    "a chance of at most 0.2 % over all columns; columns set by design are not asked",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.WithoutRun},
	Run:      repeatedRun,
}

// run is a stretch that stands twice, as positions in a profile.
type run struct{ first, second, length int }

func repeatedRun(p *Pass) (Outcome, error) {
	found := p.tally()
	var later []Place
	smallest := 1.0
	columns := p.measured()
	for _, col := range columns {
		f := p.Profile(col)
		if p.mayBeSet(col) || len(f.Values) < 6 {
			continue
		}
		runs := repeats(f)
		if len(runs) == 0 {
			continue
		}
		match, follow := f.agreements(runs)
		for _, r := range runs {
			n := float64(len(f.Values))
			chance := min(1, n*n/2*match*math.Pow(follow, float64(r.length-1))*float64(len(columns)))
			smallest = min(smallest, chance)
			if chance > tableChance {
				continue
			}
			var where []Place
			for k := range 2 * r.length {
				at := r.first + k
				if k >= r.length {
					at = r.second + k - r.length
				}
				where = append(where, Place{Row: f.Rows[at], Column: col})
			}
			found.set(col, where, fmt.Sprintf("%s:%s = %s:%s",
				p.Table.Address(col, f.Rows[r.first]), p.Table.Address(col, f.Rows[r.first+r.length-1]),
				p.Table.Address(col, f.Rows[r.second]), p.Table.Address(col, f.Rows[r.second+r.length-1])))
			if p.Uses(col) {
				later = append(later, where[r.length:]...)
			}
		}
	}
	o := found.outcome("no run of values stands twice", func(words string, _ int) string {
		return "runs of values that stand twice: " + words + fmt.Sprintf(" (chance %s)", wording.Figure(smallest, 1))
	})
	o.Evidence = map[string]any{"chance": smallest}
	o.Target.Rows = p.target(later)
	return o, nil
}

// repeats finds the longest runs that stand twice without overlap, each place
// in at most one, in consecutive rows of the table. A single value that goes on
// is no run.
func repeats(f *Profile) []run {
	type triple [3]float64
	known := map[triple]int{}
	var runs []run
	for k := 0; k+2 < len(f.Values); {
		key := triple{f.Values[k], f.Values[k+1], f.Values[k+2]}
		head, seen := known[key]
		if f.Rows[k+2] != f.Rows[k]+2 || key[0] == key[1] && key[1] == key[2] {
			k++
			continue
		}
		if !seen || head+3 > k {
			if !seen {
				known[key] = k
			}
			k++
			continue
		}
		length := 3
		for head+length < k && k+length < len(f.Values) && f.Values[head+length] == f.Values[k+length] &&
			f.Rows[k+length] == f.Rows[k+length-1]+1 && f.Rows[head+length] == f.Rows[head+length-1]+1 {
			length++
		}
		runs = append(runs, run{head, k, length})
		k += length
	}
	return runs
}

// agreements is the share of equal pairs of values, by count and by what the
// step of rounding explains, and the share of pairs that agree when the pair
// before them does. The runs in question are left out of both.
func (f *Profile) agreements(runs []run) (match, follow float64) {
	skip := make([]bool, len(f.Values))
	for _, r := range runs {
		for k := range r.length {
			skip[r.second+k] = true
		}
	}
	type pair [2]float64
	singles, doubles := map[float64]float64{}, map[pair]float64{}
	n := 0.0
	for k, v := range f.Values {
		if skip[k] {
			continue
		}
		n++
		singles[v]++
		if k+1 < len(f.Values) && !skip[k+1] {
			doubles[pair{v, f.Values[k+1]}]++
		}
	}
	equal, both := 0.0, 0.0
	for _, times := range singles {
		equal += times * (times - 1) / 2
	}
	for _, times := range doubles {
		both += times * (times - 1) / 2
	}
	pairs := max(1, n*(n-1)/2)
	match = equal / pairs
	// Of normal values with this step: u over 2 sqrt(pi) s.
	if spread := (f.Quantile(0.75) - f.Quantile(0.25)) / 1.349; spread > 0 {
		match = max(match, f.Step/(2*math.Sqrt(math.Pi)*spread))
	}
	match = min(1, max(match, 1/pairs))
	follow = match
	if equal >= 5 {
		follow = min(1, max(match, both/equal))
	}
	return match, follow
}
