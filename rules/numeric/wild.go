package numeric

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// Wild is what a wild bootstrap says of one contrast.
type Wild struct {
	// T is the estimate over its HC3 standard error.
	T float64
	// P is the two-sided p of the contrast being 0: (1 + draws at least as
	// large as T)/(draws + 1).
	P float64
	// Quantile is the quantile of |t*| at the confidence asked for, with the
	// contrast held at its estimate: times the HC3 standard error it is the
	// half-width of the interval.
	Quantile float64
}

// tied is how nearly two resampled statistics must agree to count as equal:
// the same rows in another order differ by rounding.
const tied = 1e-10

// WildBootstrap tests one contrast by giving residuals random signs (Wu 1986;
// Davidson and Flachaire 2008): t by HC3, the null imposed on the fit whose
// residuals e/(1-h) are used. y is the response, c the contrast's catcher
// (Basis.Catcher), so that c'y is the estimate; c must not be zero. Rows of
// leverage one keep their value; when one enters the contrast, or all residuals
// are zero, everything is NaN.
func WildBootstrap(b *Basis, y, c []float64, confidence float64, draws int, stream *rand.Rand) Wild {
	w := newWildTest(b, y, c)
	if _, ok := HC3(c, w.free, b.Leverage()); !ok {
		return Wild{math.NaN(), math.NaN(), math.NaN()}
	}
	t := w.t(y)
	if math.IsNaN(t) {
		return Wild{t, t, t}
	}
	signs := make([]float64, len(y))
	atLeast := 1
	sizes := make([]float64, draws)
	for k := range sizes {
		drawSigns(signs, stream)
		if !(math.Abs(w.null(signs)) < math.Abs(t)*(1-tied)) {
			atLeast++
		}
		sizes[k] = math.Abs(w.held(signs))
	}
	slices.Sort(sizes)
	return Wild{T: t, P: float64(atLeast) / float64(draws+1), Quantile: Quantile(sizes, confidence)}
}

func drawSigns(signs []float64, stream *rand.Rand) {
	var bits uint64
	for i := range signs {
		if i%64 == 0 {
			bits = stream.Uint64()
		}
		signs[i] = 1 - 2*float64(bits&1)
		bits >>= 1
	}
}

// wildTest holds what every draw needs.
type wildTest struct {
	b          *Basis
	c          []float64
	free       []float64 // residuals of the fit
	restricted []float64 // residuals with the contrast at 0, over 1 - h of that fit
	heldAt     []float64 // residuals with the contrast at its estimate, over the same
	draw, e    []float64
}

// newWildTest finds the fit under a restriction without another
// factorization: l'beta = 0 takes the direction w = c/|c| out of the span of
// the columns. So its residuals are e + w w'y and its leverages h - w².
// Held at the estimate instead, the residuals are e itself.
func newWildTest(b *Basis, y, c []float64) *wildTest {
	n := b.Rows()
	if len(y) != n || len(c) != n {
		panic(fmt.Sprintf("numeric.WildBootstrap: lengths %d and %d, want %d", len(y), len(c), n))
	}
	w := &wildTest{
		b: b, c: c,
		free: make([]float64, n), restricted: make([]float64, n), heldAt: make([]float64, n),
		draw: make([]float64, n), e: make([]float64, n),
	}
	b.Residual(w.free, y)
	length := floats.Norm(c, 2)
	along := floats.Dot(c, y) / length
	for i, h := range b.Leverage() {
		share := c[i] / length
		rest := 1 - (h - share*share)
		if rest <= 1-fullLeverage {
			continue // The restricted fit, too, passes through this row.
		}
		w.restricted[i] = (w.free[i] + share*along) / rest
		w.heldAt[i] = w.free[i] / rest
	}
	return w
}

// null returns t of a draw with the contrast at 0, whose fitted values c does
// not see.
func (w *wildTest) null(signs []float64) float64 {
	floats.MulTo(w.draw, w.restricted, signs)
	return w.t(w.draw)
}

// held returns t, about the estimate, of a draw with the contrast held there.
func (w *wildTest) held(signs []float64) float64 {
	floats.MulTo(w.draw, w.heldAt, signs)
	return w.t(w.draw)
}

// t returns c'y over its HC3 standard error from the residuals of y.
func (w *wildTest) t(y []float64) float64 {
	w.b.Residual(w.e, y)
	variance := 0.0
	for i, h := range w.b.Leverage() {
		if h < 1 {
			v := w.c[i] * w.e[i] / (1 - h)
			variance += v * v
		}
	}
	return floats.Dot(w.c, y) / math.Sqrt(variance)
}
