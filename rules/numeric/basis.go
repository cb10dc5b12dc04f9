package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// dependentLength is the length that must remain of a column of unit length
// after projecting off the others; with less it counts as dependent.
const dependentLength = 1e-10

// dependenceShare is the size of a coefficient, relative to the largest, above
// which a column is named as one that another depends on.
const dependenceShare = 1e-6

// fullLeverage is the leverage from which a row counts as fitted exactly.
const fullLeverage = 1 - 1e-10

// Basis is an orthonormal basis of the space spanned by the columns of a
// matrix, by Householder reflections with column pivoting (Businger and Golub
// 1965). Columns are brought to unit length first, so that neither the units
// of a predictor nor the choice of its zero decides about rank.
//
// A Basis does not change once made and may be used by several goroutines.
type Basis struct {
	n       int
	columns [][]float64 // as given
	length  []float64   // of each column as given
	pivot   []int       // pivot[k] is the column that went in as k-th
	rank    int
	r       [][]float64 // r[k][j], k < rank: of the columns at unit length, in pivot order
	q       [][]float64
	h       []float64
	fixed   []int // rows of leverage one
}

// Dependence says that a column is a linear combination of others, up to
// rounding.
type Dependence struct {
	// Column is the position of the dependent column among those given.
	Column int
	// On holds the positions of the columns it depends on, in rising order;
	// it is empty for a column of zeros.
	On []int
}

// NewBasis factors the n by p matrix with the given columns. p may be 0, and
// may exceed n. The columns are not changed, but they are kept for Solve, so
// the caller must not change them afterwards either. It panics when a column
// has another length than n or holds a value that is not finite.
func NewBasis(columns [][]float64, n int) *Basis {
	b := &Basis{
		n:       n,
		columns: columns,
		length:  make([]float64, len(columns)),
		pivot:   make([]int, len(columns)),
	}
	work := b.unitColumns()
	scale := b.reflect(work)
	b.formQ(work, scale)
	b.measureLeverage()
	return b
}

// unitColumns returns copies of the columns at unit length; columns of zeros
// stay zero.
func (b *Basis) unitColumns() [][]float64 {
	p := len(b.columns)
	store := make([]float64, p*b.n)
	work := make([][]float64, p)
	for j, column := range b.columns {
		if len(column) != b.n {
			panic(fmt.Sprintf("numeric.NewBasis: column %d has length %d, want %d", j, len(column), b.n))
		}
		b.pivot[j] = j
		b.length[j] = floats.Norm(column, 2)
		if math.IsNaN(b.length[j]) || math.IsInf(b.length[j], 0) {
			panic(fmt.Sprintf("numeric.NewBasis: column %d has length %v", j, b.length[j]))
		}
		work[j] = store[j*b.n : (j+1)*b.n : (j+1)*b.n]
		if b.length[j] > 0 {
			for i, v := range column {
				work[j][i] = v / b.length[j]
			}
		}
	}
	return work
}

// reflect brings work to triangular form, one Householder reflection
// I - scale v v' a column, and leaves each v in the lower part of its column.
func (b *Basis) reflect(work [][]float64) (scale []float64) {
	p := len(work)
	b.r = make([][]float64, 0, p)
	left := make([]float64, p) // what is left of each column below row k
	for j := range work {
		left[j] = math.Sqrt(floats.Dot(work[j], work[j]))
	}
	for k := 0; k < min(p, b.n); k++ {
		best := k
		for j := k + 1; j < p; j++ {
			if left[j] > left[best] {
				best = j
			}
		}
		if !(left[best] >= dependentLength) {
			break
		}
		work[k], work[best] = work[best], work[k]
		left[k], left[best] = left[best], left[k]
		b.pivot[k], b.pivot[best] = b.pivot[best], b.pivot[k]
		for _, row := range b.r {
			row[k], row[best] = row[best], row[k]
		}

		v := work[k][k:]
		diagonal := -math.Copysign(left[k], v[0])
		v[0] -= diagonal
		c := 2 / floats.Dot(v, v)
		row := make([]float64, p)
		row[k] = diagonal
		for j := k + 1; j < p; j++ {
			a := work[j][k:]
			floats.AddScaled(a, -c*floats.Dot(v, a), v)
			row[j] = a[0]
			left[j] = math.Sqrt(floats.Dot(a[1:], a[1:]))
		}
		b.r = append(b.r, row)
		scale = append(scale, c)
	}
	b.rank = len(b.r)
	return scale
}

// formQ turns the reflections in work into the first rank columns of their
// product, in place, last reflection first.
func (b *Basis) formQ(work [][]float64, scale []float64) {
	for k := b.rank - 1; k >= 0; k-- {
		v := work[k][k:]
		for j := k + 1; j < b.rank; j++ {
			a := work[j][k:]
			floats.AddScaled(a, -scale[k]*floats.Dot(v, a), v)
		}
		floats.Scale(-scale[k]*v[0], v)
		v[0]++
		clear(work[k][:k])
	}
	b.q = work[:b.rank:b.rank]
}

func (b *Basis) measureLeverage() {
	b.h = make([]float64, b.n)
	for _, column := range b.q {
		for i, v := range column {
			b.h[i] += v * v
		}
	}
	for i, h := range b.h {
		if h >= fullLeverage {
			b.h[i] = 1
			b.fixed = append(b.fixed, i)
		}
	}
}

// Rows returns the number of rows, n.
func (b *Basis) Rows() int { return b.n }

// Columns returns the number of columns that were given, p.
func (b *Basis) Columns() int { return len(b.columns) }

// Rank returns the number of independent columns: those of which, at unit
// length, a length of at least 1e-10 remains off the ones before.
func (b *Basis) Rank() int { return b.rank }

// FullRank reports that no column depends on the others.
func (b *Basis) FullRank() bool { return b.rank == len(b.columns) }

// Q returns Rank() orthonormal columns of length n that span the columns
// given. They belong to the basis and must not be changed.
func (b *Basis) Q() [][]float64 { return b.q }

// Leverage returns the squared length of each row of Q, the share of each
// row's own value in its fitted value: n numbers in [0, 1] that add up to
// Rank(). From 1 - 1e-10 on the value is exactly 1. The slice belongs to the
// basis and must not be changed.
func (b *Basis) Leverage() []float64 { return b.h }

// Dependences returns, in rising order of Column, every column that depends on
// the others, and on which: those with a coefficient above 1e-6 of the
// largest, all columns at unit length. It is nil at full rank. Which of
// several columns tied together is the dependent one is not determined.
func (b *Basis) Dependences() []Dependence {
	var found []Dependence
	at := make([]int, len(b.pivot))
	for k, j := range b.pivot {
		at[j] = k
	}
	for j := range b.pivot {
		if at[j] < b.rank {
			continue
		}
		found = append(found, Dependence{Column: j, On: b.dependsOn(at[j])})
	}
	return found
}

// dependsOn lists the columns with a noticeable share in the one at pivot
// position at.
func (b *Basis) dependsOn(at int) []int {
	coefficient := make([]float64, b.rank)
	for k := range coefficient {
		coefficient[k] = b.r[k][at]
	}
	b.solveUpper(coefficient)
	share := make([]float64, len(b.pivot))
	largest := 0.0
	for k, c := range coefficient {
		share[b.pivot[k]] = math.Abs(c)
		largest = max(largest, math.Abs(c))
	}
	var on []int
	for j, s := range share {
		// Below the length that decides about rank, a coefficient is rounding.
		if s > dependenceShare*largest && largest > dependentLength {
			on = append(on, j)
		}
	}
	return on
}

// solveUpper replaces v by R^-1 v, R the leading rank by rank triangle.
func (b *Basis) solveUpper(v []float64) {
	for k := b.rank - 1; k >= 0; k-- {
		for j := k + 1; j < b.rank; j++ {
			v[k] -= b.r[k][j] * v[j]
		}
		v[k] /= b.r[k][k]
	}
}

// solveLower replaces v by the solution of R'x = v.
func (b *Basis) solveLower(v []float64) {
	for k := range b.rank {
		for j := range k {
			v[k] -= b.r[j][k] * v[j]
		}
		v[k] /= b.r[k][k]
	}
}

// Residual sets dst to y - Q(Q'y), what is left of y off the columns. It
// projects twice, so that dst is orthogonal to them to rounding even where y
// is nearly in their span ("twice is enough", Parlett 1980). Rows of leverage
// one get exactly 0. dst and y have length n and may be the same slice.
func (b *Basis) Residual(dst, y []float64) {
	b.copyRows(dst, y)
	b.projectOff(dst)
	b.projectOff(dst)
	b.clearFixed(dst)
}

// ResidualOnce is Residual with a single projection: good to rounding for a y
// that is not nearly in the span of the columns, such as simulated noise, at
// half the cost.
func (b *Basis) ResidualOnce(dst, y []float64) {
	b.copyRows(dst, y)
	b.projectOff(dst)
	b.clearFixed(dst)
}

func (b *Basis) copyRows(dst, y []float64) {
	if len(dst) != b.n || len(y) != b.n {
		panic(fmt.Sprintf("numeric.Basis.Residual: lengths %d and %d, want %d", len(dst), len(y), b.n))
	}
	copy(dst, y)
}

func (b *Basis) projectOff(v []float64) {
	for _, q := range b.q {
		floats.AddScaled(v, -floats.Dot(q, v), q)
	}
}

// clearFixed sets rows of leverage one to 0: what stands there is rounding,
// and would look like a residual wherever residuals are scaled.
func (b *Basis) clearFixed(v []float64) {
	for _, i := range b.fixed {
		v[i] = 0
	}
}

// catch returns R^-T P'l with the columns at unit length: the weights of l'beta
// on Q'y. caller is named when l does not fit or the rank is not full.
func (b *Basis) catch(l []float64, caller string) []float64 {
	b.requireFullRank(caller)
	if len(l) != len(b.columns) {
		panic(fmt.Sprintf("numeric.Basis.%s: %d coefficients, want %d", caller, len(l), len(b.columns)))
	}
	v := make([]float64, b.rank)
	for k, j := range b.pivot {
		v[k] = l[j] / b.length[j]
	}
	b.solveLower(v)
	return v
}

func (b *Basis) requireFullRank(caller string) {
	if !b.FullRank() {
		panic(fmt.Sprintf("numeric.Basis.%s: rank %d of %d columns", caller, b.rank, len(b.columns)))
	}
}

// Catcher returns the vector c of length n for which c'y is the least-squares
// value of l'beta, whatever y is: c = Q R^-T P'l. l has one entry for each
// column given, in that order and scale. The squared length of c is
// l'(X'X)^-1 l. It panics without full rank.
func (b *Basis) Catcher(l []float64) []float64 {
	weights := b.catch(l, "Catcher")
	c := make([]float64, b.n)
	for k, w := range weights {
		floats.AddScaled(c, w, b.q[k])
	}
	return c
}

// Covariance returns l'(X'X)^-1 m: times the residual variance, the covariance
// of l'beta and m'beta. l and m have one entry for each column given. It
// panics without full rank.
func (b *Basis) Covariance(l, m []float64) float64 {
	return floats.Dot(b.catch(l, "Covariance"), b.catch(m, "Covariance"))
}
