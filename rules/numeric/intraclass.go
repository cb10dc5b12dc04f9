package numeric

import (
	"fmt"
	"math"
)

// IntraclassANOVA compares the residuals of k subjects, numbered 0 to k - 1:
// the F of the one-way analysis of variance, its degrees of freedom k - 1 and
// n - k, its upper-tail p, and the intraclass correlation
// (MSB - MSW)/(MSB + (n0 - 1) MSW), n0 = (n - sum n_i²/n)/(k - 1) (Fisher
// 1925; n0 for unequal subjects as Snedecor and Cochran 1967). Subjects
// without a row do not count towards k. F, p and icc are NaN without degrees
// of freedom on either side.
func IntraclassANOVA(e []float64, subject []int, k int) (f, d1, d2, p, icc float64) {
	if len(e) != len(subject) {
		panic(fmt.Sprintf("numeric.IntraclassANOVA: %d residuals, %d subjects", len(e), len(subject)))
	}
	size := make([]float64, k)
	mean := make([]float64, k)
	for i, s := range subject {
		size[s]++
		mean[s] += e[i]
	}
	n := float64(len(e))
	filled, squaredSizes := 0.0, 0.0
	for s := range size {
		if size[s] == 0 {
			continue
		}
		filled++
		mean[s] /= size[s]
		squaredSizes += size[s] * size[s]
	}
	grand := Mean(e)
	between, within := 0.0, 0.0
	for s := range size {
		between += size[s] * (mean[s] - grand) * (mean[s] - grand)
	}
	for i, s := range subject {
		within += (e[i] - mean[s]) * (e[i] - mean[s])
	}
	d1, d2 = filled-1, n-filled
	if !(d1 > 0 && d2 > 0) {
		return math.NaN(), d1, d2, math.NaN(), math.NaN()
	}
	msb, msw := between/d1, within/d2
	n0 := (n - squaredSizes/n) / d1
	f = msb / msw
	return f, d1, d2, FUpper(f, d1, d2), (msb - msw) / (msb + (n0-1)*msw)
}
