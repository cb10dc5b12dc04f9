package numeric

import "math"

// FUpper returns the chance that Fisher's F with d1 and d2 degrees of freedom
// exceeds f, right to about 1e-13 of itself. The degrees of freedom are > 0,
// need not be whole, and d2 may be +Inf. f <= 0 gives 1, +Inf gives 0;
// degrees of freedom that are not positive give NaN.
func FUpper(f, d1, d2 float64) float64 {
	_, upper := fisherTails(f, d1, d2)
	return upper
}

// FQuantile returns the f below which Fisher's F with d1 and d2 degrees of
// freedom falls with chance p, right to about 1e-12 of itself. p = 0 gives 0
// and p = 1 +Inf; p outside [0, 1] or degrees of freedom that are not positive
// give NaN.
func FQuantile(p, d1, d2 float64) float64 {
	switch {
	case !(p >= 0 && p <= 1) || !(d1 > 0) || !(d2 > 0):
		return math.NaN()
	case p == 0:
		return 0
	case p == 1:
		return math.Inf(1)
	}
	lowerHalf := p <= 0.5
	target := p
	if !lowerHalf {
		target = 1 - p
	}
	return invertTail(target, func(f float64) (tail, slope float64) {
		lower, upper := fisherTails(f, d1, d2)
		density := fisherLogDensity(f, d1, d2)
		if lowerHalf {
			return lower, density
		}
		return upper, -density
	})
}

func fisherTails(f, d1, d2 float64) (lower, upper float64) {
	switch {
	case math.IsNaN(f) || !(d1 > 0) || !(d2 > 0) || math.IsInf(d1, 1):
		return math.NaN(), math.NaN()
	case f <= 0:
		return 0, 1
	case math.IsInf(f, 1):
		return 1, 0
	case math.IsInf(d2, 1):
		return gammaTails(d1/2, d1/2*f)
	}
	x, y := fisherShares(f, d1, d2)
	return betaTails(d1/2, d2/2, x, y)
}

// fisherLogDensity returns the density of ln F at ln f.
func fisherLogDensity(f, d1, d2 float64) float64 {
	if math.IsInf(d2, 1) {
		return d1 / 2 * poissonFactor(d1/2, d1/2*f)
	}
	x, y := fisherShares(f, d1, d2)
	return binomialFactor(d1/2, d2/2, x, y)
}

// fisherShares returns d1 f/(d1 f + d2) and d2/(d1 f + d2), safe from overflow.
func fisherShares(f, d1, d2 float64) (x, y float64) {
	r := d1 / d2 * f
	if r > 1 {
		return 1 / (1 + 1/r), 1 / r / (1 + 1/r)
	}
	return r / (1 + r), 1 / (1 + r)
}
