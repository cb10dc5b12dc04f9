package audit

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// Agreement is what can be said of the slopes with a smallest difference that
// matters (two one-sided tests; Schuirmann 1987, J. Pharmacokinet. Biopharm.
// 15:657).
type Agreement string

// The agreements; the empty one when no smallest difference is stated.
const (
	Agree        Agreement = "agree"
	Differ       Agreement = "differ"
	DifferByLess Agreement = "differ-by-less"
	CannotSay    Agreement = "cannot-tell"
)

// agreement holds every pair's 1 - 2 alpha interval against the smallest
// difference that matters.
func (e *examination) agreement() Agreement {
	c, d := e.pass.Answers.Difference, e.pass.Settings.SmallestDifference
	if c == nil || !defined(d) || !defined(c.P) {
		return ""
	}
	alpha := 1 - e.pass.Settings.Confidence
	half := e.pass.Fit.CriticalPair(1 - 2*alpha)
	inside := true
	for _, pair := range c.Pairs {
		inside = inside && math.Abs(pair.Value)+half*pair.SE < d
	}
	switch clear := c.P < alpha; {
	case clear && inside:
		return DifferByLess
	case clear:
		return Differ
	case inside:
		return Agree
	}
	return CannotSay
}

// stated compares a slope with the one that was stated; nil when none was.
func (e *examination) stated(s model.Estimate) *Stated {
	b := e.pass.Settings.StatedSlope
	if !defined(b) || !defined(s.SE) || !(s.SE > 0) {
		return nil
	}
	t := (s.Value - b) / s.SE
	p := numeric.StudentTwoSided(t, s.DF)
	return &Stated{Slope: Number(b), T: Number(t), P: Number(p), Differs: p < 1-e.pass.Settings.Confidence}
}
