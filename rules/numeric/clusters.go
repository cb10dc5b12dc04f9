package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// singularBlock is the eigenvalue of I - Q_s Q_s' up to which a direction of a
// subject's rows counts as fitted exactly and is left out.
const singularBlock = 1e-10

// CR2 returns a variance of a contrast that holds when rows of one subject
// share their errors, and its degrees of freedom by Satterthwaite's rule (Bell
// and McCaffrey 2002). c is the contrast's catcher, e the residuals, q an
// orthonormal basis of the model, subject the number of each row's subject, 0
// to subjects - 1; numbers without a row do no harm. The degrees of freedom are
// often few, and need not be whole. A contrast that is fitted exactly whatever
// the response has variance 0 and NaN degrees of freedom.
//
//	variance = sum over subjects of (c_s' A_s e_s)², A_s = (I - Q_s Q_s')^-1/2
func CR2(c, e []float64, q [][]float64, subject []int, subjects int) (variance, df float64) {
	if len(c) != len(e) || len(subject) != len(e) {
		panic(fmt.Sprintf("numeric.CR2: lengths %d, %d and %d", len(c), len(e), len(subject)))
	}
	rows := make([][]int, subjects)
	for i, s := range subject {
		rows[s] = append(rows[s], i)
	}
	p := len(q)
	// With a_s = A_s c_s and u_s = Q_s'a_s, the columns g_s of the definition
	// have g_s'g_t = [s = t] a_s'a_s - u_s'u_t: no n by n matrix is needed.
	var length []float64
	var projected [][]float64
	for _, block := range rows {
		if len(block) == 0 {
			continue
		}
		a := adjusted(c, q, block)
		u := make([]float64, p)
		product := 0.0
		for k, i := range block {
			product += a[k] * e[i]
			for j, column := range q {
				u[j] += column[i] * a[k]
			}
		}
		variance += product * product
		length = append(length, floats.Dot(a, a))
		projected = append(projected, u)
	}
	return variance, satterthwaite(length, projected)
}

// adjusted returns A_s c_s for the rows of one subject. A_s is I plus a part in
// the span of Q_s', found from the p by p matrix Q_s'Q_s: subjects may have many
// more rows than the model has columns.
func adjusted(c []float64, q [][]float64, block []int) []float64 {
	p := len(q)
	gram := mat.NewSymDense(max(p, 1), nil)
	along := make([]float64, p)
	for j := range p {
		for _, i := range block {
			along[j] += q[j][i] * c[i]
		}
		for k := range j + 1 {
			sum := 0.0
			for _, i := range block {
				sum += q[j][i] * q[k][i]
			}
			gram.SetSym(j, k, sum)
		}
	}
	a := make([]float64, len(block))
	for k, i := range block {
		a[k] = c[i]
	}
	if p == 0 {
		return a
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(gram, true) {
		panic("numeric.CR2: no convergence of eigenvalues")
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	correction := make([]float64, p)
	for m, lambda := range eigen.Values(nil) {
		share := 0.0
		for j := range p {
			share += vectors.At(j, m) * along[j]
		}
		share *= rootFactor(lambda)
		for j := range p {
			correction[j] += share * vectors.At(j, m)
		}
	}
	for k, i := range block {
		for j, column := range q {
			a[k] += column[i] * correction[j]
		}
	}
	return a
}

// rootFactor returns ((1 - lambda)^-1/2 - 1)/lambda: what A_s adds along a
// direction of Q_s' in which Q_s'Q_s has eigenvalue lambda.
func rootFactor(lambda float64) float64 {
	switch {
	case 1-lambda <= singularBlock:
		return -1 / lambda
	case lambda < 1e-9:
		return 0.5 // The limit; the next term is 3/8 lambda.
	}
	return math.Expm1(-0.5*math.Log1p(-lambda)) / lambda
}

// satterthwaite returns (tr K)²/tr(K²) for K[s][t] = [s = t] length[s] -
// projected[s]'projected[t].
func satterthwaite(length []float64, projected [][]float64) float64 {
	trace, squares := 0.0, 0.0
	for s, u := range projected {
		own := length[s] - floats.Dot(u, u)
		trace += own
		squares += own * own
	}
	// Off the diagonal: the squared length of sum u u', less that of its own terms.
	if len(projected) > 0 {
		p := len(projected[0])
		for j := range p {
			for k := range p {
				sum := 0.0
				for _, u := range projected {
					sum += u[j] * u[k]
				}
				squares += sum * sum
			}
		}
	}
	for _, u := range projected {
		size := floats.Dot(u, u)
		squares -= size * size
	}
	return trace * trace / squares
}
