package model

import (
	"math"
	"slices"

	"footing/rules/numeric"
)

// The edits here change what is fitted to the same rows: a column more, another
// scale, rows weighted or made independent of their neighbours.

// With returns the design with a further column, centred on its mean. The
// receiver is not changed.
func (d *Design) With(name string, values ...[]float64) *Design {
	out := *d
	out.Added = append([]Term{}, d.Added...)
	for _, v := range values {
		t := additive(name, v)
		t.Part = Remedy
		out.Added = append(out.Added, t)
	}
	return &out
}

// OnLogScale returns the design with the natural logarithm of the response,
// which must be positive throughout.
func (d *Design) OnLogScale() *Design {
	out := *d
	out.scale = "log"
	out.Y = make([]float64, len(d.Y))
	for i, y := range d.Y {
		out.Y[i] = math.Log(y)
	}
	return &out
}

// WithVariances returns the design with its rows divided by the square roots
// of the given variances.
func (d *Design) WithVariances(variance []float64) *Design {
	out := *d
	root := make([]float64, len(variance))
	for i, v := range variance {
		root[i] = 1 / math.Sqrt(v)
	}
	out.transform = func(v []float64) []float64 {
		w := make([]float64, len(v))
		for i := range v {
			w[i] = v[i] * root[i]
		}
		return w
	}
	return &out
}

// WithSerialErrors returns the design with its rows made independent of their
// predecessors in the sequence, for errors that follow a first-order
// autoregression of the given correlation (Prais and Winsten 1954). A subject's
// first row starts anew. Rows outside the sequence stay as they are.
func (d *Design) WithSerialErrors(rho float64, sequence []int) *Design {
	out := *d
	out.lostDF = d.lostDF + 1
	var sequences [][]int
	alone := make([]bool, d.N())
	for i := range alone {
		alone[i] = true
	}
	for k, i := range sequence {
		alone[i] = false
		if k == 0 || (d.Subject != nil && d.Subject[i] != d.Subject[sequence[k-1]]) {
			sequences = append(sequences, nil)
		}
		last := len(sequences) - 1
		sequences[last] = append(sequences[last], i)
	}
	out.transform = func(v []float64) []float64 {
		w := numeric.PraisWinsten(v, sequences, rho)
		for i, outside := range alone {
			if outside {
				w[i] = v[i]
			}
		}
		return w
	}
	return &out
}

// LeavingOut returns the design without one further predictor or covariate,
// counted over both, the further predictors first. The receiver is not changed.
func (d *Design) LeavingOut(at int) *Design {
	out := *d
	if at < len(d.Predictors)-1 {
		out.Predictors = slices.Delete(slices.Clone(d.Predictors), at+1, at+2)
		out.Columns.Predictors = slices.Delete(slices.Clone(d.Columns.Predictors), at+1, at+2)
		return &out
	}
	at -= len(d.Predictors) - 1
	out.Covariates = slices.Delete(slices.Clone(d.Covariates), at, at+1)
	out.Columns.Covariates = slices.Delete(slices.Clone(d.Columns.Covariates), at, at+1)
	return &out
}
