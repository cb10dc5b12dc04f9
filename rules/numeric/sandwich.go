package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// untouched is the share of a catcher's length below which an entry counts as
// zero: what rounding leaves of a row that does not enter the contrast.
const untouched = 1e-9

// HC3 returns the variance of a contrast that holds whatever the variances of
// the rows are, sum c²e²/(1-h)² (MacKinnon and White 1985): c is the contrast's
// catcher (Basis.Catcher), e the residuals, h the leverages. A row of leverage
// one, whose residual says nothing, is passed over when it does not enter the
// contrast; when it does, the variance is NaN and ok is false.
func HC3(c, e, h []float64) (variance float64, ok bool) {
	v := HC3Covariance([][]float64{c}, e, h)
	return v[0][0], !math.IsNaN(v[0][0])
}

// HC3Covariance returns the covariances of several contrasts that hold
// whatever the variances of the rows are: entry [a][b] is the sum of
// c_a c_b e²/(1-h)² (MacKinnon and White 1985). A contrast that a row of
// leverage one enters has NaN in its row and column.
func HC3Covariance(catchers [][]float64, e, h []float64) [][]float64 {
	n := len(e)
	if len(h) != n {
		panic(fmt.Sprintf("numeric.HC3: %d residuals, %d leverages", n, len(h)))
	}
	weighted := make([][]float64, len(catchers))
	for a, c := range catchers {
		if len(c) != n {
			panic(fmt.Sprintf("numeric.HC3: catcher of length %d, %d residuals", len(c), n))
		}
		limit := untouched * floats.Norm(c, 2)
		weighted[a] = make([]float64, n)
		for i, w := range c {
			switch {
			case h[i] < 1:
				weighted[a][i] = w * e[i] / (1 - h[i])
			case math.Abs(w) > limit:
				weighted[a][i] = math.NaN()
			}
		}
	}
	v := make([][]float64, len(catchers))
	for a := range v {
		v[a] = make([]float64, len(catchers))
		for b := range v[a] {
			v[a][b] = floats.Dot(weighted[a], weighted[b])
		}
	}
	return v
}

// Wald returns b'V^-1 b, V the covariance matrix of the estimates b: over its
// number of estimates it is compared with F. ok is false, and the result NaN,
// when V is not positive definite.
func Wald(b []float64, v [][]float64) (chi float64, ok bool) {
	// Cholesky's L, with L^-1 b solved on the way: b'V^-1 b = |L^-1 b|².
	l := make([][]float64, len(b))
	z := make([]float64, len(b))
	for i := range b {
		l[i] = make([]float64, i+1)
		rest := b[i]
		for j := range i + 1 {
			s := v[i][j]
			for k := range j {
				s -= l[i][k] * l[j][k]
			}
			if j < i {
				l[i][j] = s / l[j][j]
				rest -= l[i][j] * z[j]
				continue
			}
			if !(s > 1e-14*v[i][i]) {
				return math.NaN(), false
			}
			l[i][i] = math.Sqrt(s)
		}
		z[i] = rest / l[i][i]
		chi += z[i] * z[i]
	}
	return chi, true
}
