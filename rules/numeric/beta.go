package numeric

import "math"

// betaTails returns the regularized incomplete beta function I_x(a, b) and its
// complement 1 - I_x(a, b) = I_y(b, a), for a, b > 0 and y = 1 - x. Taking both
// x and y keeps the one that is near 0 exact. Whichever of the two results is
// small is right to about 1e-14 of itself, down to the smallest float64.
//
// A continued fraction on the side of x where it converges fast, with the
// leading factor in Loader's form (binomialFactor).
func betaTails(a, b, x, y float64) (lower, upper float64) {
	switch {
	case x <= 0:
		return 0, 1
	case y <= 0:
		return 1, 0
	case x*(a+b+2) < a+1:
		lower = binomialFactor(a, b, x, y) * betaFraction(a, b, x, y)
		return lower, 1 - lower
	default:
		upper = binomialFactor(a, b, x, y) * betaFraction(b, a, y, x)
		return 1 - upper, upper
	}
}

// betaFraction returns I_x(a, b) B(a, b) / (x^a y^b), for x < (a+1)/(a+b+2), by
// the continued fraction of DiDonato and Morris (1992, equation 9.1; the even
// part of DLMF 8.17.22). Its terms take x and y = 1 - x where the plain one
// subtracts x from 1, which costs ten digits when a is in the hundreds of
// thousands. It needs some sqrt(max(a, b)) terms at worst.
func betaFraction(a, b, x, y float64) float64 {
	lambda := a*y - b*x
	f := a / (a + 1) * (lambda + 1)
	c, d := f, 0.0
	for n := 1.0; n < 1e6; n++ {
		m := a + 2*n - 1
		numerator := (a + n - 1) / m * ((a + b + n - 1) / m) * n * (b - n) * x * x
		denominator := n + n*(b-n)*x/m + (a+n)/(m+2)*(lambda+1+n*(1+y))
		d = 1 / nonZero(denominator+numerator*d)
		c = nonZero(denominator + numerator/c)
		f *= c * d
		if math.Abs(c*d-1) < 0x1p-53 {
			return 1 / f
		}
	}
	panic("numeric.betaFraction: no convergence")
}

// nonZero keeps a partial denominator off 0, as the modified Lentz method asks
// (Thompson and Barnett 1986).
func nonZero(v float64) float64 {
	const tiny = 1e-290
	if math.Abs(v) < tiny {
		return tiny
	}
	return v
}

// binomialFactor returns x^a y^b / B(a, b) for y = 1 - x, written as a
// saddle-point factor times small corrections, so that nothing large cancels
// (Loader 2000, Fast and accurate computation of binomial probabilities).
func binomialFactor(a, b, x, y float64) float64 {
	n := a + b
	exponent := stirlingError(n) - stirlingError(a) - stirlingError(b) -
		deviance(a, n*x) - deviance(b, n*y)
	return math.Sqrt(a/n*b/(2*math.Pi)) * math.Exp(exponent)
}

// deviance returns v ln(v/m) + m - v for v, m > 0: half the Poisson deviance
// of v about its mean m, without cancellation where they are close.
func deviance(v, m float64) float64 {
	d := (v - m) / (v + m)
	if math.Abs(d) > 0.1 {
		return v*math.Log(v/m) + m - v
	}
	// ln(v/m) = 2 artanh(d); the first term of the series cancels m - v down
	// to -(v-m) d.
	sum := (v - m) * d
	term := 2 * v * d
	for k := 3.0; ; k += 2 {
		term *= d * d
		next := sum + term/k
		if next == sum {
			return sum
		}
		sum = next
	}
}

// stirlingError returns ln Gamma(a+1) - [(a + 1/2) ln a - a + ln(2 pi)/2]
// for a > 0: what Stirling's formula for a! leaves.
func stirlingError(a float64) float64 {
	if a < 15 {
		lg, _ := math.Lgamma(a + 1)
		return lg - (a+0.5)*math.Log(a) + a - 0.5*math.Log(2*math.Pi)
	}
	// Bernoulli series, DLMF 5.11.1; seven terms are below 1e-17 from 15 on.
	z := 1 / (a * a)
	return (1.0/12 - z*(1.0/360-z*(1.0/1260-z*(1.0/1680-z*(1.0/1188-z*(691.0/360360-z/156)))))) / a
}
