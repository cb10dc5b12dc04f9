package model

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
)

// Question is a linear combination of the parameters of a least-squares fit,
// kept with all that is needed to ask it of fewer rows: the design matrix by
// columns, the response and the weights of the combination.
type Question struct {
	columns [][]float64
	y       []float64
	weights []float64
	rows    []int // of the design, for each row here

	// second is set for the difference of two straight lines, which are refitted
	// by their sums: whether each row belongs to the second.
	second []bool
	x      []float64 // of those lines, about their means before any deletion
}

// SlopeQuestion asks for the slope of group g: on the group's own rows where
// own lines are quoted, else in the joint model. It is false for a group
// without a slope.
func (f *Fit) SlopeQuestion(g int) (Question, bool) {
	k := f.SlopeTerms()[g]
	if k < 0 {
		return Question{}, false
	}
	if !f.QuotesOwnLines() {
		weights := make([]float64, f.P())
		weights[k] = 1
		return f.question(weights), true
	}
	d := f.Design
	q := Question{rows: d.Members(g), y: d.OfGroup(d.Y, g), weights: []float64{0, 1}}
	x := d.OfGroup(d.X(), g)
	floats.AddConst(-numeric.Mean(x), x)
	q.columns = [][]float64{slices.Repeat([]float64{1}, len(x)), x}
	return q, true
}

// DifferenceQuestion asks for the difference of the two slopes of two groups;
// it is false for another number of groups with slopes.
func (f *Fit) DifferenceQuestion() (Question, bool) {
	terms, _ := f.compared()
	if len(terms) != 2 || f.Design.X() == nil {
		return Question{}, false
	}
	weights := make([]float64, f.P())
	weights[terms[0]], weights[terms[1]] = -1, 1
	q := f.question(weights)
	if f.QuotesOwnLines() && len(f.Design.Groups) == 2 {
		q.second, q.x = make([]bool, f.N()), make([]float64, f.N())
		for g := range f.Design.Groups {
			mean := numeric.Mean(f.Design.OfGroup(f.Design.X(), g))
			for _, i := range f.Design.Members(g) {
				q.second[i], q.x[i] = g == 1, f.Design.X()[i]-mean
			}
		}
	}
	return q, true
}

func (f *Fit) question(weights []float64) Question {
	q := Question{columns: f.RegressorColumns(), y: f.Design.Y, weights: weights, rows: make([]int, f.N())}
	for i := range q.rows {
		q.rows[i] = i
	}
	return q
}

// Len is the number of rows that the question is asked of.
func (q Question) Len() int { return len(q.y) }

// IsLine reports whether the question is the slope of one straight line, which
// is refitted by its sums.
func (q Question) IsLine() bool { return len(q.columns) == 2 && q.weights[0] == 0 }

// Of asks it of responses y of the same rows in place of the original ones.
func (q Question) Of(y []float64) Question {
	q.y = y
	return q
}

// Answered is the fit of a question: fitted values, residual sum of squares.
func (q Question) Answered() (fitted []float64, rss float64, basis *numeric.Basis) {
	basis = numeric.NewBasis(q.columns, q.Len())
	e := make([]float64, q.Len())
	basis.Residual(e, q.y)
	fitted = make([]float64, q.Len())
	for i := range e {
		fitted[i] = q.y[i] - e[i]
	}
	return fitted, floats.Dot(e, e), basis
}

// Deletion is what deleting the most decisive rows one after the other does to
// an answer.
type Deletion struct {
	Flip    int   // rows deleted until the answer is not clear; 0 when more than were allowed
	Reverse int   // rows deleted until its sign turns; 0 when more than were allowed
	Rows    []int // of the design, in the order of deletion, up to Flip
}

// Greedy deletes, most times over, the row that brings t nearest to zero or
// beyond, refitting after each. That many rows are enough; fewer may be, since
// the search is greedy. It stops at the first turn of the sign, or with one
// degree of freedom left. Rows of leverage 1 are never deleted.
func (q Question) Greedy(confidence float64, most int) Deletion {
	g := newGreedy(q)
	var d Deletion
	sign := math.Copysign(1, g.estimate())
	for deleted := 0; ; deleted++ {
		t, df := g.t()
		if d.Flip == 0 && deleted > 0 && (t*sign <= 0 || math.Abs(t) < numeric.StudentQuantile(1-(1-confidence)/2, df)) {
			d.Flip = deleted
			d.Rows = slices.Clone(g.deleted)
		}
		if t*sign < 0 {
			d.Reverse = deleted
			return d
		}
		if deleted == most || !g.deleteNext(sign) {
			return d
		}
	}
}

// greedy is the state of a search: the rows that are left, fitted.
type greedy struct {
	q       Question
	left    []int // positions in q
	deleted []int // rows of the design

	catcher, residual, leverage []float64 // over left
	value, rss, variance        float64   // variance over sigma²
	df                          int
}

func newGreedy(q Question) *greedy {
	g := &greedy{q: q, left: make([]int, q.Len())}
	for i := range g.left {
		g.left[i] = i
	}
	g.fit()
	return g
}

func (g *greedy) estimate() float64 { return g.value }

// fit fits the rows that are left; a straight line through its sums, anything
// else by QR.
func (g *greedy) fit() bool {
	n, p := len(g.left), len(g.q.columns)
	g.df = n - p
	g.catcher, g.residual, g.leverage = g.catcher[:0], g.residual[:0], g.leverage[:0]
	if g.q.IsLine() {
		return g.fitLine()
	}
	if g.q.second != nil {
		return g.fitTwoLines()
	}
	columns := make([][]float64, p)
	for k, c := range g.q.columns {
		columns[k] = make([]float64, n)
		for i, at := range g.left {
			columns[k][i] = c[at]
		}
	}
	y := make([]float64, n)
	for i, at := range g.left {
		y[i] = g.q.y[at]
	}
	basis := numeric.NewBasis(columns, n)
	if !basis.FullRank() {
		return false
	}
	g.catcher = basis.Catcher(g.q.weights)
	g.leverage = basis.Leverage()
	g.residual = make([]float64, n)
	basis.Residual(g.residual, y)
	floats.AddConst(-numeric.Mean(y), y)
	g.value = floats.Dot(g.catcher, y)
	g.rss = floats.Dot(g.residual, g.residual)
	g.variance = floats.Dot(g.catcher, g.catcher)
	return true
}

func (g *greedy) fitLine() bool {
	x, y := g.q.columns[1], g.q.y
	n := float64(len(g.left))
	var xm, ym float64
	for _, i := range g.left {
		xm += x[i]
		ym += y[i]
	}
	xm, ym = xm/n, ym/n
	var sxx, sxy float64
	for _, i := range g.left {
		d := x[i] - xm
		sxx += d * d
		sxy += d * (y[i] - ym)
	}
	if sxx == 0 {
		return false
	}
	g.value, g.variance, g.rss = sxy/sxx, 1/sxx, 0
	for _, i := range g.left {
		d := x[i] - xm
		e := y[i] - ym - g.value*d
		g.catcher = append(g.catcher, d/sxx)
		g.leverage = append(g.leverage, 1/n+d*d/sxx)
		g.residual = append(g.residual, e)
		g.rss += e * e
	}
	return true
}

// sums are those of one of two lines.
type sums struct{ n, x, y, xx, xy, far float64 }

// fitTwoLines fits the second slope less the first: what one line's rows say of
// it leaves the other's alone.
func (g *greedy) fitTwoLines() bool {
	x, y := g.q.x, g.q.y
	var lines [2]sums
	of := func(i int) *sums {
		if g.q.second[i] {
			return &lines[1]
		}
		return &lines[0]
	}
	for _, i := range g.left {
		s := of(i)
		s.n++
		s.x += x[i]
		s.y += y[i]
	}
	for k := range lines {
		lines[k].x /= lines[k].n
		lines[k].y /= lines[k].n
	}
	for _, i := range g.left {
		s := of(i)
		d := x[i] - s.x
		s.xx += d * d
		s.xy += d * (y[i] - s.y)
		s.far = max(s.far, math.Abs(x[i]))
	}
	for _, s := range lines {
		if !(s.xx > 1e-20*s.n*s.far*s.far) { // one value of x, but for rounding; NaN without a row
			return false
		}
	}
	slope := [2]float64{lines[0].xy / lines[0].xx, lines[1].xy / lines[1].xx}
	g.value, g.variance, g.rss = slope[1]-slope[0], 1/lines[0].xx+1/lines[1].xx, 0
	for _, i := range g.left {
		k, sign := 0, -1.0
		if g.q.second[i] {
			k, sign = 1, 1
		}
		s := &lines[k]
		d := x[i] - s.x
		e := y[i] - s.y - slope[k]*d
		g.catcher = append(g.catcher, sign*d/s.xx)
		g.leverage = append(g.leverage, 1/s.n+d*d/s.xx)
		g.residual = append(g.residual, e)
		g.rss += e * e
	}
	return true
}

func (g *greedy) t() (t, df float64) {
	df = float64(g.df)
	return g.value / math.Sqrt(g.rss/df*g.variance), df
}

// deleteNext deletes the row after which t, counted in the direction of sign,
// is least, by the exact formulas of deletion; false when no row can go.
func (g *greedy) deleteNext(sign float64) bool {
	if g.df < 2 {
		return false
	}
	best, least := -1, math.Inf(1)
	for i, e := range g.residual {
		free := 1 - g.leverage[i]
		if g.leverage[i] >= leverageOne {
			continue
		}
		value := sign * (g.value - g.catcher[i]*e/free)
		rss := g.rss - e*e/free
		variance := g.variance + g.catcher[i]*g.catcher[i]/free
		if rss < 0 { // rounding: nothing is left
			continue
		}
		// t², signed, rises with t and spares a root for each row.
		if t := value * math.Abs(value) / (rss * variance); t < least {
			best, least = i, t
		}
	}
	if best < 0 {
		return false
	}
	g.deleted = append(g.deleted, g.q.rows[g.left[best]])
	g.left = slices.Delete(g.left, best, best+1)
	return g.fit()
}
