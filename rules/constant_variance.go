package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/floats"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// ConstantVariance asks whether the scatter is the same everywhere.
var ConstantVariance = &Rule{
	Name:   "constant-variance",
	Family: OfModel,
	Asks:   "Is the scatter about the lines the same everywhere?",
	Why:    "Where it is not, the intervals are too narrow in one place and too wide in another.",
	Method: "studentized Breusch-Pagan test on the model's regressors (Koenker 1981, J. Econometrics 17:107), on each predictor alone, " +
		"and between groups the test about medians of Brown and Forsythe (1974, JASA 69:364)",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.RobustErrors, remedy.OwnVariance, remedy.LogResponse, remedy.WildBootstrap},
	Chance:   constantVarianceChance,
	Run:      constantVariance,
}

const (
	koenkerName = "studentized Breusch-Pagan LM"
	brownName   = "Brown-Forsythe F"
)

func constantVarianceChance(p *Pass) (*Chance, string) {
	f := p.Fit
	if f.DF < 2 {
		return nil, "one row is left to judge from"
	}
	if f.P() < 2 {
		return nil, "one mean and no predictor: nothing for the scatter to vary with"
	}
	c := &Chance{Members: []Member{p.koenker()}, Floor: p.spreadFloor()}
	c.Members = append(c.Members, p.spreadAlong()...)
	// The two rows of a pair are as far from its median as each other: pairs alone
	// leave nothing within groups to compare with.
	if len(p.Design.Groups) > 1 && slices.Max(p.Design.GroupSizes()) > 2 {
		if m, ok := p.brownForsythe(); ok {
			c.Members = append(c.Members, m)
		}
	}
	c.Breach = p.fanBreach
	return c, ""
}

func (p *Pass) koenker() Member {
	q := p.Fit.Regressors.Q()
	n := p.Fit.N()
	lm := numeric.KoenkerLM(make([]float64, n), p.Fit.Residual, q)
	df := float64(p.Fit.P() - 1)
	closed := func(lm float64) float64 { return numeric.ChiSquaredUpper(lm, df) }
	return Member{
		Test: Test{Name: koenkerName, Value: lm, DF: []float64{df}, P: closed(lm)},
		New: func() func(*Sample) float64 {
			scratch := make([]float64, n)
			return func(s *Sample) float64 { return numeric.KoenkerLM(scratch, s.E, q) }
		},
		ClosedP: closed,
	}
}

// spreadAlong has the one-degree score of each numeric predictor, taken about
// its group's mean where it has a slope in each group.
func (p *Pass) spreadAlong() []Member {
	values, names := p.numericPredictors()
	var all []Member
	for k, v := range values {
		q := centred(v)
		if k == 0 && p.Design.X() != nil && !p.Design.CommonSlope {
			q = p.fromGroupMean()
		}
		length := floats.Norm(q, 2)
		if length == 0 {
			continue
		}
		unit := slices.Clone(q)
		floats.Scale(1/length, unit)
		n := float64(p.Fit.N())
		statistic := func(e []float64, rss float64) float64 {
			mean := rss / n
			along, total := 0.0, 0.0
			for i, r := range e {
				u := r*r - mean
				along += unit[i] * u
				total += u * u
			}
			return n * along * along / total
		}
		closed := func(lm float64) float64 { return numeric.ChiSquaredUpper(lm, 1) }
		observed := statistic(p.Fit.Residual, p.Fit.RSS)
		all = append(all, Member{
			Test: Test{Name: "score of the spread along " + names[k], Value: observed, DF: []float64{1}, P: closed(observed)},
			New: func() func(*Sample) float64 {
				return func(s *Sample) float64 { return statistic(s.E, s.RSS) }
			},
			ClosedP: closed,
		})
	}
	return all
}

func (p *Pass) brownForsythe() (Member, bool) {
	group, groups := p.Design.Group, len(p.Design.Groups)
	f, d1, d2, pValue := numeric.BrownForsythe(p.Fit.Residual, group, groups)
	return Member{
		Test: Test{Name: brownName, Value: f, DF: []float64{d1, d2}, P: pValue},
		New: func() func(*Sample) float64 {
			spread := numeric.NewGroupSpread(group, groups)
			return func(s *Sample) float64 { return spread.F(s.E) }
		},
		ClosedP: func(f float64) float64 { return numeric.FUpper(f, d1, d2) },
	}, !math.IsNaN(pValue)
}

// fan is an error SD for each row, with what it does to the worst interval.
type fan struct {
	ratio    float64 // largest over smallest SD that it was made with
	sd       []float64
	coverage float64 // of the nominal 95 % interval it harms most
}

// The search for the consequential fan.
const (
	leastFan     = 2.0
	greatestFan  = 10.0
	leastCover   = 0.90
	normal95     = 1.959964
	fanBisection = 40
	// In large tables the fan is found for certain: three digits of its ratio will
	// do for the words.
	fanBisectionLarge = 12
	// Above this many rows the least fan of the search is found for certain, and a
	// wider one need not be looked for.
	largestFanSearch = 20000
)

// fanBreach is the smallest fan along the predictor, or its mirror image, under
// which some nominal 95 % interval covers less than 90 %.
func (p *Pass) fanBreach() Trouble {
	var best fan
	intervals := p.intervals()
	for _, along := range p.fanDirections() {
		f := p.smallestFan(along, intervals)
		if best.sd == nil || f.ratio < best.ratio || (f.ratio == best.ratio && f.coverage < best.coverage) {
			best = f
		}
	}
	words := fmt.Sprintf("scatter %s times as wide at one end of the predictor as at the other", wording.Figure(best.ratio, 2))
	if p.Design.X() == nil {
		words = fmt.Sprintf("scatter %s times as wide in the smallest group as in the others", wording.Figure(best.ratio, 2))
	}
	return Trouble{
		Short: "unequal scatter",
		Words: words,
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					z[i] = best.sd[i] * random.NormFloat64()
				}
			}
		},
	}
}

// fanDirections gives exponents u: the SD of a row is ratio to the power of u.
func (p *Pass) fanDirections() [][]float64 {
	n := p.Fit.N()
	x := p.Design.X()
	if x == nil {
		sizes := p.Design.GroupSizes()
		smallest := slices.Index(sizes, slices.Min(sizes))
		u := make([]float64, n)
		for i, g := range p.Design.Group {
			if g == smallest {
				u[i] = 1
			}
		}
		return [][]float64{u}
	}
	low, high := slices.Min(x), slices.Max(x)
	up, down := make([]float64, n), make([]float64, n)
	for i, v := range x {
		up[i] = (v-low)/(high-low) - 0.5
		down[i] = -up[i]
	}
	return [][]float64{up, down}
}

func (p *Pass) smallestFan(along []float64, intervals []interval) fan {
	at := func(ratio float64) fan {
		f := fan{ratio: ratio, sd: make([]float64, len(along))}
		ms := 0.0
		for i, u := range along {
			f.sd[i] = math.Pow(ratio, u)
			ms += f.sd[i] * f.sd[i]
		}
		floats.Scale(1/math.Sqrt(ms/float64(len(along))), f.sd)
		f.coverage = p.worstCoverage(intervals, f.sd)
		return f
	}
	if f := at(leastFan); f.coverage < leastCover || len(along) > largestFanSearch {
		return f
	}
	if f := at(greatestFan); !(f.coverage < leastCover) {
		return f
	}
	low, high := math.Log(leastFan), math.Log(greatestFan)
	steps := fanBisection
	if len(along) > LargestSimulated {
		steps = fanBisectionLarge
	}
	for range steps {
		middle := (low + high) / 2
		if at(math.Exp(middle)).coverage < leastCover {
			high = middle
		} else {
			low = middle
		}
	}
	return at(math.Exp(high))
}

// interval is a nominal interval: of a slope or of a pair difference, with the
// rows and degrees of freedom that its scatter is estimated from.
type interval struct {
	catcher []float64
	squares float64 // of the catcher
	rows    []int
	df      float64
}

// intervals lists the intervals that a fan may harm.
func (p *Pass) intervals() []interval {
	var all []interval
	add := func(c model.Contrast, rows []int, df float64) {
		if df > 0 {
			all = append(all, interval{catcher: c.Catcher, squares: floats.Dot(c.Catcher, c.Catcher), rows: rows, df: df})
		}
	}
	everyRow := p.usedRows()
	terms := p.Fit.AnswerTerms()
	own := p.Fit.QuotesOwnLines() && p.Design.HasGroup()
	for g, k := range terms {
		if k < 0 {
			continue
		}
		if rows := p.Design.Members(g); own {
			if len(rows) >= 3 {
				add(p.Fit.Term(k), rows, float64(len(rows)-2))
			}
			continue
		}
		add(p.Fit.Term(k), everyRow, float64(p.Fit.DF))
	}
	for a, ka := range terms {
		for _, kb := range terms[a+1:] {
			if ka >= 0 && kb >= 0 {
				add(p.Fit.Difference(ka, kb), everyRow, float64(p.Fit.DF))
			}
		}
	}
	return all
}

// worstCoverage is the coverage of the nominal 95 % interval that the error SDs
// harm most: 2 Phi(1.96/r) - 1 with r the true over the estimated standard
// error.
func (p *Pass) worstCoverage(intervals []interval, sd []float64) float64 {
	worst := 1.0
	for _, v := range intervals {
		var actual, expected float64
		for i, c := range v.catcher {
			actual += c * c * sd[i] * sd[i]
		}
		for _, i := range v.rows {
			expected += sd[i] * sd[i] * (1 - p.Fit.Leverage[i])
		}
		r := math.Sqrt(actual / (v.squares * expected / v.df))
		worst = min(worst, 2*numeric.NormalCDF(normal95/r)-1)
	}
	return worst
}

func (p *Pass) usedRows() []int {
	rows := make([]int, p.Fit.N())
	for i := range rows {
		rows[i] = i
	}
	return rows
}

// leastSpread is the ratio of the largest to the smallest fitted SD that matters.
const leastSpread = 1.5

// spreadRatio is the largest over the smallest SD of a log-linear variance on
// the model's regressors, fitted by Gaussian likelihood (Harvey 1976).
func (p *Pass) spreadRatio() float64 {
	v := numeric.LogLinearVariance(p.Fit.Residual, p.Fit.Leverage, p.Fit.RegressorColumns())
	low, high := math.Inf(1), 0.0
	for _, s := range v {
		low, high = min(low, s), max(high, s)
	}
	return math.Sqrt(high / low)
}

func (p *Pass) spreadFloor() *Floor {
	ratio := p.spreadRatio()
	return &Floor{Effect: ratio, Least: leastSpread, Words: fmt.Sprintf("a spread ratio of %s (floor %s)", wording.Figure(ratio, 2), wording.Number(leastSpread))}
}

func constantVariance(p *Pass) (Outcome, error) {
	o := judged(p.Joint, "", "the scatter about the lines was not found to vary")
	if o.Answer == Breach {
		o.Message = "the scatter about the lines is uneven (" + p.strongest() + ")" + p.spreadWords()
	}
	o.Statistic = p.Joint.First().measure()
	nan := math.NaN()
	o.Evidence = map[string]any{
		"breusch_pagan_lm": nan, "breusch_pagan_p": nan, "brown_forsythe_f": nan, "brown_forsythe_p": nan,
		"spread_ratio": p.Joint.Chance.Floor.Effect,
	}
	for _, m := range p.Joint.Chance.Members {
		switch m.Test.Name {
		case koenkerName:
			o.Evidence["breusch_pagan_lm"], o.Evidence["breusch_pagan_p"] = m.Test.Value, m.Test.P
		case brownName:
			o.Evidence["brown_forsythe_f"], o.Evidence["brown_forsythe_p"] = m.Test.Value, m.Test.P
		}
	}
	return o, nil
}

// spreadWords compares the residual SD of the groups or, along the predictor,
// of the lower and the upper half of the rows.
func (p *Pass) spreadWords() string {
	d := p.Design
	if p.Joint.Strongest().Name == brownName || d.X() == nil {
		return p.spreadOfGroups()
	}
	middle := numeric.Median(d.X())
	var low, high []float64
	for i, x := range d.X() {
		if x < middle {
			low = append(low, p.Fit.Residual[i])
		} else if x > middle {
			high = append(high, p.Fit.Residual[i])
		}
	}
	if len(low) == 0 || len(high) == 0 {
		return ""
	}
	x := p.Columns.Predictors[0].Title()
	return fmt.Sprintf(": residual SD %s below the middle of %s, %s above it", wording.Figure(rootMeanSquare(low), 2), x, wording.Figure(rootMeanSquare(high), 2))
}

func (p *Pass) spreadOfGroups() string {
	d := p.Design
	widest, narrowest := -1, -1
	sd := make([]float64, len(d.Groups))
	for g := range d.Groups {
		own := d.OfGroup(p.Fit.Residual, g)
		sd[g] = rootMeanSquare(own)
		if len(own) < 3 {
			continue
		}
		if widest < 0 || sd[g] > sd[widest] {
			widest = g
		}
		if narrowest < 0 || sd[g] < sd[narrowest] {
			narrowest = g
		}
	}
	if widest < 0 || widest == narrowest {
		return ""
	}
	return fmt.Sprintf(": residual SD %s in %s, %s in %s", wording.Figure(sd[widest], 2), d.Groups[widest], wording.Figure(sd[narrowest], 2), d.Groups[narrowest])
}

func rootMeanSquare(v []float64) float64 {
	ss := 0.0
	for _, e := range v {
		ss += e * e
	}
	return math.Sqrt(ss / float64(len(v)))
}
