package remedy

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// RobustLine draws each group's line so that wild rows hardly count.
var RobustLine = &Remedy{
	Name:   "robust-line",
	Do:     "look at the rows far off their line; if they are right, quote the robust line given here beside the ordinary one",
	Short:  "by a line that wild rows hardly move",
	Source: "MM-estimate; Yohai 1987, Ann. Stat. 15:642",
	Whole:  true,
	Answer: func(s Start) (model.Answers, error) {
		a := s.Fit.Answers(s.Confidence)
		if !s.Fit.QuotesOwnLines() {
			return a, &NotApplicable{Reason: "it is made for lines of their own, without covariates"}
		}
		for g := range a.Slopes {
			e := &a.Slopes[g]
			if e.Rows < robustRows {
				return a, &NotApplicable{Reason: "a group has fewer than 20 rows, too few for it"}
			}
			x, y := s.Design.OfGroup(s.Design.X(), g), s.Design.OfGroup(s.Design.Y, g)
			intercept, slope, se, _, ok := numeric.MMLine(x, y, numeric.Stream(s.Seed, "trial/robust-line"))
			if !ok || !(se > 0) {
				return a, &NotApplicable{Reason: "more than half of a group's rows lie on one line"}
			}
			e.Value, e.Intercept, e.RSquared = slope, intercept, math.NaN()
			e.Requote(se, float64(e.Rows-2), s.Confidence)
		}
		if a.Difference == nil {
			return a, nil
		}
		return a, welch(a.Slopes, a.Difference, s.Confidence)
	},
}

// robustRows is the least number of rows of a group at which the estimate's
// interval covers what it says.
const robustRows = 20
