package numeric

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/floats"
	"pgregory.net/rapid"
)

func TestHC3WithRowsOfLeverageOne(t *testing.T) {
	group := []int{0, 0, 0, 0, 1}
	x := []float64{1, 2, 3, 5, 4}
	alone := indicator(group, 1)
	slope := []float64{1, 2, 3, 5, 0}
	b := NewBasis([][]float64{indicator(group, 0), slope, alone}, 5)
	e := make([]float64, 5)
	b.Residual(e, []float64{1, 3, 2, 6, 9})
	if v, ok := HC3(b.Catcher([]float64{0, 1, 0}), e, b.Leverage()); !ok || !(v > 0) {
		t.Errorf("the slope of the others has variance %v, %v", v, ok)
	}
	catchers := [][]float64{b.Catcher([]float64{0, 1, 0}), b.Catcher([]float64{0, 0, 1})}
	if v, ok := HC3(catchers[1], e, b.Leverage()); ok || !math.IsNaN(v) {
		t.Errorf("the level of the row alone has variance %v, %v", v, ok)
	}
	v := HC3Covariance(catchers, e, b.Leverage())
	if !(v[0][0] > 0) || !math.IsNaN(v[0][1]) || !math.IsNaN(v[1][0]) {
		t.Errorf("covariances %v", v)
	}
	if got := WildBootstrap(b, x, catchers[1], 0.95, 10, Stream(1, "test")); !math.IsNaN(got.P) {
		t.Errorf("the level of the row alone has p %v", got.P)
	}
}

func TestWaldIsASquareInTheCovariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.IntRange(1, 5).Draw(t, "k")
		// V = A'A for a random A, so that b = A'z has b'V^-1 b = z'z.
		a := make([][]float64, k)
		for i := range a {
			a[i] = blockDeviates(rapid.Uint64().Draw(t, "seed"), i, k)
			a[i][i] += 4
		}
		z := deviates(t, k)
		b, v := make([]float64, k), make([][]float64, k)
		for i := range k {
			v[i] = make([]float64, k)
			for r := range k {
				b[i] += a[r][i] * z[r]
				for j := range k {
					v[i][j] += a[r][i] * a[r][j]
				}
			}
		}
		chi, ok := Wald(b, v)
		if want := floats.Dot(z, z); !ok || math.Abs(chi-want) > 1e-9*(1+want) {
			t.Fatalf("Wald gives %v, %v, want %v", chi, ok, want)
		}
	})
	if _, ok := Wald([]float64{1, 1}, [][]float64{{1, 1}, {1, 1}}); ok {
		t.Error("a singular covariance is accepted")
	}
	if _, ok := Wald([]float64{1}, [][]float64{{math.NaN()}}); ok {
		t.Error("a variance that is no number is accepted")
	}
}

// blockDeviates draws k normal deviates.
func blockDeviates(seed uint64, block, k int) []float64 {
	stream := BlockStream(seed, "deviates", block)
	v := make([]float64, k)
	for i := range v {
		v[i] = stream.NormFloat64()
	}
	return v
}
