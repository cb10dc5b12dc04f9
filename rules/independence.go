package rules

import (
	"fmt"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Independence asks whether neighbours in the order are alike, or drift.
var Independence = &Rule{
	Name:   "independence",
	Family: OfModel,
	Asks:   "Are rows that follow each other alike, or is there a drift along the order?",
	Why:    "Rows that repeat their neighbours' errors count as fewer than they are, and a drift that goes with the predictor ends up in the slope.",
	Method: "lag-one autocorrelation of the residuals about its mean in this design, and a straight drift along the ranks of the order; " +
		"Durbin and Watson's d (1950, Biometrika 37:409) is told beside them",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.OrderTerm, remedy.SerialErrors},
	Chance:   independenceChance,
	Run:      independence,
}

func independenceChance(p *Pass) (*Chance, string) {
	if p.Design.Order == nil {
		return nil, "no order is given; name its column with --order if the rows were taken one after another"
	}
	rows, neighbours := p.Design.Sequence()
	if len(neighbours) < 3 || p.Fit.DF < 2 {
		return nil, "too few rows have an order"
	}
	r1, mean := p.Fit.LagOne()
	c := &Chance{Members: []Member{p.lagMember(neighbours, mean)}, Breach: func() Trouble { return p.serialBreach(rows) }}
	effect := math.Abs(r1-mean) / leastLag
	words := fmt.Sprintf("a lag-one correlation of %s (floor %s)", wording.Figure(r1-mean, 2), wording.Number(leastLag))
	if drift, ok := p.drift(); ok {
		c.Members = append(c.Members, drift.member(p))
		rms := drift.rms(p)
		effect = max(effect, rms/leastDrift)
		words += fmt.Sprintf(" and a drift of %s SD (floor %s)", wording.Figure(rms, 2), wording.Number(leastDrift))
	}
	c.Floor = &Floor{Effect: effect, Least: 1, Words: words}
	return c, ""
}

const (
	leastLag   = 0.1  // lag-one correlation that matters
	leastDrift = 0.15 // root mean square of a drift, in SD, that matters
	serialRho  = 0.4  // of the consequential breach
)

// lagMember compares r1 = sum e_i e_{i-1} / RSS with its exact null mean in this
// design, -sum q_i . q_{i-1} / df with q_i the rows of Q.
func (p *Pass) lagMember(neighbours [][2]int, mean float64) Member {
	root := math.Sqrt(float64(p.Fit.N()))
	lag := func(e []float64, rss float64) float64 {
		sum := 0.0
		for _, pair := range neighbours {
			sum += e[pair[0]] * e[pair[1]]
		}
		return sum / rss
	}
	closed := func(distance float64) float64 { return numeric.NormalTwoSided(distance * root) }
	r1 := lag(p.Fit.Residual, p.Fit.RSS)
	return Member{
		Test: Test{Name: "lag-one autocorrelation", Value: r1, P: closed(math.Abs(r1 - mean))},
		New: func() func(*Sample) float64 {
			return func(s *Sample) float64 { return math.Abs(lag(s.E, s.RSS) - mean) }
		},
		ClosedP: closed,
	}
}

// driftColumn is the rank in the order, off the design.
type driftColumn struct {
	unit []float64
	left float64 // share of its length that is left off the design
}

// drift is false when less than 0.3 of the rank's length remains off the
// design: then the order is the predictor itself.
func (p *Pass) drift() (driftColumn, bool) {
	rank := p.Fit.Transformed(p.Design.OrderRank())
	rest := make([]float64, len(rank))
	p.Fit.Basis.Residual(rest, rank)
	length, before := floats.Norm(rest, 2), floats.Norm(rank, 2)
	if length == 0 || length < 0.3*before {
		return driftColumn{}, false
	}
	floats.Scale(1/length, rest)
	return driftColumn{unit: rest, left: length / before}, true
}

func (d driftColumn) member(p *Pass) Member {
	df := float64(p.Fit.DF - 1)
	closed := func(share float64) float64 { return numeric.StudentTwoSided(math.Sqrt(share*df/(1-share)), df) }
	along := floats.Dot(d.unit, p.Fit.Residual)
	t := scoreT(along, p.Fit.RSS, df)
	return Member{
		Test: Test{Name: driftName, Value: t, DF: []float64{df}, P: numeric.StudentTwoSided(t, df)},
		New: func() func(*Sample) float64 {
			return func(s *Sample) float64 {
				v := floats.Dot(d.unit, s.E)
				return v * v / s.RSS
			}
		},
		ClosedP: closed,
	}
}

const driftName = "drift t"

// rms is the drift's own root mean square, in residual SD.
func (d driftColumn) rms(p *Pass) float64 {
	along := floats.Dot(d.unit, p.Fit.Residual)
	s := p.Fit.SD
	return math.Sqrt(max(0, along*along-s*s)/float64(p.Fit.N())) / (d.left * s)
}

// serialBreach draws a stationary first-order autoregression along the order,
// within subjects where there are any.
func (p *Pass) serialBreach(rows []int) Trouble {
	fresh := make([]bool, len(rows))
	for k := range rows {
		fresh[k] = k == 0 || (p.Design.Subject != nil && p.Design.Subject[rows[k]] != p.Design.Subject[rows[k-1]])
	}
	step := math.Sqrt(1 - serialRho*serialRho)
	return Trouble{
		Short: "neighbours alike",
		Words: fmt.Sprintf("neighbours correlated by %s", wording.Number(serialRho)),
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					z[i] = random.NormFloat64()
				}
				for k, i := range rows {
					if !fresh[k] {
						z[i] = serialRho*z[rows[k-1]] + step*z[i]
					}
				}
			}
		},
	}
}

func independence(p *Pass) (Outcome, error) {
	lag := p.Joint.First()
	rows, neighbours := p.Design.Sequence()
	dw := 0.0
	for _, pair := range neighbours {
		step := p.Fit.Residual[pair[1]] - p.Fit.Residual[pair[0]]
		dw += step * step
	}
	alarm := "rows that follow each other are alike"
	if lag.Value < 0 {
		alarm = "rows that follow each other lie on opposite sides of their lines more often than chance puts them there"
	}
	if p.Joint.Strongest().Name == driftName {
		alarm = "the residuals drift along the order"
	}
	o := judged(p.Joint, "", "neighbours in the order were not found to be alike, nor was a drift")
	if o.Answer == Breach {
		o.Message = alarm + " (" + p.strongest() + ")"
	}
	o.Statistic = lag.measure()
	o.Evidence = map[string]any{"durbin_watson": dw / p.Fit.RSS, "lag1": lag.Value}
	if members := p.Joint.Chance.Members; len(members) > 1 {
		o.Evidence["drift_p"] = members[1].Test.P
	}
	if missing := p.Fit.N() - len(rows); missing > 0 {
		o.Message += "; " + wording.Count(missing, "row") + " without an order left out"
	}
	return o, nil
}
