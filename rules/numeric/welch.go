package numeric

import (
	"fmt"
	"math"
)

// WelchSlopes tests whether estimates b agree when each has a variance of its
// own, v with df degrees of freedom (Welch 1951): F, its degrees of freedom and
// its upper-tail p. For two estimates F is the square of WelchDifference's t,
// with the same p. Fewer than two estimates, or a variance that is not above 0,
// give NaN.
func WelchSlopes(b, v, df []float64) (f, d1, d2, p float64) {
	if len(v) != len(b) || len(df) != len(b) {
		panic(fmt.Sprintf("numeric.WelchSlopes: lengths %d, %d and %d", len(b), len(v), len(df)))
	}
	weights, centre := 0.0, 0.0
	for g := range b {
		if !(v[g] > 0) || !(df[g] > 0) {
			return math.NaN(), math.NaN(), math.NaN(), math.NaN()
		}
		weights += 1 / v[g]
		centre += b[g] / v[g]
	}
	centre /= weights
	between, k := 0.0, 0.0
	for g := range b {
		share := 1 / v[g] / weights
		between += (b[g] - centre) * (b[g] - centre) / v[g]
		k += (1 - share) * (1 - share) / df[g]
	}
	groups := float64(len(b))
	d1 = groups - 1
	if !(d1 > 0) {
		return math.NaN(), math.NaN(), math.NaN(), math.NaN()
	}
	d2 = (groups*groups - 1) / (3 * k)
	f = between / d1 / (1 + 2*(groups-2)*k/(groups*groups-1))
	return f, d1, d2, FUpper(f, d1, d2)
}

// WelchDifference returns the t of b2 - b1 when each has a variance of its own,
// v1 with df1 and v2 with df2 degrees of freedom, the degrees of freedom of t
// (Satterthwaite 1946, Welch 1947) and its two-sided p.
func WelchDifference(b1, v1, df1, b2, v2, df2 float64) (t, df, p float64) {
	v := v1 + v2
	t = (b2 - b1) / math.Sqrt(v)
	df = v * v / (v1*v1/df1 + v2*v2/df2)
	return t, df, StudentTwoSided(t, df)
}
