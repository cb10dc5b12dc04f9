package numeric

import "math"

// gammaTails returns the regularized incomplete gamma functions P(a, x) and
// Q(a, x) = 1 - P(a, x), for a > 0. Whichever is small is right to about 1e-14
// of itself. Power series DLMF 8.11.4 below a + 1, continued fraction DLMF
// 8.9.2 above.
func gammaTails(a, x float64) (lower, upper float64) {
	switch {
	case x <= 0:
		return 0, 1
	case math.IsInf(x, 1):
		return 1, 0
	case x < a+1:
		lower = poissonFactor(a, x) * gammaSeries(a, x)
		return lower, 1 - lower
	default:
		upper = poissonFactor(a, x) * gammaFraction(a, x)
		return 1 - upper, upper
	}
}

// poissonFactor returns x^a e^-x / Gamma(a+1) in Loader's form.
func poissonFactor(a, x float64) float64 {
	return math.Exp(-stirlingError(a)-deviance(a, x)) / math.Sqrt(2*math.Pi*a)
}

// gammaSeries returns sum over k >= 0 of x^k / ((a+1) ... (a+k)).
func gammaSeries(a, x float64) float64 {
	sum, term := 1.0, 1.0
	for k := 1.0; term > sum*0x1p-54; k++ {
		term *= x / (a + k)
		sum += term
	}
	return sum
}

// gammaFraction returns Gamma(a, x) e^x x^-a a by the continued fraction
// a/(x+1-a - 1(1-a)/(x+3-a - 2(2-a)/(x+5-a - ...))).
func gammaFraction(a, x float64) float64 {
	b := x + 1 - a
	c, d := math.Inf(1), 1/nonZero(b)
	f := d
	for k := 1.0; k < 1e7; k++ {
		t := -k * (k - a)
		b += 2
		d = 1 / nonZero(b+t*d)
		c = nonZero(b + t/c)
		f *= c * d
		if math.Abs(c*d-1) < 0x1p-53 {
			return f * a
		}
	}
	panic("numeric.gammaFraction: no convergence")
}
