package remedy

import (
	"footing/rules/model"
	"footing/rules/numeric"
)

// OwnVariance gives each group a residual variance of its own.
var OwnVariance = &Remedy{
	Name:   "own-variance",
	Do:     "compare the slopes with each group's own scatter, as done here, in place of a common one",
	Short:  "with each group's own scatter",
	Source: "Welch 1947, Biometrika 34:28, and 1951, Biometrika 38:330; Satterthwaite 1946, Biometrics Bull. 2:110",
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		if a.Difference == nil {
			return a, &NotApplicable{Reason: "there are no two groups to compare"}
		}
		if !s.Fit.QuotesOwnLines() {
			return a, &NotApplicable{Reason: "the groups share covariates or a slope"}
		}
		return a, welch(a.Slopes, a.Difference, s.Confidence)
	},
}

// leastRows is the least number of rows that give a group a scatter of its own.
const leastRows = 3

// welch compares slopes that each have a standard error and degrees of freedom
// of their own.
func welch(slopes []model.Estimate, c *model.Comparison, confidence float64) error {
	var b, v, df []float64
	for _, e := range slopes {
		if e.Exists && e.Rows >= leastRows && e.SE > 0 {
			b, v, df = append(b, e.Value), append(v, e.SE*e.SE), append(df, e.DF)
		}
	}
	if len(b) < 2 {
		return &NotApplicable{Reason: "fewer than two groups have a scatter of their own"}
	}
	c.F, c.DF1, c.DF2, c.P = numeric.WelchSlopes(b, v, df)
	for k := range c.Pairs {
		pair := &c.Pairs[k]
		first, _ := find(slopes, pair.A)
		second, _ := find(slopes, pair.B)
		if !(first.SE > 0) || !(second.SE > 0) {
			continue
		}
		pair.Value = second.Value - first.Value
		both := []float64{first.SE * first.SE, second.SE * second.SE}
		_, _, pairDF, _ := numeric.WelchSlopes([]float64{first.Value, second.Value}, both, []float64{first.DF, second.DF})
		pair.Requote(rootSum(both), len(b), pairDF, confidence)
	}
	return nil
}

func find(slopes []model.Estimate, group string) (model.Estimate, bool) {
	for _, e := range slopes {
		if e.Group == group {
			return e, true
		}
	}
	return model.Estimate{}, false
}
