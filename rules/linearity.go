package rules

import (
	"math"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Linearity asks whether a straight line is the right shape.
var Linearity = &Rule{
	Name:   "linearity",
	Family: OfModel,
	Asks:   "Is a straight line the right shape?",
	Why:    "The slope of a line drawn through a curve depends on where the predictor was measured, and no interval covers that.",
	Method: "F test of a square of the predictor in each group, and of the squared and cubed fitted values (Ramsey 1969, J. R. Stat. Soc. B 31:350)",
	Limit:  jointLimit,
	Needs:  NeedsScatter,
	Remedies: []*remedy.Remedy{
		remedy.Transform,
	},
	Tests: linearityTests,
	Run:   linearity,
}

// jointLimit is when rules with tests count as breached.
const jointLimit = "the p-value of the rule, held together with those of the other rules with tests (Holm 1979, Scand. J. Stat. 6:65), is at most 5 %: " +
	"a sound table raises any of these alarms in at most 5 of 100"

func linearityTests(p *Pass) ([]Test, string) {
	if p.Design.X() == nil {
		return nil, "no predictor"
	}
	bend, reset := p.Fit.Added(squares(p)...), p.Fit.Added(powersOfFit(p)...)
	var tests []Test
	if bend.Asked() {
		tests = append(tests, Test{Name: "F of a square in each group", Value: bend.F, DF: []float64{bend.DF1, bend.DF2}, P: bend.P})
	}
	if reset.Asked() {
		tests = append(tests, Test{Name: "F of powers of the fitted values", Value: reset.F, DF: []float64{reset.DF1, reset.DF2}, P: reset.P})
	}
	if len(tests) == 0 {
		return nil, "fewer than three distinct predictor values in every group, or too few rows"
	}
	return tests, ""
}

// squares has a column for each group: the squared distance of the predictor
// from the group's mean, 0 elsewhere.
func squares(p *Pass) [][]float64 {
	d := p.Design
	x := d.X()
	var columns [][]float64
	for g := range d.Groups {
		mean := numeric.Mean(d.OfGroup(x, g))
		c := make([]float64, d.N())
		for i, code := range d.Group {
			if code == g {
				c[i] = (x[i] - mean) * (x[i] - mean)
			}
		}
		columns = append(columns, c)
	}
	return columns
}

// powersOfFit has the second and third power of the fitted values, which are
// centred and scaled first: that changes no F and keeps the digits.
func powersOfFit(p *Pass) [][]float64 {
	fitted := p.Fit.Fitted
	mean, sd := numeric.Mean(fitted), numeric.SampleSD(fitted)
	second, third := make([]float64, len(fitted)), make([]float64, len(fitted))
	if !(sd > 0) {
		return nil
	}
	for i, v := range fitted {
		z := (v - mean) / sd
		second[i], third[i] = z*z, z*z*z
	}
	return [][]float64{second, third}
}

func linearity(p *Pass) (Outcome, error) {
	response, predictor := p.Columns.Response.Title(), p.Columns.Predictors[0].Title()
	o := judged(p.Joint,
		response+" bends away from a straight line over "+predictor,
		"no bend of "+response+" over "+predictor+" was found")
	t := p.Joint.Tests[0]
	o.Statistic = t.measure()
	bend, reset := p.Fit.Added(squares(p)...), p.Fit.Added(powersOfFit(p)...)
	o.Evidence = map[string]any{
		"quadratic_f": bend.F, "quadratic_p": bend.P,
		"reset_f": reset.F, "reset_p": reset.P,
	}
	if o.Answer == Breach {
		o.Message += " (" + p.strongest() + ")" + p.bendWords()
	}
	return o, nil
}

// strongest writes the test with the smallest p-value and its p.
func (p *Pass) strongest() string {
	t := p.Joint.Smallest()
	return t.Name + " " + wording.Figure(t.Value, 3) + ", " + wording.P(t.P)
}

// bendWords says which way the bend goes, from the common square of the
// predictor: positive residuals at both ends are a curve that opens upward.
func (p *Pass) bendWords() string {
	columns := squares(p)
	sum := make([]float64, p.Fit.N())
	for _, c := range columns {
		for i, v := range c {
			sum[i] += v
		}
	}
	q := make([]float64, len(sum))
	p.Fit.Basis.Residual(q, sum)
	along, length := 0.0, 0.0
	for i, v := range q {
		along += v * p.Fit.Residual[i]
		length += v * v
	}
	if length == 0 || math.Abs(along) < 0.2*math.Sqrt(length*p.Fit.RSS) {
		return ""
	}
	if along > 0 {
		return ": the line lies below the rows at both ends and above them in the middle"
	}
	return ": the line lies above the rows at both ends and below them in the middle"
}
