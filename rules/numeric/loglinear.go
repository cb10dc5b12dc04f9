package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// LogLinearVariance returns the variance of each row when its logarithm follows
// the regressors, v = exp(a + gamma'z), by Gaussian likelihood (Harvey 1976):
// the minimum of sum ln v + e²/((1-h) v). e are the residuals, h the leverages;
// dividing by 1 - h undoes what the fit took from each square. The regressors
// are columns whose span contains the constant; they may depend on each other.
// Rows of leverage one take no part and get the geometric mean of the others.
// Where a group of rows has no residuals at all, its variance is only the small
// number at which the steps end. No row with a residual gives all NaN.
func LogLinearVariance(e, h []float64, regressors [][]float64) []float64 {
	if len(h) != len(e) {
		panic(fmt.Sprintf("numeric.LogLinearVariance: %d residuals, %d leverages", len(e), len(h)))
	}
	var rows []int
	var square []float64
	for i, v := range h {
		if v < 1 {
			rows = append(rows, i)
			square = append(square, e[i]*e[i]/(1-v))
		}
	}
	columns := make([][]float64, len(regressors))
	for j, column := range regressors {
		for _, i := range rows {
			columns[j] = append(columns[j], column[i])
		}
	}
	fit := logVarianceFit{square: square, q: NewBasis(columns, len(rows)).Q()}
	fit.minimize()

	v := make([]float64, len(e))
	rest := math.Exp(floats.Sum(fit.log) / float64(len(rows)))
	for i := range v {
		v[i] = rest
	}
	for k, i := range rows {
		v[i] = math.Exp(fit.log[k])
	}
	return v
}

// logVarianceFit is the search for the log variances: those in the span of q
// that minimize the sum of log + square exp(-log).
type logVarianceFit struct {
	square []float64
	q      [][]float64
	log    []float64
}

// minimize takes Newton steps, halved while they do not lower the sum. It is
// convex, so that they arrive from anywhere; scoring steps, with the expected
// curvature, end at the same place but may circle it when gross rows or strong
// fans make that curvature wrong.
func (f *logVarianceFit) minimize() {
	f.log = make([]float64, len(f.square))
	floats.AddConst(math.Log(Mean(f.square)), f.log)
	value := f.value(f.log)
	trial := make([]float64, len(f.log))
	for range 60 {
		step := f.newtonStep()
		if step == nil {
			return
		}
		longest := floats.Norm(step, math.Inf(1))
		// No further than a factor of twenty at once. Near the end the sum no
		// longer shows what a step does, but there Newton's are right.
		size := min(1, 3/longest)
		floats.AddScaledTo(trial, f.log, size, step)
		next := f.value(trial)
		for longest > 1e-4 && next > value && size > 1e-9 {
			size /= 2
			floats.AddScaledTo(trial, f.log, size, step)
			next = f.value(trial)
		}
		f.log, trial, value = trial, f.log, next
		if longest < 1e-12 {
			return
		}
	}
}

func (f *logVarianceFit) value(log []float64) float64 {
	sum := 0.0
	for i, l := range log {
		sum += l + f.square[i]*math.Exp(-l)
	}
	return sum
}

// newtonStep returns the full step of each log variance, or nil where the
// curvature is singular.
func (f *logVarianceFit) newtonStep() []float64 {
	p := len(f.q)
	weight := make([]float64, len(f.log))
	for i, l := range f.log {
		weight[i] = f.square[i] * math.Exp(-l)
	}
	curvature := mat.NewSymDense(max(p, 1), nil)
	slope := make([]float64, p)
	weighted := make([]float64, len(weight))
	for j, column := range f.q {
		floats.MulTo(weighted, column, weight)
		slope[j] = floats.Sum(weighted) - floats.Sum(column)
		for k := range j + 1 {
			curvature.SetSym(j, k, floats.Dot(weighted, f.q[k]))
		}
	}
	var factor mat.Cholesky
	if p == 0 || !factor.Factorize(curvature) {
		return nil
	}
	var move mat.VecDense
	if err := factor.SolveVecTo(&move, mat.NewVecDense(p, slope)); err != nil && !isCondition(err) {
		return nil
	}
	step := make([]float64, len(f.log))
	for j, column := range f.q {
		floats.AddScaled(step, move.AtVec(j), column)
	}
	return step
}

// isCondition reports that a solution is there, though few of its digits count.
// A step need not be exact.
func isCondition(err error) bool {
	_, ok := err.(mat.Condition)
	return ok
}
