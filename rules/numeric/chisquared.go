package numeric

import "math"

// ChiSquaredUpper returns the chance that chi-squared with df degrees of
// freedom exceeds x, right to about 1e-13 of itself. df > 0 need not be whole;
// df <= 0 gives NaN, x <= 0 gives 1, +Inf gives 0.
func ChiSquaredUpper(x, df float64) float64 {
	if math.IsNaN(x) || !(df > 0) || math.IsInf(df, 1) {
		return math.NaN()
	}
	_, upper := gammaTails(df/2, x/2)
	return upper
}
