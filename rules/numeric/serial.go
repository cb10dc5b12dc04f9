package numeric

import (
	"fmt"
	"math"
)

// PraisWinsten returns v transformed so that errors with first-order
// autocorrelation rho become independent with equal variance (Prais and Winsten
// 1954): the first row of a sequence times sqrt(1 - rho²), every other less rho
// times the one before. A sequence holds positions of v in their order; each
// row belongs to one sequence, and keeps its position in the result. The
// response and all columns of a design, the constant too, are to be transformed
// alike. |rho| < 1.
func PraisWinsten(v []float64, sequences [][]int, rho float64) []float64 {
	if !(math.Abs(rho) < 1) {
		panic(fmt.Sprintf("numeric.PraisWinsten: rho is %v", rho))
	}
	out := make([]float64, len(v))
	for _, sequence := range sequences {
		for k, i := range sequence {
			if k == 0 {
				out[i] = math.Sqrt((1-rho)*(1+rho)) * v[i]
			} else {
				out[i] = v[i] - rho*v[sequence[k-1]]
			}
		}
	}
	return out
}
