package rules

import (
	"fmt"
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// PredictorError asks whether the predictor's own error flattens a slope.
var PredictorError = &Rule{
	Name:   "predictor-error",
	Family: OfModel,
	Asks:   "Does the predictor's own error of measurement flatten a slope?",
	Why:    "Where the predictor is measured with error the fitted slope is too flat, and more rows do not mend that.",
	Method: "reliability 1 - sd²/variance of the predictor within the group; the slope and its standard error are divided by it (Fuller 1987, Measurement Error Models)",
	Limit: "asked only when the error is declared with --predictor-error; a breach when the correction moves a slope by more than half its standard error. " +
		"It follows from what was declared, so there are no false alarms",
	Needs:    NeedsScatter,
	Bears:    Both,
	Remedies: []*remedy.Remedy{remedy.CorrectSlopes},
	Run:      predictorError,
}

func predictorError(p *Pass) (Outcome, error) {
	sd := p.Settings.PredictorError
	switch {
	case math.IsNaN(sd):
		return notAsked("the predictor's error is not declared (--predictor-error)"), nil
	case p.Design.X() == nil:
		return notAsked("no predictor"), nil
	}
	reliability, corrected := map[string]any{}, map[string]any{}
	var moved, lost []string
	o := sound("the predictor's error is too small to flatten a slope by half its standard error")
	o.Target.Reliability = map[string]float64{}
	for g, s := range p.Answers.Slopes {
		lambda := p.reliability(g, sd)
		key := inGroup(s.Group)
		reliability[key] = lambda
		o.Target.Reliability[s.Group] = lambda
		switch {
		case !s.Exists || math.IsNaN(s.SE):
		case lambda <= 0:
			lost = append(lost, key)
			o.Denies = append(o.Denies, Question{Group: s.Group})
		default:
			corrected[key] = s.Value / lambda
			if math.Abs(s.Value)*(1/lambda-1) > s.SE/2 {
				moved = append(moved, p.correction(s, lambda))
			}
		}
	}
	target := o.Target
	denied := o.Denies
	switch {
	case len(lost) > 0:
		o = breach(fmt.Sprintf("the declared error of the predictor is as large as its whole scatter in %s: nothing can be said of the slope", wording.List(lost)))
		o.Denies = denied
	case len(moved) > 0:
		o = breach("the predictor's own error flattens the slope: " + wording.List(moved))
	}
	o.Target = target
	o.Evidence = map[string]any{"reliability": reliability, "corrected_slopes": corrected}
	return o, nil
}

// reliability is the share of the predictor's variance within a group that is
// not its own error.
func (p *Pass) reliability(g int, sd float64) float64 {
	x := p.Design.X()
	if p.Design.HasGroup() && !p.Design.CommonSlope {
		x = p.Design.OfGroup(x, g)
	}
	return 1 - sd*sd/numeric.SampleVariance(x)
}

func (p *Pass) correction(s model.Estimate, lambda float64) string {
	places := wording.Places(s.SE)
	return fmt.Sprintf("%s as fitted, %s corrected%s (reliability %s)", wording.To(s.Value, places), wording.To(s.Value/lambda, places), inLabel(s.Group), wording.Figure(lambda, 2))
}

func inLabel(group string) string {
	if group == "" {
		return ""
	}
	return " in " + group
}
