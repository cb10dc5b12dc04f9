package numeric

import "math"

// StudentTwoSided returns the chance that |T| exceeds |t| when T is Student's
// t with df degrees of freedom: the two-sided p of t. df > 0 need not be whole
// and may be +Inf, which is the normal. The result is right to about 1e-13 of
// itself however small; t = +-Inf gives 0. df <= 0 gives NaN.
func StudentTwoSided(t, df float64) float64 {
	switch {
	case math.IsNaN(t) || !(df > 0):
		return math.NaN()
	case math.IsInf(t, 0):
		return 0
	case math.IsInf(df, 1):
		return NormalTwoSided(t)
	case df >= largeDF && t*t < df:
		return studentTailLargeDF(math.Abs(t), df)
	}
	if math.Abs(t) > powerTail*math.Sqrt(df) {
		return studentPowerTail(math.Abs(t), df)
	}
	x, y := studentShares(t, df)
	tail, _ := betaTails(df/2, 0.5, x, y)
	return tail
}

// powerTail is the t/sqrt(df) from which the tail is a power of t to rounding,
// and above which df/(df + t²) would come near underflow.
const powerTail = 1e50

// studentPowerTail returns P(|T| > t): I_x(df/2, 1/2) to first order in
// x = df/t².
func studentPowerTail(t, df float64) float64 {
	a := df / 2
	upper, _ := math.Lgamma(a + 0.5)
	lower, _ := math.Lgamma(a + 1)
	return math.Exp(upper-lower-df*(math.Log(t)-math.Log(df)/2)) / math.Sqrt(math.Pi)
}

// StudentCDF returns the chance that Student's t with df degrees of freedom is
// at most t; accurate relative to itself in the left tail. Arguments are as for
// StudentTwoSided.
func StudentCDF(t, df float64) float64 {
	tail := StudentTwoSided(t, df) / 2
	if t > 0 {
		return 1 - tail
	}
	return tail
}

// StudentQuantile returns the t below which Student's t with df degrees of
// freedom falls with chance p, right to about 1e-13 of itself. p = 0 gives
// -Inf and p = 1 +Inf; p outside [0, 1] or df <= 0 gives NaN. For a small upper
// chance q take -StudentQuantile(q, df).
func StudentQuantile(p, df float64) float64 {
	switch {
	case !(p >= 0 && p <= 1) || !(df > 0):
		return math.NaN()
	case math.IsInf(df, 1):
		return NormalQuantile(p)
	case p == 0.5:
		return 0
	case p > 0.5:
		return studentUpperQuantile(1-p, df)
	}
	return -studentUpperQuantile(p, df)
}

// studentUpperQuantile returns the t > 0 exceeded with chance q < 1/2.
func studentUpperQuantile(q, df float64) float64 {
	if q == 0 {
		return math.Inf(1)
	}
	return invertTail(2*q, func(t float64) (tail, slope float64) {
		if t > powerTail*math.Sqrt(df) {
			tail = StudentTwoSided(t, df)
			return tail, -df * tail
		}
		x, y := studentShares(t, df)
		// t times twice the density, as the density of x in the beta form.
		return StudentTwoSided(t, df), -2 * binomialFactor(df/2, 0.5, x, y)
	})
}

// studentShares returns df/(df + t²) and t²/(df + t²), safe from overflow.
func studentShares(t, df float64) (x, y float64) {
	t = math.Abs(t)
	root := math.Sqrt(df)
	if t > root {
		r := root / t
		return r * r / (1 + r*r), 1 / (1 + r*r)
	}
	r := t / root
	return 1 / (1 + r*r), r * r / (1 + r*r)
}

// largeDF is where the expansion for large degrees of freedom takes over from
// the continued fraction, which needs ever more terms there.
const largeDF = 200

// studentTailLargeDF returns P(|T| > t) for t² < df: I_x(df/2, 1/2) by its
// expansion for a large first and a small second argument (DiDonato and Morris
// 1992, algorithm 708, equations 9 to 9.3, at b = 1/2, where its leading term
// is the complementary error function).
func studentTailLargeDF(t, df float64) float64 {
	const b = 0.5
	a := df / 2
	centre := a + (b-1)/2
	logX := -math.Log1p(t * t / df)
	u := -centre * logX
	// H = e^-u u^b / Gamma(b); dividing it into Q(b, u) = erfc(sqrt u) and
	// multiplying back would overflow, so J carries H with it.
	h := math.Exp(-u) * math.Sqrt(u/math.Pi)
	j := math.Erfc(math.Sqrt(u))
	factor := 1 / (4 * centre * centre)
	half := logX * logX / 4
	power := 1.0
	var p [12]float64
	sum := 0.0
	for n := range p {
		p[n] = expansionWeight(p[:n], b)
		term := p[n] * j
		sum += term
		if n > 0 && math.Abs(term) < 0x1p-56*math.Abs(sum) {
			break
		}
		m := 2 * float64(n)
		j = factor * ((b+m)*(b+m+1)*j + (u+b+m+1)*power*h)
		power *= half
	}
	return sum * gammaRatioHalf(a) / math.Sqrt(centre)
}

// expansionWeight returns the next weight p_n after those before it, equation
// 9.3 of DiDonato and Morris 1992.
func expansionWeight(before []float64, b float64) float64 {
	n := len(before)
	if n == 0 {
		return 1
	}
	sum := 0.0
	factorial := 1.0 // (2m+1)!
	for m := 1; m < n; m++ {
		factorial *= float64(2*m) * float64(2*m+1)
		sum += (float64(m)*b - float64(n)) / factorial * before[n-m]
	}
	factorial *= float64(2*n) * float64(2*n+1)
	return (b-1)/factorial + sum/float64(n)
}

// gammaRatioHalf returns Gamma(a + 1/2)/Gamma(a) for a >= 15, from Stirling's
// formula at both, whose large terms are cancelled by hand.
func gammaRatioHalf(a float64) float64 {
	// Gamma(v) = sqrt(2 pi) v^(v - 1/2) e^-v e^stirlingError(v).
	exponent := a*math.Log1p(0.5/a) - 0.5 + stirlingError(a+0.5) - stirlingError(a)
	return math.Sqrt(a) * math.Exp(exponent)
}
