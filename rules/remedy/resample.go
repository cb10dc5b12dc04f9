package remedy

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// resamples is how often the resampling remedies draw anew.
const resamples = 1999

// WildBootstrap takes p-values and intervals from responses whose residuals
// have random signs.
var WildBootstrap = &Remedy{
	Name:   "wild-bootstrap",
	Do:     "quote the intervals given here, found by resampling with random signs",
	Short:  "by resampling with random signs",
	Source: "Wu 1986, Ann. Stat. 14:1261; Davidson and Flachaire 2008, J. Econometrics 146:162",
	Whole:  true,
	Slow:   true,
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		terms := s.Fit.AnswerTerms()
		for g := range a.Slopes {
			e := &a.Slopes[g]
			if !e.Exists {
				continue
			}
			w, err := wild(s, s.Fit.Term(terms[g]))
			if err != nil {
				return a, err
			}
			e.SE = e.HC3
			e.T = e.Value / e.SE
			e.P, e.Low, e.High = w.P, e.Value-w.Quantile*e.SE, e.Value+w.Quantile*e.SE
		}
		if a.Difference != nil {
			return a, wildDifference(s, a.Difference)
		}
		return a, nil
	},
}

func wild(s Start, c model.Contrast) (numeric.Wild, error) {
	if math.IsNaN(s.Fit.HC3(c)) {
		return numeric.Wild{}, &NotApplicable{Reason: "a slope passes through a row that stands alone"}
	}
	return numeric.WildBootstrap(s.Fit.Basis, s.Fit.Transformed(s.Design.Y), c.Catcher, s.Confidence, resamples, numeric.Stream(s.Seed, "trial/wild-bootstrap")), nil
}

func wildDifference(s Start, c *model.Comparison) error {
	var ps []float64
	for k := range c.Pairs {
		pair := &c.Pairs[k]
		contrast := s.Fit.Difference(s.Fit.TermOf(pair.A), s.Fit.TermOf(pair.B))
		w, err := wild(s, contrast)
		if err != nil {
			return err
		}
		pair.SE = s.Fit.HC3(contrast)
		pair.T, pair.P = pair.Value/pair.SE, w.P
		pair.Low, pair.High = pair.Value-w.Quantile*pair.SE, pair.Value+w.Quantile*pair.SE
		ps = append(ps, w.P)
	}
	c.F, c.P = math.NaN(), math.Inf(1)
	for _, p := range numeric.Holm(ps) {
		c.P = min(c.P, p)
	}
	return nil
}

// PermutedGroups tests equal slopes by permuting the residuals of the model
// with one slope; the slopes stay as they are.
var PermutedGroups = &Remedy{
	Name:   "permuted-groups",
	Do:     "quote the p-value of the difference found by permutation, given here",
	Short:  "by permutation",
	Source: "Freedman and Lane 1983, J. Bus. Econ. Stat. 1:292",
	Whole:  true,
	Slow:   true,
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		if a.Difference == nil {
			return a, &NotApplicable{Reason: "there are no two groups to compare"}
		}
		reduced, ok := s.Fit.EqualBasis()
		if !ok {
			return a, &NotApplicable{Reason: "there are no two groups to compare"}
		}
		a.Difference.P = numeric.FreedmanLane(s.Fit.Transformed(s.Design.Y), reduced, s.Fit.Basis, resamples, numeric.Stream(s.Seed, "trial/permuted-groups"))
		return a, nil
	},
}
