package model

import (
	"math"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
)

// AddedF tests whether further columns improve the fit: F with the rank that
// they add and the residual degrees of freedom that are left. Columns that add
// nothing to the design are left out; F and P are NaN when none adds anything
// or no freedom is left.
type AddedF struct {
	F, DF1, DF2, P float64
}

// Asked reports whether the test could be made.
func (a AddedF) Asked() bool { return !math.IsNaN(a.F) }

// Added tests the given columns, each as long as the used rows; they are not
// changed.
func (f *Fit) Added(columns ...[]float64) AddedF {
	basis := numeric.NewBasis(f.offDesign(columns), f.N())
	r := AddedF{DF1: float64(basis.Rank()), F: math.NaN(), P: math.NaN()}
	r.DF2 = float64(f.DF) - r.DF1
	if r.DF1 < 1 || r.DF2 < 1 || !f.HasScatter() {
		return r
	}
	explained := 0.0
	for _, q := range basis.Q() {
		v := floats.Dot(q, f.Residual)
		explained += v * v
	}
	rest := make([]float64, f.N())
	basis.Residual(rest, f.Residual)
	left := floats.Dot(rest, rest)
	if passesThroughAll(left, f.Design.Y) {
		r.F, r.P = math.Inf(1), 0
		return r
	}
	r.F = explained / r.DF1 / (left / r.DF2)
	r.P = numeric.FUpper(r.F, r.DF1, r.DF2)
	return r
}

// offDesign takes the projection on the design off each column and drops those
// of which no more than rounding is left.
func (f *Fit) offDesign(columns [][]float64) [][]float64 {
	var left [][]float64
	for _, c := range columns {
		c = f.Transformed(c)
		r := make([]float64, len(c))
		f.Basis.Residual(r, c)
		if floats.Norm(r, 2) > 1e-8*floats.Norm(c, 2) {
			left = append(left, r)
		}
	}
	return left
}
