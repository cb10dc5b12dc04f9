package rules

import (
	"cmp"
	"math"
	"slices"

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
	Remedies: []*remedy.Remedy{remedy.ModelOrder},
	Tests:    independenceTests,
	Run:      independence,
}

// sequence lists the used rows that have an order, sorted by it, ties in file
// order; and the neighbours, which with a subject lie within one subject.
func (p *Pass) sequence() (rows []int, neighbours [][2]int) {
	d := p.Design
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

func independenceTests(p *Pass) ([]Test, string) {
	if p.Design.Order == nil {
		return nil, "no order is given; name its column with --order if the rows were taken one after another"
	}
	rows, neighbours := p.sequence()
	if len(neighbours) < 3 {
		return nil, "fewer than four rows have an order"
	}
	tests := []Test{p.lagTest(neighbours)}
	if drift, ok := p.driftTest(rows); ok {
		tests = append(tests, drift)
	}
	return tests, ""
}

// lagTest compares r1 = sum e_i e_{i-1} / RSS with its exact null mean in this
// design, -sum q_i . q_{i-1} / df with q_i the rows of Q.
func (p *Pass) lagTest(neighbours [][2]int) Test {
	r1, mean := p.lagOne(neighbours)
	z := math.Abs(r1-mean) * math.Sqrt(float64(p.Fit.N()))
	return Test{Name: "lag-one autocorrelation", Value: r1, P: numeric.NormalTwoSided(z)}
}

func (p *Pass) lagOne(neighbours [][2]int) (r1, mean float64) {
	e, q := p.Fit.Residual, p.Fit.Basis.Q()
	for _, pair := range neighbours {
		r1 += e[pair[0]] * e[pair[1]]
		for _, column := range q {
			mean -= column[pair[0]] * column[pair[1]]
		}
	}
	return r1 / p.Fit.RSS, mean / float64(p.Fit.DF)
}

// driftTest is the exact t test of the rank in the order as a further column.
// It is left out when less than 0.3 of the rank's length remains off the
// design: then the order is the predictor itself.
func (p *Pass) driftTest(rows []int) (Test, bool) {
	if p.Fit.DF < 2 {
		return Test{}, false
	}
	rank := p.orderRank(rows)
	rest := make([]float64, len(rank))
	p.Fit.Basis.Residual(rest, rank)
	length := floats.Norm(rest, 2)
	if length < 0.3*floats.Norm(rank, 2) || length == 0 {
		return Test{}, false
	}
	along := floats.Dot(rest, p.Fit.Residual) / length
	df := float64(p.Fit.DF - 1)
	t := along / math.Sqrt((p.Fit.RSS-along*along)/df)
	return Test{Name: "drift t", Value: t, DF: []float64{df}, P: numeric.StudentTwoSided(t, df)}, true
}

// orderRank is the rank in the order about its mean, ties at their mean rank;
// rows without an order are 0.
func (p *Pass) orderRank(rows []int) []float64 {
	order := p.Design.Order
	sorted := slices.Clone(rows)
	slices.SortStableFunc(sorted, func(a, b int) int { return cmp.Compare(order[a], order[b]) })
	rank := make([]float64, p.Fit.N())
	middle := float64(len(sorted)+1) / 2
	for from := 0; from < len(sorted); {
		to := from + 1
		for to < len(sorted) && order[sorted[to]] == order[sorted[from]] {
			to++
		}
		for k := from; k < to; k++ {
			rank[sorted[k]] = float64(from+1+to)/2 - middle
		}
		from = to
	}
	return rank
}

func independence(p *Pass) (Outcome, error) {
	lag := p.Joint.Tests[0]
	_, neighbours := p.sequence()
	dw := 0.0
	for _, pair := range neighbours {
		step := p.Fit.Residual[pair[1]] - p.Fit.Residual[pair[0]]
		dw += step * step
	}
	alarm := "rows that follow each other are alike"
	if lag.Value < 0 {
		alarm = "rows that follow each other lie on opposite sides of their lines more often than chance puts them there"
	}
	if p.Joint.Smallest().Name == "drift t" {
		alarm = "the residuals drift along the order"
	}
	o := judged(p.Joint, "", "neighbours in the order were not found to be alike, nor was a drift")
	if o.Answer == Breach {
		o.Message = alarm + " (" + p.strongest() + ")"
	}
	o.Statistic = lag.measure()
	o.Evidence = map[string]any{"durbin_watson": dw / p.Fit.RSS, "lag1": lag.Value}
	if len(p.Joint.Tests) > 1 {
		o.Evidence["drift_p"] = p.Joint.Tests[1].P
	}
	if missing := p.Fit.N() - len(p.withOrder()); missing > 0 {
		o.Message += "; " + wording.Count(missing, "row") + " without an order left out"
	}
	return o, nil
}

func (p *Pass) withOrder() []int {
	rows, _ := p.sequence()
	return rows
}
