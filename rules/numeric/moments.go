package numeric

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// Mean returns the arithmetic mean, right to the last digit or two. An empty x
// gives NaN.
func Mean(x []float64) float64 {
	m, rest := meanParts(x)
	return m + rest
}

// meanParts returns the mean as a sum of two numbers: a first mean, and the
// mean of what is left of x off it. The second gives back what rounding took
// from the first, which counts where the values have a large common part.
func meanParts(x []float64) (m, rest float64) {
	n := float64(len(x))
	m = floats.Sum(x) / n
	for _, v := range x {
		rest += v - m
	}
	return m, rest / n
}

// SampleVariance returns the sum of squares about the mean divided by n - 1;
// fewer than two values give NaN. It takes the mean first, so that a large
// common part does not cost digits.
func SampleVariance(x []float64) float64 {
	if len(x) < 2 {
		return math.NaN()
	}
	m2, _, _ := centralMoments(x)
	n := float64(len(x))
	return m2 * n / (n - 1)
}

// SampleSD returns the square root of SampleVariance.
func SampleSD(x []float64) float64 { return math.Sqrt(SampleVariance(x)) }

// Skewness returns m3 / m2^1.5, with moments about the mean divided by n. Values
// that are all equal, or none, give NaN.
func Skewness(x []float64) float64 {
	m2, m3, _ := centralMoments(x)
	return m3 / (m2 * math.Sqrt(m2))
}

// ExcessKurtosis returns m4 / m2² - 3, with moments about the mean divided by
// n: 0 for the normal shape. Values that are all equal, or none, give NaN.
func ExcessKurtosis(x []float64) float64 {
	m2, _, m4 := centralMoments(x)
	return m4/(m2*m2) - 3
}

// centralMoments returns the second to fourth moments about the mean, divided
// by n.
func centralMoments(x []float64) (m2, m3, m4 float64) {
	m, rest := meanParts(x)
	for _, v := range x {
		d := (v - m) - rest
		s := d * d
		m2 += s
		m3 += s * d
		m4 += s * s
	}
	n := float64(len(x))
	return m2 / n, m3 / n, m4 / n
}

// Median returns the middle value, or the mean of the middle two. An empty x
// gives NaN.
func Median(x []float64) float64 {
	return medianInPlace(slices.Clone(x))
}

// MAD returns the median absolute deviation from the median, without the
// factor 1.4826 that makes it a standard deviation for the normal shape. An
// empty x gives NaN.
func MAD(x []float64) float64 {
	work := slices.Clone(x)
	middle := medianInPlace(work)
	for i, v := range work {
		work[i] = math.Abs(v - middle)
	}
	return medianInPlace(work)
}

// Quantile returns the value that a share p of the sorted values lies below,
// at position 1 + (n-1)p with linear interpolation: definition 7 of Hyndman
// and Fan 1996. p lies in [0, 1]; an empty slice or another p gives NaN. The
// values must be sorted upwards.
func Quantile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 || !(p >= 0 && p <= 1) {
		return math.NaN()
	}
	position := float64(len(sorted)-1) * p
	i := int(position)
	if i+1 >= len(sorted) {
		return sorted[len(sorted)-1]
	}
	share := position - float64(i)
	if share == 0 {
		return sorted[i]
	}
	return sorted[i] + share*(sorted[i+1]-sorted[i])
}
