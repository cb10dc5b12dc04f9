package remedy

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// RobustErrors keeps the slopes and takes standard errors that allow each row a
// variance of its own.
var RobustErrors = &Remedy{
	Name:   "robust-errors",
	Do:     "quote the intervals by HC3 standard errors given here in place of the classical ones",
	Short:  "with HC3 standard errors",
	Source: "HC3; MacKinnon and White 1985, J. Econometrics 29:305",
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		for g := range a.Slopes {
			e := &a.Slopes[g]
			if !e.Exists {
				continue
			}
			if math.IsNaN(e.HC3) {
				return a, &NotApplicable{Reason: "a slope passes through a row that stands alone"}
			}
			e.Requote(e.HC3, e.DF, s.Confidence)
		}
		if a.Difference == nil {
			return a, nil
		}
		return a, requoteDifference(s, a.Difference)
	},
}

// requoteDifference tests equal slopes by Wald's statistic with the HC3
// covariance, F over one less than the slopes compared.
func requoteDifference(s Start, c *model.Comparison) error {
	terms := s.Fit.ComparedTerms()
	var catchers [][]float64
	var b []float64
	for _, k := range terms[1:] {
		d := s.Fit.Difference(terms[0], k)
		catchers = append(catchers, d.Catcher)
		b = append(b, d.Estimate)
	}
	chi, ok := numeric.Wald(b, numeric.HC3Covariance(catchers, s.Fit.Residual, s.Fit.Leverage))
	if !ok {
		return &NotApplicable{Reason: "the robust covariance is singular"}
	}
	c.F = chi / c.DF1
	c.P = numeric.FUpper(c.F, c.DF1, c.DF2)
	for k := range c.Pairs {
		pair := &c.Pairs[k]
		contrast := s.Fit.Difference(s.Fit.TermOf(pair.A), s.Fit.TermOf(pair.B))
		pair.Requote(s.Fit.HC3(contrast), len(terms), c.DF2, s.Confidence)
	}
	return nil
}
