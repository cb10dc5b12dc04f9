package remedy

import "footing/rules/model"

// CorrectSlopes divides each slope and its standard error by the reliability of
// the predictor.
var CorrectSlopes = &Remedy{
	Name:   "correct-slopes",
	Do:     "quote the corrected slopes given here beside the fitted ones, with the predictor's error that they assume",
	Short:  "corrected for the predictor's error",
	Source: "Fuller 1987, Measurement Error Models",
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		for g := range a.Slopes {
			e := &a.Slopes[g]
			lambda, known := s.Target.Reliability[e.Group]
			if !e.Exists || !known {
				continue
			}
			if lambda <= 0 {
				return a, &NotApplicable{Reason: "the predictor's error is as large as its scatter"}
			}
			e.Value /= lambda
			e.Requote(e.SE/lambda, e.DF, s.Confidence)
		}
		if a.Difference == nil {
			return a, nil
		}
		return a, welch(a.Slopes, a.Difference, s.Confidence)
	},
}
