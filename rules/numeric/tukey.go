package numeric

import "math"

// TukeyUpper returns the chance that the studentized range of that many groups
// exceeds q, with df degrees of freedom for the standard deviation: the range of
// groups independent normal means over the estimated standard error of one of
// them (Tukey 1953; the double integral of Copenhaver and Holland 1988). df > 0
// need not be whole and may be +Inf. Small results keep about ten digits of
// their own. q <= 0 gives 1, +Inf gives 0; fewer than two groups or df <= 0
// give NaN.
func TukeyUpper(q float64, groups int, df float64) float64 {
	switch {
	case math.IsNaN(q) || groups < 2 || !(df > 0):
		return math.NaN()
	case q <= 0:
		return 1
	case math.IsInf(q, 1):
		return 0
	}
	return newRangeTail(groups).studentized(q, df)
}

// TukeyQuantile returns the q below which the studentized range of that many
// groups with df degrees of freedom falls with chance p. p = 0 gives 0, p = 1
// gives +Inf; p outside [0, 1], fewer than two groups or df <= 0 give NaN.
func TukeyQuantile(p float64, groups int, df float64) float64 {
	switch {
	case !(p >= 0 && p <= 1) || groups < 2 || !(df > 0):
		return math.NaN()
	case p == 0:
		return 0
	case p == 1:
		return math.Inf(1)
	}
	tail := newRangeTail(groups)
	// In ln q the logarithm of the tail is smooth and not far from straight.
	lack := func(u float64) float64 {
		return math.Log(1-p) - math.Log(tail.studentized(math.Exp(u), df))
	}
	// One pair alone exceeds less often than the range, all pairs counted singly
	// more often.
	k := float64(groups)
	low := -math.Sqrt2 * StudentQuantile((1-p)/2, df)
	high := -math.Sqrt2 * StudentQuantile((1-p)/(k*(k-1)), df)
	return math.Exp(crossing(lack, math.Log(low)-1e-9, math.Log(high)+1e-9))
}

// rangeTail holds, on a grid of z, what the range of some number of standard
// normal deviates needs again for every width.
type rangeTail struct {
	power  float64 // one less than the number of deviates
	step   float64
	cdf    []float64
	weight []float64 // density times cdf^power
}

// rangeFrom is where the grid begins: below it nothing counts.
const rangeFrom = -9.0

func newRangeTail(groups int) *rangeTail {
	return &rangeTail{
		power: float64(groups - 1),
		// The largest of many deviates has a narrower density than one.
		step: min(0.25, 0.75/math.Sqrt(float64(groups))),
	}
}

// at returns the distribution function and the weight at grid point j.
func (r *rangeTail) at(j int) (cdf, weight float64) {
	for len(r.cdf) <= j {
		z := rangeFrom + float64(len(r.cdf))*r.step
		phi := NormalCDF(z)
		r.cdf = append(r.cdf, phi)
		r.weight = append(r.weight, normalDensity(z)*math.Pow(phi, r.power))
	}
	return r.cdf[j], r.weight[j]
}

// normal returns the chance that the range exceeds w:
//
//	k ∫ φ(z) {Φ(z)^(k-1) - [Φ(z) - Φ(z-w)]^(k-1)} dz
//
// for k deviates, the largest of which is z. The difference is taken by
// logarithms, so that it keeps its digits where it is small.
func (r *rangeTail) normal(w float64) float64 {
	if w > 56 {
		return 0 // exp(-w²/4) is below the smallest number.
	}
	sum := 0.0
	for j := range int(math.Ceil((w/2 + 9 - rangeFrom) / r.step)) {
		cdf, weight := r.at(j)
		below := NormalCDF(rangeFrom + float64(j)*r.step - w)
		sum -= weight * math.Expm1(r.power*math.Log1p(-below/cdf))
	}
	return (r.power + 1) * sum * r.step
}

// studentized returns the chance that the range exceeds q times the estimated
// standard deviation.
func (r *rangeTail) studentized(q, df float64) float64 {
	if math.IsInf(df, 1) {
		return r.normal(q)
	}
	return averageOverSpread(df,
		func(s float64) float64 { return r.normal(q * s) },
		func(s float64) float64 { return min(q*s, 40) })
}
