package numeric

import (
	"cmp"
	"math"
	"slices"
)

// Holm returns p values adjusted for their number by Holm's step-down method
// (1979): the chance of any false claim among those at or below a level is at
// most that level. The order is kept. A NaN stays NaN and is not counted among
// the tests.
func Holm(p []float64) []float64 {
	adjusted := slices.Clone(p)
	var rank []int
	for i, v := range p {
		if !math.IsNaN(v) {
			rank = append(rank, i)
		}
	}
	slices.SortStableFunc(rank, func(a, b int) int { return cmp.Compare(p[a], p[b]) })
	largest := 0.0
	for k, i := range rank {
		largest = max(largest, min(1, float64(len(rank)-k)*p[i]))
		adjusted[i] = largest
	}
	return adjusted
}
