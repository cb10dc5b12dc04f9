package numeric

import "math"

// doubled is an unevaluated sum of two float64, hi + lo, with about 32 decimal
// digits (Dekker 1971).
type doubled struct{ hi, lo float64 }

// twoSum returns s and e with s = fl(a + b) and s + e = a + b exactly (Knuth 1969).
func twoSum(a, b float64) (s, e float64) {
	s = a + b
	t := s - a
	return s, (a - (s - t)) + (b - t)
}

// twoProduct returns p and e with p = fl(a b) and p + e = a b exactly, short
// of underflow.
func twoProduct(a, b float64) (p, e float64) {
	p = a * b
	return p, math.FMA(a, b, -p)
}

// addProduct returns s + a b, with errors of the second order only (Ogita,
// Rump and Oishi 2005, algorithm 5.3).
func (s doubled) addProduct(a, b float64) doubled {
	p, e := twoProduct(a, b)
	hi, f := twoSum(s.hi, p)
	return doubled{hi, s.lo + (e + f)}
}

func (s doubled) value() float64 { return s.hi + s.lo }

// dotDoubled returns the dot product as if summed in twice the precision.
func dotDoubled(x, y []float64) float64 {
	var s doubled
	for i, v := range x {
		s = s.addProduct(v, y[i])
	}
	return s.value()
}
