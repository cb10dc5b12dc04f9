package rules

import (
	"fmt"
	"math"
	"strings"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Collinearity asks whether predictors carry the same information.
var Collinearity = &Rule{
	Name:   "collinearity",
	Family: OfModel,
	Asks:   "Do predictors carry the same information?",
	Why:    "Where one predictor is made up of others, its slope cannot be told from theirs.",
	Method: "rank by pivoted Householder QR of centred columns at 1e-10 of their length; variance inflation factors; " +
		"condition number of the scaled columns with the intercept (Belsley, Kuh and Welsch 1980, Regression Diagnostics)",
	Limit:    "a column that others determine is a breach, which involves no chance; thin when the variance of the main slope is inflated tenfold and leaving out one column changes an answer",
	Needs:    NeedsDesign,
	Remedies: []*remedy.Remedy{remedy.LeaveOutColumn},
	Run:      collinearity,
}

func collinearity(p *Pass) (Outcome, error) {
	if p.NoFit != nil {
		if len(p.NoFit.Tangles) == 0 {
			return notAsked("there is no fit (see sample-size)"), nil
		}
		return p.tangled(), nil
	}
	if p.Fit == nil {
		return notAsked("there is nothing to fit (see sample-size)"), nil
	}
	numbers, names := p.numericPredictors()
	if len(numbers) < 2 {
		return notAsked("fewer than two predictors that are numbers"), nil
	}
	condition := numeric.ConditionNumber(withIntercept(numbers))
	vif := map[string]any{}
	largest, at := 0.0, ""
	for k, name := range names {
		v := inflation(numbers, k)
		vif[name] = v
		if v > largest {
			largest, at = v, name
		}
	}
	o := sound(fmt.Sprintf("the interval of %s is %s times as wide as with unrelated predictors", at, wording.Figure(math.Sqrt(largest), 2)))
	if x, ok := vif[p.mainPredictor()].(float64); ok && x >= entangledVIF {
		o.IfChanges = CannotTell
		o.IfChangesMessage = fmt.Sprintf("%s is entangled with other columns (its interval is %s times as wide as with unrelated ones), and leaving one out changes an answer", p.mainPredictor(), wording.Figure(math.Sqrt(x), 2))
		for k := range len(p.Design.Predictors) - 1 + len(p.Design.Covariates) {
			if k == 0 {
				o.Target.LeaveOut = 0
				continue
			}
			o.Variants = append(o.Variants, remedy.Target{LeaveOut: k})
		}
	}
	o.Statistic = figure("largest variance inflation factor", largest)
	o.Evidence = map[string]any{"vif": vif, "condition_number": condition}
	return o, nil
}

// entangledVIF is the variance inflation from which it is asked whether leaving
// a column out changes an answer.
const entangledVIF = 10

func (p *Pass) mainPredictor() string {
	if p.Design.X() == nil {
		return ""
	}
	return p.Columns.Predictors[0].Title()
}

// tangled names the columns that cannot be told apart.
func (p *Pass) tangled() Outcome {
	var said []string
	for _, t := range p.NoFit.Tangles {
		if len(t.By) == 0 {
			said = append(said, t.Column+" never changes")
			continue
		}
		said = append(said, fmt.Sprintf("%s is made up of %s", t.Column, wording.List(t.By)))
	}
	o := breach(strings.Join(said, "; ") + ": their coefficients cannot be told apart, so none is given")
	o.Denies = p.everyQuestion()
	for _, col := range p.Columns.Fitted() {
		if col == p.Columns.Response {
			continue
		}
		for _, t := range p.NoFit.Tangles {
			if strings.HasPrefix(t.Column, col.Title()) {
				o.Where = append(o.Where, Place{Row: -1, Column: col})
				break
			}
		}
	}
	return o
}

// numericPredictors are the predictors and covariates that are numbers.
func (p *Pass) numericPredictors() (values [][]float64, names []string) {
	for k, v := range p.Design.Predictors {
		values = append(values, v)
		names = append(names, p.Columns.Predictors[k].Title())
	}
	for _, c := range p.Design.Covariates {
		if c.Number != nil {
			values = append(values, c.Number)
			names = append(names, c.Name())
		}
	}
	return values, names
}

// inflation is the variance inflation factor of column k among the columns,
// groups ignored: 1/(1-R²) on the others and an intercept.
func inflation(columns [][]float64, k int) float64 {
	var others [][]float64
	for j, c := range columns {
		if j != k {
			others = append(others, centred(c))
		}
	}
	own := centred(columns[k])
	rest := make([]float64, len(own))
	numeric.NewBasis(others, len(own)).Residual(rest, own)
	var total, left float64
	for i, v := range own {
		total += v * v
		left += rest[i] * rest[i]
	}
	return total / left
}

func withIntercept(columns [][]float64) [][]float64 {
	one := make([]float64, len(columns[0]))
	for i := range one {
		one[i] = 1
	}
	return append([][]float64{one}, columns...)
}

func centred(v []float64) []float64 {
	mean := numeric.Mean(v)
	out := make([]float64, len(v))
	for i := range v {
		out[i] = v[i] - mean
	}
	return out
}
