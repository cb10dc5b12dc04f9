package numeric

import "math"

// averageOverSpread returns the mean of k(S) over S = sqrt(chi-squared/df), the
// ratio of an estimated standard deviation to the true one: the step from a
// normal to a studentized distribution. k must be analytic with values in
// [0, 1]. slope gives how fast the argument of the normal distribution inside k
// changes with ln S, which sets the step.
//
// The trapezoid rule over ln S: the integrand is analytic and falls off at both
// ends, so the error goes down as exp(-c/step) and nothing else is needed
// (Trefethen and Weideman 2014). All terms are positive, so even a tiny mean
// keeps its digits.
func averageOverSpread(df float64, k, slope func(s float64) float64) float64 {
	// ln S has density e^constant exp(df (u - (e^2u - 1)/2)), with its peak at 0.
	logDensity := func(u float64) float64 { return df * (u - math.Expm1(2*u)/2) }
	logTerm := func(u float64) float64 { return logDensity(u) + math.Log(k(math.Exp(u))) }
	constant := math.Log(2) + 0.5*math.Log(df/(4*math.Pi)) - stirlingError(df/2)

	// What lies 42 below the peak in the logarithm is below rounding.
	const negligible = 42
	peak, height := 0.0, math.Inf(-1)
	scan := 1 / math.Sqrt(2*df)
	for _, direction := range []float64{-scan, scan} {
		for u := 0.0; logDensity(u) > max(height-negligible, -745); u += direction {
			if v := logTerm(u); v > height {
				peak, height = u, v
			}
		}
	}
	if math.IsInf(height, -1) {
		return 0
	}

	s := math.Exp(peak)
	// Off the real line the integrand stays bounded up to about pi/4, whatever
	// df: hence the smallest step.
	step := min(0.12, 0.4/math.Sqrt(1+2*df*s*s+slope(s)*slope(s)))
	sum := math.Exp(logTerm(peak) - height)
	for _, direction := range []float64{-step, step} {
		for i := 1.0; ; i++ {
			u := peak + i*direction
			// On the way to 0 the density still rises.
			if logDensity(u) < max(height-negligible, -745) && u*direction > 0 {
				break
			}
			sum += math.Exp(logTerm(u) - height)
		}
	}
	return sum * step * math.Exp(constant+height)
}
