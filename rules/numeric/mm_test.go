package numeric

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestMMLineHardlySeesWildRows(t *testing.T) {
	const n = 80 // 3160 pairs: candidates are drawn.
	stream := Stream(3, "errors")
	x, y := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = float64(i)
		y[i] = 2 + 0.5*x[i] + stream.NormFloat64()
	}
	_, slope, se, scale, ok := MMLine(x, y, Stream(1, "a"))
	if !ok || math.Abs(slope-0.5) > 4*se || math.Abs(scale-1) > 0.35 {
		t.Fatalf("slope %v ± %v, scale %v, ok %v", slope, se, scale, ok)
	}
	// Least squares would be beyond 0.5 by many standard errors.
	for i := n - n/4; i < n; i++ {
		y[i] -= 500
	}
	_, pulled, se, _, ok := MMLine(x, y, Stream(1, "a"))
	if !ok || math.Abs(pulled-0.5) > 5*se || se > 0.02 {
		t.Errorf("with a quarter of the rows wild the slope is %v ± %v", pulled, se)
	}
	// Other candidates lead to the same line.
	if _, other, _, _, _ := MMLine(x, y, Stream(2, "b")); math.Abs(other-pulled) > 1e-8 {
		t.Errorf("the stream decides: slope %v or %v", pulled, other)
	}
}

func TestMMLineFollowsUnits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(8, 30).Draw(t, "n")
		x, y := deviates(t, n), deviates(t, n)
		a, b := rapid.Float64Range(-10, 10).Draw(t, "a"), rapid.Float64Range(0.01, 100).Draw(t, "b")
		c, d := rapid.Float64Range(-10, 10).Draw(t, "c"), rapid.Float64Range(0.01, 100).Draw(t, "d")
		xs, ys := make([]float64, n), make([]float64, n)
		for i := range x {
			xs[i], ys[i] = c+d*x[i], a-b*y[i]
		}
		_, slope, se, scale, ok := MMLine(x, y, nil)
		_, moved, movedSE, movedScale, movedOK := MMLine(xs, ys, nil)
		if ok != movedOK {
			t.Fatalf("ok becomes %v", movedOK)
		}
		if !ok {
			return
		}
		if math.Abs(moved+slope*b/d) > 1e-6*(se+math.Abs(slope))*b/d || off(movedSE, se*b/d) > 1e-5 || off(movedScale, scale*b) > 1e-7 {
			t.Fatalf("slope %v ± %v, scale %v become %v ± %v, %v", slope, se, scale, moved*d/b, movedSE*d/b, movedScale/b)
		}
	})
}

func TestMMLineWithoutAnAnswer(t *testing.T) {
	for _, c := range []struct {
		name string
		x, y []float64
	}{
		{"two rows", []float64{1, 2}, []float64{1, 2}},
		{"one x", []float64{1, 1, 1}, []float64{1, 2, 3}},
		{"most rows on a line", []float64{1, 2, 3, 4, 5}, []float64{1, 2, 3, 4, 9}},
		{"nothing", nil, nil},
	} {
		if _, slope, _, _, ok := MMLine(c.x, c.y, nil); ok || !math.IsNaN(slope) {
			t.Errorf("%s: slope %v, ok %v", c.name, slope, ok)
		}
	}
}
