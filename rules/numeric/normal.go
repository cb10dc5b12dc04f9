package numeric

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// NormalCDF returns the chance that a standard normal deviate is at most x,
// accurate relative to itself in the left tail. -Inf gives 0 and +Inf 1.
func NormalCDF(x float64) float64 {
	return 0.5 * math.Erfc(-x/math.Sqrt2)
}

// NormalUpper returns the chance that a standard normal deviate exceeds x,
// accurate relative to itself in the right tail.
func NormalUpper(x float64) float64 {
	return 0.5 * math.Erfc(x/math.Sqrt2)
}

// NormalTwoSided returns the chance that a standard normal deviate exceeds |z|
// in absolute value: the two-sided p of z.
func NormalTwoSided(z float64) float64 {
	return math.Erfc(math.Abs(z) / math.Sqrt2)
}

// NormalQuantile returns the x below which a standard normal deviate falls
// with chance p (Wichura 1988, AS 241, as gonum has it). p = 0 gives -Inf and
// p = 1 +Inf; outside [0, 1] gives NaN. For a small upper chance q take
// -NormalQuantile(q): 1 - q would lose its digits.
func NormalQuantile(p float64) float64 {
	switch {
	case !(p >= 0 && p <= 1):
		return math.NaN()
	case p == 0:
		return math.Inf(-1)
	case p == 1:
		return math.Inf(1)
	}
	return mathext.NormalQuantile(p)
}

// normalDensity returns the standard normal density at x.
func normalDensity(x float64) float64 {
	return math.Exp(-0.5*x*x) / math.Sqrt(2*math.Pi)
}

// normalLogUpper returns ln NormalUpper(x), also where that underflows.
func normalLogUpper(x float64) float64 {
	if x < 0 {
		return math.Log1p(-NormalCDF(x))
	}
	if x < 30 {
		return math.Log(NormalUpper(x))
	}
	// Asymptotic series DLMF 7.12.1; from 30 on, what is left
	// out changes the logarithm by less than 1e-14 of itself.
	z := 1 / (x * x)
	series := 1 - z*(1-3*z*(1-5*z*(1-7*z)))
	return -0.5*x*x - math.Log(x*math.Sqrt(2*math.Pi)) + math.Log(series)
}
