package numeric

import "math"

// invertTail returns the x > 0 at which a tail probability equals target > 0.
// at gives the tail at x and its derivative by ln x. The logarithm of the tail
// must be concave in ln x, as it is for t, chi-squared and F because the
// logarithms of those variables have log-concave densities. Newton's method on
// it then closes in from one side and cannot run away; only where a first step
// lands where the tail underflows is it cut back. A solution beyond the largest
// or below the smallest float64 is +Inf or 0.
func invertTail(target float64, at func(x float64) (tail, slope float64)) float64 {
	logTarget := math.Log(target)
	u := 0.0
	tail, slope := at(1)
	last := math.Inf(1)
	for range 500 {
		step := (logTarget - math.Log(tail)) * tail / slope
		next := u + step
		if x := wholeExp(next); x == 0 || math.IsInf(x, 1) {
			// The solution may lie beyond what a float64 holds.
			edge := min(max(x, math.SmallestNonzeroFloat64), math.MaxFloat64)
			if atEdge, _ := at(edge); atEdge > target {
				return x
			}
		}
		tail, slope = at(wholeExp(next))
		for !(tail > 0) || slope == 0 {
			step /= 2
			next = u + step
			tail, slope = at(wholeExp(next))
		}
		u = next
		size := math.Abs(step)
		// At the last digits the steps stop shrinking.
		if size == 0 || size < 1e-9 && size >= last/2 {
			break
		}
		last = size
	}
	return wholeExp(u)
}

// wholeExp returns e^u up to the largest float64: math.Exp gives +Inf from
// 709.44 on where it is written in assembly (Go 1.26, amd64).
func wholeExp(u float64) float64 {
	half := math.Exp(u / 2)
	return half * half
}
