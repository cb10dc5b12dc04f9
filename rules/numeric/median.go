package numeric

import (
	"math"
	"slices"
)

// medianInPlace returns the median and leaves x in another order.
func medianInPlace(x []float64) float64 {
	n := len(x)
	if n == 0 || slices.ContainsFunc(x, math.IsNaN) {
		return math.NaN()
	}
	upper := selectInPlace(x, n/2)
	if n%2 == 1 {
		return upper
	}
	lower := slices.Max(x[:n/2])
	return lower + (upper-lower)/2
}

// selectInPlace returns what would stand at position k were x sorted, and
// leaves nothing larger before it and nothing smaller after it (Hoare 1961,
// with the median of three as pivot). x must hold no NaN.
func selectInPlace(x []float64, k int) float64 {
	from, to := 0, len(x)-1
	// Bad luck with pivots costs time quadratic in n; sorting bounds it.
	for tries := 0; to-from > 16; tries++ {
		if tries > 64 {
			break
		}
		pivot := middleOfThree(x[from], x[from+(to-from)/2], x[to])
		i, j := from, to
		for i <= j {
			for x[i] < pivot {
				i++
			}
			for x[j] > pivot {
				j--
			}
			if i <= j {
				x[i], x[j] = x[j], x[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			to = j
		case k >= i:
			from = i
		default:
			return x[k]
		}
	}
	slices.Sort(x[from : to+1])
	return x[k]
}

func middleOfThree(a, b, c float64) float64 {
	return max(min(a, b), min(max(a, b), c))
}
