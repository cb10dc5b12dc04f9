package rules

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// OrderDrift asks for a trend of the residuals along the file when nobody said
// in which order the rows were taken.
var OrderDrift = &Rule{
	Name:   "order-drift",
	Family: OfTable,
	Asks:   "Does the response drift along the rows of the file?",
	Why:    "Rows often stand in the order of measuring; a drift along it that goes with the predictor ends up in the slope, and no other rule looks for it unless the order is named.",
	Method: "exact t test of the row number as a further column, when no order is named, at least 0.3 of its length is left off the design, and the rows are not sorted by the response or the predictor",
	Limit:  "p at most 0.2 %, and a drift of at least 0.15 standard deviations in the root mean square",
	Needs:  NeedsScatter, Remedies: []*remedy.Remedy{remedy.NameOrder},
	Run: orderDrift,
}

func orderDrift(p *Pass) (Outcome, error) {
	if p.Columns.Order != nil {
		return notAsked("the order is named, and independence asks of it"), nil
	}
	if p.Fit.DF < 3 {
		return notAsked("too few rows"), nil
	}
	if p.sortedByResponse() {
		return notAsked("the rows are sorted by " + p.Columns.Response.Title() + ", so that their order says nothing"), nil
	}
	if p.sortedByPredictor() {
		return notAsked("the rows are sorted by " + p.Columns.Predictors[0].Title() + ": a drift and a bend of the line cannot be told apart here"), nil
	}
	n := p.Fit.N()
	line, rest := make([]float64, n), make([]float64, n)
	for i := range line {
		line[i] = float64(p.Design.Rows[i])
	}
	line = centred(line)
	p.Fit.Basis.Residual(rest, line)
	length, before := floats.Norm(rest, 2), floats.Norm(line, 2)
	if length < 0.3*before || length == 0 {
		return notAsked("the model tells the order of the rows already: a drift and a slope cannot be told apart here"), nil
	}
	along := floats.Dot(rest, p.Fit.Residual) / length
	df := float64(p.Fit.DF - 1)
	t := along / math.Sqrt((p.Fit.RSS-along*along)/df)
	chance := numeric.StudentTwoSided(t, df)
	size := math.Sqrt(max(0, along*along-p.Fit.SD*p.Fit.SD)/float64(n)) / (length / before * p.Fit.SD)
	step := along / length
	o := sound("no drift along the rows of the file")
	switch {
	case chance <= tableChance && size >= 0.15:
		unit := ""
		if u := p.Columns.Response.Unit; u != "" {
			unit = " " + u
		}
		o = breach(fmt.Sprintf("%s drifts along the rows of the file, by %s%s a row beside what the model says (%s): if the rows stand in the order of measuring, name the order",
			p.Columns.Response.Title(), signed(step), unit, wording.P(chance)))
		o.Where = []Place{whole(p.Columns.Response)}
	case chance <= tableChance:
		o.Message = "a drift along the rows can be detected, but is below what matters"
	}
	o.Statistic = &Measure{Name: "drift t", Value: t, DF: []float64{df}, P: chance}
	o.Evidence = map[string]any{"per_row": step}
	return o, nil
}

func signed(v float64) string {
	if v > 0 {
		return "+" + wording.Figure(v, 2)
	}
	return wording.Figure(v, 2)
}

// sortedByResponse reports whether the used rows are sorted by the response, as
// a whole or within each group.
func (p *Pass) sortedByResponse() bool {
	if sorted(p.Design.Y) {
		return true
	}
	for g := range p.Design.Groups {
		if !sorted(p.Design.OfGroup(p.Design.Y, g)) {
			return false
		}
	}
	return true
}

// sortedByPredictor reports whether the used rows are sorted by the main
// predictor, as a whole or within each group.
func (p *Pass) sortedByPredictor() bool {
	x := p.Design.X()
	if x == nil {
		return false
	}
	if sorted(x) {
		return true
	}
	for g := range p.Design.Groups {
		if !sorted(p.Design.OfGroup(x, g)) {
			return false
		}
	}
	return true
}

// sorted tells values that only rise or only fall; three say nothing.
func sorted(v []float64) bool {
	up, down := 0, 0
	for i := 1; i < len(v); i++ {
		switch {
		case v[i] > v[i-1]:
			up++
		case v[i] < v[i-1]:
			down++
		}
	}
	return len(v) > 3 && min(up, down) == 0
}
