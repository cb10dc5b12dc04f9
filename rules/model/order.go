package model

import (
	"cmp"
	"math"
	"slices"
)

// Sequence lists the used rows that have an order, sorted by it, ties in file
// order, subject by subject where there are subjects; and the pairs of
// neighbours in it, which with subjects lie within one subject. It needs an
// order.
func (d *Design) Sequence() (rows []int, neighbours [][2]int) {
	for i := range d.N() {
		if !math.IsNaN(d.Order[i]) && (d.Subject == nil || d.Subject[i] >= 0) {
			rows = append(rows, i)
		}
	}
	slices.SortStableFunc(rows, func(a, b int) int {
		if d.Subject != nil {
			if c := cmp.Compare(d.Subject[a], d.Subject[b]); c != 0 {
				return c
			}
		}
		return cmp.Compare(d.Order[a], d.Order[b])
	})
	for k := 1; k < len(rows); k++ {
		a, b := rows[k-1], rows[k]
		if d.Subject == nil || d.Subject[a] == d.Subject[b] {
			neighbours = append(neighbours, [2]int{a, b})
		}
	}
	return rows, neighbours
}

// OrderRank is each used row's rank in the order about the mean rank, ties at
// their mean; rows without an order are 0.
func (d *Design) OrderRank() []float64 {
	var sorted []int
	for i, v := range d.Order {
		if !math.IsNaN(v) {
			sorted = append(sorted, i)
		}
	}
	slices.SortStableFunc(sorted, func(a, b int) int { return cmp.Compare(d.Order[a], d.Order[b]) })
	rank := make([]float64, d.N())
	middle := float64(len(sorted)+1) / 2
	for from := 0; from < len(sorted); {
		to := from + 1
		for to < len(sorted) && d.Order[sorted[to]] == d.Order[sorted[from]] {
			to++
		}
		for k := from; k < to; k++ {
			rank[sorted[k]] = float64(from+1+to)/2 - middle
		}
		from = to
	}
	return rank
}

// LagOne is the lag-one autocorrelation of the residuals along the order,
// sum e_i e_{i-1} / RSS, and its exact mean in sound tables of this design,
// -sum q_i . q_{i-1} / df with q_i the rows of Q. It needs an order.
func (f *Fit) LagOne() (r1, mean float64) {
	_, neighbours := f.Design.Sequence()
	e, q := f.Residual, f.Basis.Q()
	for _, pair := range neighbours {
		r1 += e[pair[0]] * e[pair[1]]
		for _, column := range q {
			mean -= column[pair[0]] * column[pair[1]]
		}
	}
	return r1 / f.RSS, mean / float64(f.DF)
}
