package numeric

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// The sizes of sample for which Royston's p is fitted.
const (
	shapiroLeast = 3
	shapiroMost  = 5000
)

// ShapiroWilk returns Shapiro and Wilk's W of x and its p by Royston's
// approximation (1995, AS R94) in double precision. ok is false, with W and p
// NaN, for fewer than 3 or more than 5000 values, for values that are all
// equal, and where one is not finite. A small p speaks against the normal shape.
func ShapiroWilk(x []float64) (w, p float64, ok bool) {
	n := len(x)
	if n < shapiroLeast || n > shapiroMost {
		return math.NaN(), math.NaN(), false
	}
	sorted := slices.Sorted(slices.Values(x))
	lack := shapiroLack(sorted, ShapiroWeights(n))
	if math.IsNaN(lack) {
		return lack, lack, false
	}
	return 1 - lack, shapiroP(lack, n), true
}

// shapiroLack returns 1 - W as a share of squares that the weights leave
// unexplained: for three or four values W can be 1 to rounding, and p hangs on
// how nearly.
func shapiroLack(sorted, weights []float64) float64 {
	n := len(sorted)
	if !(sorted[n-1]-sorted[0] > 0) || math.IsInf(sorted[n-1]-sorted[0], 1) {
		return math.NaN()
	}
	m, rest := meanParts(sorted)
	slope := floats.Dot(weights, sorted)
	squares, left := 0.0, 0.0
	for i, v := range sorted {
		d := (v - m) - rest
		squares += d * d
		d -= slope * weights[i]
		left += d * d
	}
	return left / squares
}

// ShapiroWeights returns the n weights of W in Royston's approximation (1995;
// 1992 for the polynomials): antisymmetric, rising, of unit length. n < 3 panics.
func ShapiroWeights(n int) []float64 {
	if n < shapiroLeast {
		panic(fmt.Sprintf("numeric.ShapiroWeights: n is %d, want at least %d", n, shapiroLeast))
	}
	a := make([]float64, n)
	if n == 3 {
		a[0], a[2] = -math.Sqrt(0.5), math.Sqrt(0.5)
		return a
	}
	// Blom scores of the upper half, largest first, and their squared length
	// over the whole sample.
	half := n / 2
	score := make([]float64, half)
	squares := 0.0
	for i := range score {
		score[i] = -NormalQuantile((float64(i+1) - 0.375) / (float64(n) + 0.25))
		squares += 2 * score[i] * score[i]
	}
	length := math.Sqrt(squares)
	u := 1 / math.Sqrt(float64(n))

	// Royston fits the outermost one or two weights by polynomials in
	// 1/sqrt(n); the others stay proportional to the scores.
	outer := []float64{score[0]/length + polynomial(u, 0, .221157, -.147981, -2.07119, 4.434685, -2.706056)}
	if n > 5 {
		outer = append(outer, score[1]/length+polynomial(u, 0, .042981, -.293762, -1.752461, 5.682633, -3.582633))
	}
	restScores, restWeights := squares, 1.0
	for i, v := range outer {
		restScores -= 2 * score[i] * score[i]
		restWeights -= 2 * v * v
	}
	factor := math.Sqrt(restScores / restWeights)
	for i := range score {
		v := score[i] / factor
		if i < len(outer) {
			v = outer[i]
		}
		a[i], a[n-1-i] = -v, v
	}
	return a
}

// ShapiroW returns W for values sorted upwards and the weights for their
// number: the squared correlation between the two. It allocates nothing.
// Values that are all equal or not all finite give NaN.
func ShapiroW(sorted, weights []float64) float64 {
	n := len(sorted)
	if n != len(weights) {
		panic(fmt.Sprintf("numeric.ShapiroW: %d values, %d weights", n, len(weights)))
	}
	if !(sorted[n-1]-sorted[0] > 0) {
		return math.NaN()
	}
	mean := floats.Sum(sorted) / float64(n)
	// The weights add up to zero, so the mean need not be taken off here, and
	// its rounding does no harm below: it enters squared.
	product := floats.Dot(weights, sorted)
	squares := 0.0
	for _, v := range sorted {
		d := v - mean
		squares += d * d
	}
	return product / squares * product
}

// shapiroP returns Royston's p for n values with W = 1 - lack.
func shapiroP(lack float64, n int) float64 {
	size := float64(n)
	if n == 3 {
		// Exact for three values (Shapiro and Wilk 1965), whose W is at least
		// 3/4: 6/pi (arcsin sqrt W - arcsin sqrt 3/4).
		return max(0, 6/math.Pi*math.Atan2(math.Sqrt(1-lack), math.Sqrt(lack))-2)
	}
	y := math.Log(lack)
	var mean, sd float64
	if n <= 11 {
		limit := polynomial(size, -2.273, .459)
		if y >= limit {
			// Off the end of the fitted curve; smaller than any p that matters.
			return 0
		}
		y = -math.Log(limit - y)
		mean = polynomial(size, .544, -.39978, .025054, -6.714e-4)
		sd = math.Exp(polynomial(size, 1.3822, -.77857, .062767, -.0020322))
	} else {
		l := math.Log(size)
		mean = polynomial(l, -1.5861, -.31082, -.083751, .0038915)
		sd = math.Exp(polynomial(l, -.4803, -.082676, .0030302))
	}
	return NormalUpper((y - mean) / sd)
}

// polynomial returns c[0] + c[1] x + c[2] x² + ...
func polynomial(x float64, c ...float64) float64 {
	v := 0.0
	for i := len(c) - 1; i >= 0; i-- {
		v = v*x + c[i]
	}
	return v
}
