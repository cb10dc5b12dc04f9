package numeric

import "gonum.org/v1/gonum/floats"

// DurbinWatson returns the sum of squared steps between neighbouring residuals
// over their sum of squares (Durbin and Watson 1950): near 2 without
// correlation, towards 0 when neighbours are alike, towards 4 when they
// alternate. All residuals zero gives NaN.
func DurbinWatson(e []float64) float64 {
	steps := 0.0
	for i := 1; i < len(e); i++ {
		d := e[i] - e[i-1]
		steps += d * d
	}
	return steps / floats.Dot(e, e)
}

// Lag1 returns the sum of e[i] e[i-1] over the sum of e[i]²: the first-order
// autocorrelation of residuals in their order, taken to have mean zero. All
// residuals zero gives NaN.
func Lag1(e []float64) float64 {
	if len(e) == 0 {
		return 0 / floats.Dot(e, e)
	}
	return floats.Dot(e[1:], e[:len(e)-1]) / floats.Dot(e, e)
}
