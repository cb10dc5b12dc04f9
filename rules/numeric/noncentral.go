package numeric

import "math"

// NoncentralTCDF returns the chance that noncentral t with df degrees of
// freedom and noncentrality ncp is at most t: T = (Z + ncp)/S, Z standard
// normal, S = sqrt(chi-squared/df). df > 0 need not be whole and may be +Inf.
// It integrates the definition, so that small results keep about ten digits of
// their own; the series of Lenth (1989, AS 243) loses them where ncp is large.
func NoncentralTCDF(t, df, ncp float64) float64 {
	lower, _ := noncentralTails(t, df, ncp)
	return lower
}

// NoncentralTUpper returns the chance that noncentral t exceeds t; arguments
// and accuracy as for NoncentralTCDF.
func NoncentralTUpper(t, df, ncp float64) float64 {
	_, upper := noncentralTails(t, df, ncp)
	return upper
}

// NoncentralTTwoSided returns the chance that noncentral t exceeds crit > 0 in
// absolute value: the power of a two-sided t test with that critical value when
// the effect is ncp standard errors.
func NoncentralTTwoSided(crit, df, ncp float64) float64 {
	return NoncentralTUpper(crit, df, ncp) + NoncentralTUpper(crit, df, -ncp)
}

// noncentralTails returns P(T <= t) and P(T > t); the smaller one is integrated
// and the other is its complement.
func noncentralTails(t, df, ncp float64) (lower, upper float64) {
	switch {
	case math.IsNaN(t) || math.IsNaN(ncp) || math.IsInf(ncp, 0) || !(df > 0):
		return math.NaN(), math.NaN()
	case math.IsInf(t, 1):
		return 1, 0
	case math.IsInf(t, -1):
		return 0, 1
	case t < 0:
		upper, lower = noncentralTails(-t, df, -ncp)
		return lower, upper
	case math.IsInf(df, 1) || t == 0:
		return NormalCDF(t - ncp), NormalUpper(t - ncp)
	}
	slope := func(s float64) float64 { return max(math.Abs(ncp), min(t*s, math.Abs(ncp)+40)) }
	upper = averageOverSpread(df, func(s float64) float64 { return NormalUpper(t*s - ncp) }, slope)
	if upper < 0.5 {
		return 1 - upper, upper
	}
	lower = averageOverSpread(df, func(s float64) float64 { return NormalCDF(t*s - ncp) }, slope)
	return lower, 1 - lower
}

// DetectableNCP returns the noncentrality ncp >= 0 at which noncentral t with
// df degrees of freedom exceeds crit > 0 in absolute value with chance power:
// in standard errors, the effect that a two-sided test with that critical value
// finds with that chance. 0 when the test alarms as often without any effect;
// NaN when power is not in (0, 1), crit is not above 0, or df is not above 0.
func DetectableNCP(df, power, crit float64) float64 {
	if !(power > 0 && power < 1) || !(crit > 0) || math.IsInf(crit, 1) || !(df > 0) {
		return math.NaN()
	}
	excess := func(ncp float64) float64 { return NoncentralTTwoSided(crit, df, ncp) - power }
	if excess(0) >= 0 {
		return 0
	}
	high := crit + 1
	for excess(high) < 0 {
		high *= 2
	}
	return crossing(excess, 0, high)
}

// crossing returns where f, rising from below 0 at low to above 0 at high,
// passes 0: false position with the Illinois rule (Dowell and Jarratt 1971),
// which keeps the bracket and still converges faster than linearly. Either end may
// be infinite there.
func crossing(f func(float64) float64, low, high float64) float64 {
	below, above := f(low), f(high)
	side := 0
	for range 200 {
		x := high - above*(high-low)/(above-below)
		if math.IsInf(above-below, 1) {
			x = low + (high-low)/2
		}
		v := f(x)
		switch {
		case v == 0:
			return x
		case v < 0:
			if math.Abs(x-low) <= 1e-13*math.Abs(x) {
				return x
			}
			low, below = x, v
			if side < 0 {
				above /= 2
			}
			side = -1
		default:
			if math.Abs(high-x) <= 1e-13*math.Abs(x) {
				return x
			}
			high, above = x, v
			if side > 0 {
				below /= 2
			}
			side = 1
		}
		if high-low <= 1e-13*math.Abs(high) {
			break
		}
	}
	return (low + high) / 2
}
