package rules

import (
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
	Method: "Shapiro and Wilk 1965, Biometrika 52:591, on the raw residuals, by Royston's algorithm AS R94 (1995, Appl. Stat. 44:547)",
	Limit:  jointLimit,
	Needs:  NeedsScatter,
	Remedies: []*remedy.Remedy{
		remedy.LongTails,
	},
	Tests: normalityTests,
	Run:   normality,
}

func normalityTests(p *Pass) ([]Test, string) {
	w, pValue, ok := numeric.ShapiroWilk(p.Fit.Residual)
	if !ok {
		return nil, "the Shapiro-Wilk test is defined for 3 to 5000 rows"
	}
	return []Test{{Name: "Shapiro-Wilk W", Value: w, P: pValue}}, ""
}

func normality(p *Pass) (Outcome, error) {
	t := p.Joint.Tests[0]
	skew, tails := numeric.Skewness(p.Fit.Residual), numeric.ExcessKurtosis(p.Fit.Residual)
	o := judged(p.Joint,
		"the residuals do not scatter like a normal distribution (Shapiro-Wilk W "+wording.Figure(t.Value, 3)+", "+wording.P(t.P)+"): "+shape(skew, tails),
		"the residuals scatter as a normal distribution would")
	o.Statistic = t.measure()
	o.Evidence = map[string]any{
		"shapiro_wilk_w": t.Value, "shapiro_wilk_p": t.P,
		"skewness": skew, "excess_kurtosis": tails,
	}
	return o, nil
}

// shape says in words how residuals depart from the normal.
func shape(skew, tails float64) string {
	switch {
	case skew > 0.5:
		return "they reach further up than down"
	case skew < -0.5:
		return "they reach further down than up"
	case tails > 1:
		return "a few reach very far on both sides"
	case tails < -0.5:
		return "they crowd at two ends or lie evenly"
	default:
		return "they are uneven"
	}
}
