package numeric

import (
	"math"
	"testing"
)

func TestTheilSen(t *testing.T) {
	// A line that 3 of 13 rows leave wildly keeps its slope.
	var x, y []float64
	group := make([]int, 13)
	for i := range 13 {
		x, y = append(x, float64(i)), append(y, 2-0.5*float64(i))
	}
	y[2], y[7], y[12] = 500, -900, 700
	if b := TheilSen(x, y, group, 1); math.Abs(b+0.5) > 1e-12 {
		t.Errorf("slope %g, want -0.5", b)
	}
	// Two groups at other levels, one common slope.
	for i := range 13 {
		group[i] = i % 2
		y[i] = 3*x[i] + 100*float64(i%2)
	}
	if b := TheilSen(x, y, group, 2); math.Abs(b-3) > 1e-12 {
		t.Errorf("slope %g, want 3", b)
	}
	if b := TheilSen([]float64{1, 1}, []float64{2, 3}, []int{0, 0}, 1); !math.IsNaN(b) {
		t.Errorf("slope %g of one x, want NaN", b)
	}
	// Many rows: a part of the pairs, the same answer for a line without scatter.
	x, y, group = make([]float64, 5000), make([]float64, 5000), make([]int, 5000)
	for i := range x {
		x[i], y[i] = float64(i*7919%5000), 4*float64(i*7919%5000)
	}
	if b := TheilSen(x, y, group, 1); math.Abs(b-4) > 1e-12 {
		t.Errorf("slope %g, want 4", b)
	}
}
