package numeric

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// ConditionNumber is the largest over the smallest singular value of the
// matrix with these columns, each scaled to unit length but not centred
// (Belsley, Kuh and Welsch 1980). Columns are not changed. A column of zeros
// or fewer rows than columns give +Inf.
func ConditionNumber(columns [][]float64) float64 {
	n, p := len(columns[0]), len(columns)
	if n < p {
		return math.Inf(1)
	}
	m := mat.NewDense(n, p, nil)
	for k, c := range columns {
		length := floats.Norm(c, 2)
		if length == 0 {
			return math.Inf(1)
		}
		for i, v := range c {
			m.Set(i, k, v/length)
		}
	}
	var svd mat.SVD
	if !svd.Factorize(m, mat.SVDNone) {
		return math.NaN()
	}
	values := svd.Values(nil)
	return values[0] / values[p-1]
}

// Distinct counts the different values of x.
func Distinct(x []float64) int {
	seen := make(map[float64]struct{}, len(x))
	for _, v := range x {
		seen[v] = struct{}{}
	}
	return len(seen)
}
