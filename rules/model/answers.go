package model

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
)

// Answers are the two questions answered from one fit or by one remedy: the
// slope of each group, and whether the slopes differ. Without a predictor the
// means take the place of the slopes.
type Answers struct {
	Slopes     []Estimate
	Difference *Comparison // nil when not asked
	Scale      string      // "" when the response is on its own scale, "log" otherwise
}

// Estimate is a slope, or a group mean, with its interval. What cannot be
// computed is NaN.
type Estimate struct {
	Group     string // "" for a slope that all rows share
	Rows      int
	Exists    bool // false: fewer than two distinct predictor values
	Value     float64
	Intercept float64
	SE        float64
	DF        float64
	T, P      float64
	Low, High float64
	RSquared  float64 // of the group's own line; NaN when the joint model is quoted
	PooledSE  float64
	HC3       float64
}

// Comparison is the test of equal slopes, or of equal means.
type Comparison struct {
	F, DF1, DF2, P float64
	Pairs          []Pair
	Detectable     float64 // difference found with 80 % power, for the pair with the largest SE
}

// Pair is the second group's slope less the first's, by byte order of labels.
type Pair struct {
	A, B      string
	Value, SE float64
	T, P      float64 // plain t
	HolmP     float64 // over all pairs
	TukeyP    float64 // Tukey and Kramer
	Low, High float64 // two groups: plain t; more: Tukey and Kramer
}

// Clear reports whether the interval excludes zero.
func (e Estimate) Clear() bool { return e.Low > 0 || e.High < 0 }

// Answers answers both questions at the given confidence, in (0, 1).
func (f *Fit) Answers(confidence float64) Answers {
	a := Answers{Scale: f.Design.scale}
	if f.Design.X() == nil {
		a.Slopes = f.means(confidence)
	} else {
		a.Slopes = f.slopes(confidence)
	}
	a.Difference = f.compare(confidence)
	return a
}

// QuotesOwnLines reports whether each group's own straight line is what is
// quoted: one predictor, no covariate, nothing added, a slope per group.
func (f *Fit) QuotesOwnLines() bool {
	d := f.Design
	return len(d.Predictors) == 1 && len(d.Covariates) == 0 && len(d.Added) == 0 && d.transform == nil && (!d.CommonSlope || !d.HasGroup())
}

func (f *Fit) slopes(confidence float64) []Estimate {
	d := f.Design
	sizes := d.GroupSizes()
	var all []Estimate
	for g, k := range f.SlopeTerms() {
		e := undefinedEstimate(d.Groups[g], sizes[g])
		if d.CommonSlope && d.HasGroup() {
			e.Group, e.Rows = "", d.N()
		}
		if k < 0 {
			all = append(all, e)
			continue
		}
		e.Exists = true
		e.Intercept = f.Intercept(g)
		f.joint(&e, f.Term(k), confidence)
		if f.QuotesOwnLines() {
			f.ownLine(&e, g, confidence)
		}
		all = append(all, e)
	}
	return all
}

func undefinedEstimate(group string, rows int) Estimate {
	nan := math.NaN()
	return Estimate{
		Group: group, Rows: rows, Value: nan, Intercept: nan, SE: nan, DF: nan, T: nan, P: nan,
		Low: nan, High: nan, RSquared: nan, PooledSE: nan, HC3: nan,
	}
}

// joint fills e from the joint model with its common residual variance.
func (f *Fit) joint(e *Estimate, c Contrast, confidence float64) {
	e.Value = c.Estimate
	e.DF = float64(f.DF)
	e.PooledSE = f.SD * c.Length
	e.HC3 = f.HC3(c)
	e.interval(e.PooledSE, confidence)
}

// interval fills SE, t, p and the interval by Student's t. A perfect fit has
// an interval without width and no t.
func (e *Estimate) interval(se, confidence float64) {
	e.SE = se
	e.T, e.P, e.Low, e.High = math.NaN(), math.NaN(), math.NaN(), math.NaN()
	switch {
	case math.IsNaN(se) || e.DF <= 0:
		e.SE = math.NaN()
	case se == 0:
		e.Low, e.High = e.Value, e.Value
	default:
		e.T = e.Value / se
		e.P = numeric.StudentTwoSided(e.T, e.DF)
		half := numeric.StudentQuantile(1-(1-confidence)/2, e.DF) * se
		e.Low, e.High = e.Value-half, e.Value+half
	}
}

// ownLine fills e from the straight line through the rows of group g alone.
func (f *Fit) ownLine(e *Estimate, g int, confidence float64) {
	d := f.Design
	x, y := d.OfGroup(d.X(), g), d.OfGroup(d.Y, g)
	xm, ym := numeric.Mean(x), numeric.Mean(y)
	var sxx, sxy, syy float64
	for i := range x {
		sxx += (x[i] - xm) * (x[i] - xm)
		sxy += (x[i] - xm) * (y[i] - ym)
		syy += (y[i] - ym) * (y[i] - ym)
	}
	slope := sxy / sxx
	rss := 0.0
	for i := range x {
		r := (y[i] - ym) - slope*(x[i]-xm)
		rss += r * r
	}
	e.DF = float64(len(x) - 2)
	if syy > 0 {
		e.RSquared = 1 - rss/syy
	}
	if e.DF <= 0 {
		e.RSquared = math.NaN() // a line through two points explains nothing
	}
	if passesThroughAll(rss, y) {
		rss = 0
	}
	se := math.NaN()
	if e.DF > 0 {
		se = math.Sqrt(rss / e.DF / sxx)
	}
	e.interval(se, confidence)
}

// means gives each group's mean, at the mean of the covariates where there are
// any, with the standard error of the joint model.
func (f *Fit) means(confidence float64) []Estimate {
	d := f.Design
	sizes := d.GroupSizes()
	var all []Estimate
	for g, label := range d.Groups {
		e := undefinedEstimate(label, sizes[g])
		e.Exists = true
		f.joint(&e, f.Term(g), confidence)
		all = append(all, e)
	}
	return all
}

// compare tests equal slopes (or means) over the groups that have one, by the
// sum of squares of the differences' own space; nil when fewer than two have.
func (f *Fit) compare(confidence float64) *Comparison {
	terms, labels := f.compared()
	if len(terms) < 2 {
		return nil
	}
	c := &Comparison{DF1: float64(len(terms) - 1), DF2: float64(f.DF), F: math.NaN(), P: math.NaN(), Detectable: math.NaN()}
	if f.HasScatter() {
		c.F = f.differenceSS(terms) / c.DF1 / (f.SD * f.SD)
		c.P = numeric.FUpper(c.F, c.DF1, c.DF2)
	}
	c.Pairs = f.pairs(terms, labels, confidence)
	c.Detectable = f.detectable(c.Pairs, len(terms), confidence)
	return c
}

// compared lists the terms whose equality is asked, with their groups.
func (f *Fit) compared() (terms []int, labels []string) {
	d := f.Design
	if !d.HasGroup() || (d.CommonSlope && d.X() != nil) {
		return nil, nil
	}
	if d.X() == nil {
		for g := range d.Groups {
			terms, labels = append(terms, g), append(labels, d.Groups[g])
		}
		return terms, labels
	}
	for g, k := range f.SlopeTerms() {
		if k >= 0 {
			terms, labels = append(terms, k), append(labels, d.Groups[g])
		}
	}
	return terms, labels
}

// differenceSS is the sum of squares by which the model with a common value
// for all terms fits worse. It is read off an orthonormal basis of the
// differences' catchers, so nothing large is subtracted.
func (f *Fit) differenceSS(terms []int) float64 {
	var differences [][]float64
	for _, k := range terms[1:] {
		differences = append(differences, f.Difference(terms[0], k).Catcher)
	}
	mean := numeric.Mean(f.Design.Y)
	about := make([]float64, f.N())
	for i, v := range f.Fitted {
		about[i] = v - mean
	}
	about = f.Transformed(about)
	ss := 0.0
	for _, q := range numeric.NewBasis(differences, f.N()).Q() {
		v := floats.Dot(q, about)
		ss += v * v
	}
	return ss
}

// Difference is the second term less the first.
func (f *Fit) Difference(a, b int) Contrast {
	weights := make([]float64, f.P())
	weights[a], weights[b] = -1, 1
	return f.Contrast(weights)
}

func (f *Fit) pairs(terms []int, labels []string, confidence float64) []Pair {
	var all []Pair
	var plain []float64
	groups := len(terms)
	df := float64(f.DF)
	for a := range terms {
		for b := a + 1; b < groups; b++ {
			c := f.Difference(terms[a], terms[b])
			nan := math.NaN()
			p := Pair{A: labels[a], B: labels[b], Value: c.Estimate, SE: f.SD * c.Length, T: nan, P: nan, HolmP: nan, TukeyP: nan, Low: nan, High: nan}
			if f.HasScatter() {
				p.T = p.Value / p.SE
				p.P = numeric.StudentTwoSided(p.T, df)
				p.TukeyP = numeric.TukeyUpper(math.Abs(p.T)*math.Sqrt2, groups, df)
				half := criticalPair(groups, df, confidence) * p.SE
				p.Low, p.High = p.Value-half, p.Value+half
			}
			all = append(all, p)
			plain = append(plain, p.P)
		}
	}
	if f.HasScatter() {
		for k, v := range numeric.Holm(plain) {
			all[k].HolmP = v
		}
	}
	return all
}

// CriticalPair is the number of standard errors in half an interval of a pair
// in this design.
func (f *Fit) CriticalPair(confidence float64) float64 {
	return criticalPair(len(f.ComparedTerms()), float64(f.DF), confidence)
}

// criticalPair is the number of standard errors in half an interval of a pair
// of slopes: Student's t for two groups, the studentized range over sqrt 2 for
// more (Tukey; Kramer 1956; conservative unless balanced, Hayter 1984).
func criticalPair(groups int, df, confidence float64) float64 {
	if groups == 2 {
		return numeric.StudentQuantile(1-(1-confidence)/2, df)
	}
	return numeric.TukeyQuantile(confidence, groups, df) / math.Sqrt2
}

// detectable is the difference that the test of the pair with the largest
// standard error would find in four of five tables like this one.
func (f *Fit) detectable(pairs []Pair, groups int, confidence float64) float64 {
	if !f.HasScatter() {
		return math.NaN()
	}
	largest := 0.0
	for _, p := range pairs {
		largest = max(largest, p.SE)
	}
	df := float64(f.DF)
	return largest * numeric.DetectableNCP(df, 0.8, criticalPair(groups, df, confidence))
}

// Requote gives the estimate another standard error and degrees of freedom,
// and with them t, p and the interval.
func (e *Estimate) Requote(se, df, confidence float64) {
	e.DF = df
	e.interval(se, confidence)
}

// Requote gives the pair another standard error and degrees of freedom; groups
// is how many are compared, for the width of the interval.
func (p *Pair) Requote(se float64, groups int, df, confidence float64) {
	p.SE = se
	p.T = p.Value / se
	p.P = numeric.StudentTwoSided(p.T, df)
	half := criticalPair(groups, df, confidence) * se
	p.Low, p.High = p.Value-half, p.Value+half
}

// ComparedTerms lists the terms whose equality the second question asks.
func (f *Fit) ComparedTerms() []int {
	terms, _ := f.compared()
	return terms
}

// TermOf is the term of a group's slope, or of its level without a predictor;
// -1 for a group that has none.
func (f *Fit) TermOf(group string) int {
	terms, labels := f.compared()
	for k, label := range labels {
		if label == group {
			return terms[k]
		}
	}
	return -1
}

// EqualBasis is the basis of the model in which the compared slopes, or means,
// are one; false when fewer than two are compared.
func (f *Fit) EqualBasis() (*numeric.Basis, bool) {
	terms, _ := f.compared()
	if len(terms) < 2 {
		return nil, false
	}
	sum := make([]float64, f.N())
	var columns [][]float64
	for k, t := range f.Terms {
		if slices.Contains(terms, k) {
			floats.Add(sum, t.Values)
			continue
		}
		columns = append(columns, f.Transformed(t.Values))
	}
	return numeric.NewBasis(append(columns, f.Transformed(sum)), f.N()), true
}

// HasRoomFor reports whether at least the given share of a column's length
// remains off the design.
func (f *Fit) HasRoomFor(column []float64, share float64) bool {
	c := f.Transformed(column)
	rest := make([]float64, len(c))
	f.Basis.Residual(rest, c)
	length := floats.Norm(rest, 2)
	return length > 0 && length >= share*floats.Norm(c, 2)
}
