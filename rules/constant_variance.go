package rules

import (
	"fmt"
	"math"

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
	Method: "studentized Breusch-Pagan test on the model's regressors (Koenker 1981, J. Econometrics 17:107), " +
		"and between groups the test about medians of Brown and Forsythe (1974, JASA 69:364)",
	Limit: jointLimit,
	Needs: NeedsScatter,
	Remedies: []*remedy.Remedy{
		remedy.EvenScatter,
	},
	Tests: constantVarianceTests,
	Run:   constantVariance,
}

func constantVarianceTests(p *Pass) ([]Test, string) {
	f := p.Fit
	var tests []Test
	if f.P() > 1 {
		lm := numeric.KoenkerLM(make([]float64, f.N()), f.Residual, f.Basis.Q())
		df := float64(f.P() - 1)
		tests = append(tests, Test{Name: "studentized Breusch-Pagan LM", Value: lm, DF: []float64{df}, P: numeric.ChiSquaredUpper(lm, df)})
	}
	if len(p.Design.Groups) > 1 {
		stat, d1, d2, pValue := numeric.BrownForsythe(f.Residual, p.Design.Group, len(p.Design.Groups))
		if !math.IsNaN(pValue) {
			tests = append(tests, Test{Name: "Brown-Forsythe F", Value: stat, DF: []float64{d1, d2}, P: pValue})
		}
	}
	if len(tests) == 0 {
		return nil, "one mean and no predictor: nothing for the scatter to vary with"
	}
	return tests, ""
}

func constantVariance(p *Pass) (Outcome, error) {
	o := judged(p.Joint, "", "the scatter about the lines was not found to vary")
	if o.Answer == Breach {
		o.Message = "the scatter about the lines is uneven (" + p.strongest() + ")" + p.spreadWords()
	}
	o.Statistic = p.Joint.Tests[0].measure()
	nan := math.NaN()
	o.Evidence = map[string]any{"breusch_pagan_lm": nan, "breusch_pagan_p": nan, "brown_forsythe_f": nan, "brown_forsythe_p": nan}
	for _, t := range p.Joint.Tests {
		if t.Name == "Brown-Forsythe F" {
			o.Evidence["brown_forsythe_f"], o.Evidence["brown_forsythe_p"] = t.Value, t.P
		} else {
			o.Evidence["breusch_pagan_lm"], o.Evidence["breusch_pagan_p"] = t.Value, t.P
		}
	}
	return o, nil
}

// spreadWords compares the residual SD of the groups or, along the predictor,
// of the lower and the upper half of the rows.
func (p *Pass) spreadWords() string {
	d := p.Design
	if t := p.Joint.Smallest(); t.Name == "Brown-Forsythe F" || d.X() == nil {
		widest, narrowest := -1, -1
		var sd []float64
		for g := range d.Groups {
			own := d.OfGroup(p.Fit.Residual, g)
			sd = append(sd, rootMeanSquare(own))
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

func rootMeanSquare(v []float64) float64 {
	ss := 0.0
	for _, e := range v {
		ss += e * e
	}
	return math.Sqrt(ss / float64(len(v)))
}
