package model

import "math"

// Diagnostics tell how each used row stands to the fit. A value that is not
// defined, as at a row of leverage 1, is NaN.
type Diagnostics struct {
	Internal []float64   // e / (s sqrt(1-h))
	External []float64   // the same with s from the other rows; ±Inf when those leave no scatter
	Cook     []float64   // Cook 1977
	DFBETAS  [][]float64 // per slope that exists (without a predictor: per level), per row: its change by the row, over its SE without the row
	SlopeOf  []int       // per entry of DFBETAS: its group, -1 for a slope that all share
}

// Defined reports whether row i has studentized residuals at all.
func (d *Diagnostics) Defined(i int) bool { return !math.IsNaN(d.External[i]) }

// LargestExternal gives the row with the largest absolute externally
// studentized residual, and how many rows have one; row is -1 for none.
func (d *Diagnostics) LargestExternal() (row, defined int) {
	row = -1
	for i, t := range d.External {
		if math.IsNaN(t) {
			continue
		}
		defined++
		if row < 0 || math.Abs(t) > math.Abs(d.External[row]) {
			row = i
		}
	}
	return row, defined
}

func (f *Fit) diagnostics() *Diagnostics {
	n, p := f.N(), float64(f.P())
	nan := math.NaN()
	d := &Diagnostics{Internal: make([]float64, n), External: make([]float64, n), Cook: make([]float64, n)}
	without := make([]float64, n) // residual SD without the row
	for i, e := range f.Residual {
		h := f.Leverage[i]
		if h >= leverageOne || !f.HasScatter() {
			d.Internal[i], d.External[i], d.Cook[i], without[i] = nan, nan, nan, nan
			continue
		}
		r := e / (f.SD * math.Sqrt(1-h))
		d.Internal[i] = r
		d.Cook[i] = r * r * h / ((1 - h) * p)
		without[i] = f.sdWithout(i)
		switch {
		case f.DF < 2:
			d.External[i] = nan
		case without[i] == 0:
			d.External[i] = math.Inf(sign(e))
		default:
			d.External[i] = e / (without[i] * math.Sqrt(1-h))
		}
	}
	terms := f.AnswerTerms()
	for g, k := range terms {
		if k < 0 {
			continue
		}
		c := f.Term(k)
		v := make([]float64, n)
		for i, e := range f.Residual {
			h := f.Leverage[i]
			if h >= leverageOne || f.DF < 2 || !f.HasScatter() {
				v[i] = nan
				continue
			}
			v[i] = c.Catcher[i] * e / (1 - h) / (without[i] * c.Length)
			if without[i] == 0 {
				v[i] = math.Inf(sign(c.Catcher[i] * e))
			}
		}
		if f.Terms[k].Part == Shared {
			g = -1
		}
		d.DFBETAS = append(d.DFBETAS, v)
		d.SlopeOf = append(d.SlopeOf, g)
	}
	return d
}

// sdWithout is the residual SD that is left when row i is deleted: 0 when the
// others then lie on their lines up to rounding, NaN with no freedom left.
func (f *Fit) sdWithout(i int) float64 {
	if f.DF < 2 {
		return math.NaN()
	}
	e := f.Residual[i]
	rest := f.RSS - e*e/(1-f.Leverage[i])
	if rest <= 1e-14*float64(f.N())*f.RSS {
		return 0
	}
	return math.Sqrt(rest / float64(f.DF-1))
}

func sign(v float64) int {
	if v < 0 {
		return -1
	}
	return 1
}
