package model

import (
	"fmt"
	"math"
	"slices"
	"sync"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
)

// Fit is the least-squares fit of a design of full rank. Slices run over the
// used rows. It is computed once and not changed.
type Fit struct {
	Design *Design
	Terms  []Term
	Basis  *numeric.Basis
	Coef   []float64 // per term, of the centred columns

	// Regressors is the basis of the design before a remedy's transformation of
	// its rows; without one it is Basis.
	Regressors *numeric.Basis

	Fitted   []float64
	Residual []float64 // exactly 0 where the leverage is 1
	Leverage []float64

	RSS, TSS float64 // residual and total sum of squares, the latter about the mean of the response
	DF       int     // rows less parameters, and less what a remedy estimated besides
	SD       float64 // residual standard deviation; 0 for a perfect fit, NaN without residual degrees of freedom
	Perfect  bool    // the lines pass through every row, up to rounding

	diagnose func() *Diagnostics
}

// NoFit says why a design has no fit.
type NoFit struct {
	Rows, Parameters int
	Tangles          []Tangle // empty when there are just too few rows
}

// Tangle is a column of the design that others determine.
type Tangle struct {
	Column string
	By     []string
}

func (e *NoFit) Error() string {
	if len(e.Tangles) == 0 {
		return fmt.Sprintf("%d rows cannot determine %d parameters", e.Rows, e.Parameters)
	}
	return fmt.Sprintf("the design determines only some of its %d parameters", e.Parameters)
}

// leverageOne is the leverage from which a row is fitted exactly whatever its
// response is.
const leverageOne = 1 - 1e-10

// NewFit fits d by Householder QR with column pivoting. The error is a *NoFit.
func NewFit(d *Design) (*Fit, error) {
	terms := d.terms()
	n, p := d.N(), len(terms)
	if n < p {
		return nil, &NoFit{Rows: n, Parameters: p}
	}
	f := &Fit{Design: d, Terms: terms, DF: n - p - d.lostDF}
	f.Basis = numeric.NewBasis(f.RegressorColumns(), n)
	f.Regressors = f.Basis
	if !f.Basis.FullRank() {
		return nil, &NoFit{Rows: n, Parameters: p, Tangles: tangles(f.Basis, terms)}
	}
	if d.transform != nil {
		columns := make([][]float64, p)
		for k, t := range terms {
			columns[k] = d.transform(t.Values)
		}
		f.Basis = numeric.NewBasis(columns, n)
		if !f.Basis.FullRank() {
			return nil, &NoFit{Rows: n, Parameters: p, Tangles: tangles(f.Basis, terms)}
		}
	}
	f.Leverage = f.Basis.Leverage()
	f.solve()
	f.diagnose = sync.OnceValue(f.diagnostics)
	return f, nil
}

func tangles(b *numeric.Basis, terms []Term) []Tangle {
	var all []Tangle
	for _, dep := range b.Dependences() {
		t := Tangle{Column: terms[dep.Column].Source}
		for _, on := range dep.On {
			t.By = append(t.By, terms[on].Source)
		}
		all = append(all, t)
	}
	return all
}

// solve computes coefficients and residuals of the response taken about its
// mean: the levels span the constant, and a large mean would cost digits.
func (f *Fit) solve() {
	d := f.Design
	n := d.N()
	mean := numeric.Mean(d.Y)
	y := make([]float64, n)
	for i, v := range d.Y {
		y[i] = v - mean
	}
	y = f.Transformed(y)
	f.Coef = f.Basis.Solve(y)
	for k, t := range f.Terms {
		if t.Part == Level {
			f.Coef[k] += mean
		}
	}
	f.Residual = make([]float64, n)
	f.Basis.Residual(f.Residual, y)
	f.Fitted = make([]float64, n)
	for i := range n {
		if f.Leverage[i] >= leverageOne {
			f.Residual[i] = 0
		}
		f.Fitted[i] = d.Y[i] - f.Residual[i]
	}
	if f.IsTransformed() { // the residuals are those of the transformed rows
		for i := range n {
			f.Fitted[i] = 0
			for k, t := range f.Terms {
				f.Fitted[i] += f.Coef[k] * t.Values[i]
			}
		}
	}
	f.RSS = floats.Dot(f.Residual, f.Residual)
	f.TSS = floats.Dot(y, y)
	f.Perfect = passesThroughAll(f.RSS, d.Y)
	switch {
	case f.DF <= 0:
		f.SD = math.NaN()
	case f.Perfect:
		f.SD = 0
	default:
		f.SD = math.Sqrt(f.RSS / float64(f.DF))
	}
}

// passesThroughAll judges whether a residual sum of squares is nothing but
// rounding of the responses y.
func passesThroughAll(rss float64, y []float64) bool {
	const eps = 0x1p-52
	return rss <= 64*64*eps*eps*float64(len(y))*floats.Dot(y, y)
}

// RegressorColumns are the columns of the design matrix, before a remedy's
// transformation of its rows.
func (f *Fit) RegressorColumns() [][]float64 {
	columns := make([][]float64, len(f.Terms))
	for k, t := range f.Terms {
		columns[k] = t.Values
	}
	return columns
}

// Transformed carries out on a column what a remedy did to the rows; without
// one it is v itself.
func (f *Fit) Transformed(v []float64) []float64 {
	if f.Design.transform == nil {
		return v
	}
	return f.Design.transform(v)
}

// IsTransformed reports whether a remedy transformed the rows.
func (f *Fit) IsTransformed() bool { return f.Design.transform != nil }

// coarse is the least share of the residual SD that a step of rounding must
// have to be seen in the shape of the residuals.
const coarse = 1.0 / 20

// Grid gives the step to which the response was rounded when it is coarse
// against the scatter: all differences are multiples of it to a millionth, and
// it is more than a twentieth of the residual SD.
func (f *Fit) Grid() (step float64, isCoarse bool) {
	if !f.HasScatter() || f.IsTransformed() {
		return 0, false
	}
	y := slices.Clone(f.Design.Y)
	slices.Sort(y)
	y = slices.Compact(y)
	step = math.Inf(1)
	for i := 1; i < len(y); i++ {
		step = min(step, y[i]-y[i-1])
	}
	if len(y) < 2 || step <= coarse*f.SD {
		return 0, false
	}
	for _, v := range y {
		k := (v - y[0]) / step
		if math.Abs(k-math.Round(k)) > 1e-6 {
			return 0, false
		}
	}
	return step, true
}

// N is the number of rows, P the number of parameters.
func (f *Fit) N() int { return f.Design.N() }

// P is the number of parameters.
func (f *Fit) P() int { return len(f.Terms) }

// HasScatter reports whether there are residuals to judge from: residual
// degrees of freedom, and more than rounding in them.
func (f *Fit) HasScatter() bool { return f.DF > 0 && !f.Perfect }

// RSquared is 1 - RSS/TSS about the mean of the response over all used rows;
// NaN for a constant response.
func (f *Fit) RSquared() float64 {
	if f.TSS == 0 {
		return math.NaN()
	}
	return 1 - f.RSS/f.TSS
}

// AdjustedRSquared is 1 - (1-R²)(n-1)/(n-p); NaN where that is undefined.
func (f *Fit) AdjustedRSquared() float64 {
	if f.DF <= 0 {
		return math.NaN()
	}
	return 1 - (1-f.RSquared())*float64(f.N()-1)/float64(f.DF)
}

// Contrast is a linear combination of the parameters.
type Contrast struct {
	Estimate float64
	Catcher  []float64 // c with Estimate = c'y; |c|² is the variance over sigma²
	Length   float64   // |c|
}

// Contrast evaluates the combination with the given weights, one per term.
func (f *Fit) Contrast(weights []float64) Contrast {
	c := Contrast{Catcher: f.Basis.Catcher(weights)}
	for k, w := range weights {
		if w != 0 {
			c.Estimate += w * f.Coef[k]
		}
	}
	c.Length = math.Sqrt(floats.Dot(c.Catcher, c.Catcher))
	return c
}

// Term evaluates the single parameter k.
func (f *Fit) Term(k int) Contrast {
	weights := make([]float64, f.P())
	weights[k] = 1
	return f.Contrast(weights)
}

// SlopeTerms gives for each group the position of its slope among the terms,
// -1 where it has none. With one slope for all there is a single entry.
func (f *Fit) SlopeTerms() []int {
	d := f.Design
	if d.X() == nil {
		return nil
	}
	if d.CommonSlope || !d.HasGroup() {
		for k, t := range f.Terms {
			if t.Part == Shared {
				return []int{k}
			}
		}
		return []int{-1}
	}
	at := make([]int, len(d.Groups))
	for g := range at {
		at[g] = -1
	}
	for k, t := range f.Terms {
		if t.Part == Slope {
			at[t.Group] = k
		}
	}
	return at
}

// AnswerTerms gives the terms that the first question is about, as SlopeTerms
// does, and without a predictor the level of each group.
func (f *Fit) AnswerTerms() []int {
	if f.Design.X() != nil {
		return f.SlopeTerms()
	}
	levels := make([]int, len(f.Design.Groups))
	for g := range levels {
		levels[g] = g // the levels come first among the terms
	}
	return levels
}

// Intercept is the fitted response of group g where every predictor and every
// covariate is 0 and label covariates are at their first level.
func (f *Fit) Intercept(g int) float64 {
	at := 0.0
	for k, t := range f.Terms {
		if t.Part == Level && t.Group == g {
			at += f.Coef[k]
		}
		if t.Part == Level || (t.Part == Slope && t.Group != g) {
			continue
		}
		at -= f.Coef[k] * t.Centre
	}
	return at
}

// HC3 is the heteroscedasticity-consistent standard error of a contrast
// (MacKinnon and White 1985, HC3); NaN where a row of leverage 1 enters it.
func (f *Fit) HC3(c Contrast) float64 {
	v, ok := numeric.HC3(c.Catcher, f.Residual, f.Leverage)
	if !ok {
		return math.NaN()
	}
	return math.Sqrt(v)
}

// Diagnostics are the row diagnostics, computed at the first call.
func (f *Fit) Diagnostics() *Diagnostics { return f.diagnose() }
