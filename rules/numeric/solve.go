package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// refinements is the most steps of iterative refinement; well-conditioned
// columns need one, and what has not settled after ten will not.
const refinements = 10

// Solve returns the least-squares coefficients of y on the columns, in the
// order and scale in which they were given. The first solution is refined on
// the augmented system of residuals and coefficients (Björck 1967), with its
// residuals accumulated in twice the precision, until a step no longer halves
// the correction: the result is then the one of the columns as stored, nearly
// to the last digit. It panics without full rank or when y is not n long.
func (b *Basis) Solve(y []float64) []float64 {
	b.requireFullRank("Solve")
	if len(y) != b.n {
		panic(fmt.Sprintf("numeric.Basis.Solve: %d values, want %d", len(y), b.n))
	}
	residual := make([]float64, b.n)
	b.Residual(residual, y)
	beta := make([]float64, len(b.columns))
	first := b.onto(y)
	b.solveUpper(first)
	b.addCoefficients(beta, first)

	gap := make([]float64, b.n)
	last := math.Inf(1)
	for range refinements {
		b.rowGap(gap, y, residual, beta)
		columnGap := b.columnGap(residual)
		step := b.correct(gap, columnGap, residual)
		size := floats.Norm(step, 2)
		if !(size < last/2) {
			break
		}
		last = size
		b.addCoefficients(beta, step)
		if size <= 0x1p-53*b.size(beta) {
			break
		}
	}
	return beta
}

// onto returns Q'v.
func (b *Basis) onto(v []float64) []float64 {
	d := make([]float64, b.rank)
	for k, q := range b.q {
		d[k] = floats.Dot(q, v)
	}
	return d
}

// addCoefficients adds d, in pivot order and for columns at unit length, to
// beta, in the order and scale of the columns as given.
func (b *Basis) addCoefficients(beta, d []float64) {
	for k, j := range b.pivot {
		beta[j] += d[k] / b.length[j]
	}
}

// size returns the length of beta with the columns at unit length.
func (b *Basis) size(beta []float64) float64 {
	scaled := make([]float64, len(beta))
	for j, v := range beta {
		scaled[j] = v * b.length[j]
	}
	return floats.Norm(scaled, 2)
}

// rowGap sets gap to y - residual - X beta.
func (b *Basis) rowGap(gap, y, residual, beta []float64) {
	const block = 512 // Rows whose sums stay in the nearest cache while the columns pass by.
	var sums [block]doubled
	for from := 0; from < b.n; from += block {
		to := min(from+block, b.n)
		for i := from; i < to; i++ {
			hi, lo := twoSum(y[i], -residual[i])
			sums[i-from] = doubled{hi, lo}
		}
		for j, column := range b.columns {
			for i := from; i < to; i++ {
				sums[i-from] = sums[i-from].addProduct(column[i], -beta[j])
			}
		}
		for i := from; i < to; i++ {
			gap[i] = sums[i-from].value()
		}
	}
}

// columnGap returns -X'residual with the columns at unit length, in pivot order.
func (b *Basis) columnGap(residual []float64) []float64 {
	g := make([]float64, b.rank)
	for k, j := range b.pivot {
		g[k] = -dotDoubled(b.columns[j], residual) / b.length[j]
	}
	return g
}

// correct solves dr + X db = gap, X'dr = columnGap for dr and db. It adds dr
// to residual and returns db, ready for addCoefficients. gap is overwritten.
func (b *Basis) correct(gap, columnGap, residual []float64) []float64 {
	b.solveLower(columnGap)
	step := make([]float64, b.rank)
	for k, q := range b.q {
		d := floats.Dot(q, gap)
		step[k] = d - columnGap[k]
		floats.AddScaled(gap, -step[k], q)
	}
	floats.Add(residual, gap)
	b.solveUpper(step)
	return step
}
