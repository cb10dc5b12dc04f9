package rules

import (
	"fmt"
	"math"
	"math/rand/v2"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Normality asks whether the residuals scatter as a normal distribution does.
var Normality = &Rule{
	Name:   "normality",
	Family: OfModel,
	Asks:   "Do the residuals scatter like a normal distribution?",
	Why:    "With few rows, long tails or a skew make p-values wrong; with many they only waste rows.",
	Method: "Shapiro and Wilk 1965, Biometrika 52:591, on the raw residuals, weights by Royston's AS R94 (1995, Appl. Stat. 44:547); " +
		"above 2,000 rows the Anderson-Darling statistic (D'Agostino and Stephens 1986, Goodness-of-Fit Techniques)",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.LogResponse, remedy.RobustLine, remedy.WildBootstrap, remedy.PermutedGroups},
	Chance:   normalityChance,
	Run:      normality,
}

// LargestSimulated is the number of rows up to which the null is simulated.
const LargestSimulated = 2000

func normalityChance(p *Pass) (*Chance, string) {
	n := p.Fit.N()
	if n < 3 {
		return nil, "fewer than three rows"
	}
	if p.Fit.DF < 2 {
		return nil, "one row is left to judge from"
	}
	skew, tails := numeric.Skewness(p.Fit.Residual), numeric.ExcessKurtosis(p.Fit.Residual)
	c := &Chance{
		Breach: tailBreach,
		Floor:  tailFloor(skew, tails),
	}
	if n > LargestSimulated {
		c.Members = []Member{p.andersonDarling()}
	} else {
		c.Members = []Member{p.shapiroWilk()}
	}
	return c, ""
}

// tailBreach draws from t with three degrees of freedom at unit SD.
func tailBreach() Trouble {
	return Trouble{
		Short: "long tails",
		Words: "long tails (t with 3 degrees of freedom), which waste four rows in ten,",
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					a, b, c := random.NormFloat64(), random.NormFloat64(), random.NormFloat64()
					z[i] = random.NormFloat64() / math.Sqrt(a*a+b*b+c*c)
				}
			}
		},
	}
}

func (p *Pass) shapiroWilk() Member {
	w, pValue, ok := numeric.ShapiroWilk(p.Fit.Residual)
	if !ok {
		w, pValue = math.NaN(), math.NaN()
	}
	weights := numeric.ShapiroWeights(p.Fit.N())
	return Member{
		Test: Test{Name: "Shapiro-Wilk W", Value: w, P: pValue},
		New: func() func(*Sample) float64 {
			return func(s *Sample) float64 { return 1 - numeric.ShapiroW(s.Sorted(), weights) }
		},
	}
}

func (p *Pass) andersonDarling() Member {
	offsets := p.gridOffsets()
	newStatistic := func() func(*Sample) float64 {
		if offsets == nil {
			return func(s *Sample) float64 { return numeric.AndersonDarlingOfSorted(s.Sorted()) }
		}
		spread := make([]float64, len(offsets))
		return func(s *Sample) float64 {
			for i, e := range s.E {
				spread[i] = e + offsets[i]
			}
			return numeric.AndersonDarlingStatistic(spread)
		}
	}
	observed := NewSample(p.Fit)
	copy(observed.E, p.Fit.Residual)
	observed.Changed()
	a := newStatistic()(observed)
	return Member{
		Test:    Test{Name: "Anderson-Darling A", Value: a, P: numeric.AndersonDarlingP(a)},
		New:     newStatistic,
		ClosedP: numeric.AndersonDarlingP,
	}
}

// gridOffsets spreads a coarsely rounded response evenly over its rounding
// cells, so that the rounding is not taken for a shape; nil when there is none.
func (p *Pass) gridOffsets() []float64 {
	u, ok := p.Fit.Grid()
	if !ok {
		return nil
	}
	random := numeric.Stream(p.Settings.Seed, "grid")
	offsets := make([]float64, p.Fit.N())
	for i := range offsets {
		offsets[i] = u * (random.Float64() - 0.5)
	}
	return offsets
}

// leastSkew and leastTails are the skewness and excess kurtosis that matter:
// those of t with ten degrees of freedom, where one row in twenty is wasted.
const (
	leastSkew  = 0.5
	leastTails = 1.0
)

func tailFloor(skew, tails float64) *Floor {
	return &Floor{
		Effect: max(math.Abs(skew)/leastSkew, math.Abs(tails)/leastTails), Least: 1,
		Words: fmt.Sprintf("skewness %s and excess kurtosis %s (floors %s and %s)", wording.Figure(skew, 2), wording.Figure(tails, 2), wording.Number(leastSkew), wording.Number(leastTails)),
	}
}

func normality(p *Pass) (Outcome, error) {
	w, pValue, _ := numeric.ShapiroWilk(p.Fit.Residual)
	skew, tails := numeric.Skewness(p.Fit.Residual), numeric.ExcessKurtosis(p.Fit.Residual)
	o := judged(p.Joint,
		"the residuals do not scatter like a normal distribution ("+p.strongest()+"): "+shape(skew, tails),
		"the residuals scatter as a normal distribution would")
	if u, coarse := p.Fit.Grid(); coarse && p.Joint.Closed && u > p.Fit.SD/3 {
		o = cannotTell("the response is rounded too coarsely for its shape to be judged")
	}
	o.Statistic = p.Joint.First().measure()
	o.Evidence = map[string]any{
		"shapiro_wilk_w": w, "shapiro_wilk_p": pValue,
		"skewness": skew, "excess_kurtosis": tails,
	}
	return o, nil
}

// shape says in words how residuals depart from the normal.
func shape(skew, tails float64) string {
	switch {
	case skew > leastSkew:
		return "they reach further up than down"
	case skew < -leastSkew:
		return "they reach further down than up"
	case tails > leastTails:
		return "a few reach very far on both sides"
	case tails < -leastTails/2:
		return "they crowd at two ends or lie evenly"
	default:
		return "they are uneven"
	}
}
