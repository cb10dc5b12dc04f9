package audit

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// Judgement says how an answer fares under a remedy.
type Judgement string

// The judgements.
const (
	Stands      Judgement = "stands"
	Weakens     Judgement = "weakens"
	Strengthens Judgement = "strengthens"
	Changes     Judgement = "changes"
)

// sameEvidence is the distance of two p-values, as normal deviates, below
// which they are the same evidence on either side of a line.
const sameEvidence = 0.5

// judgeSlope compares a slope before and under a remedy. A slope that one of
// the two lacks has changed.
func judgeSlope(before, after model.Estimate, sameScale bool) Judgement {
	if defined(before.Low) != defined(after.Low) || before.Exists != after.Exists {
		return Changes
	}
	if !defined(before.Low) {
		return Stands
	}
	if before.Clear() && after.Clear() && (before.Value > 0) != (after.Value > 0) {
		return Changes
	}
	if sameScale && (after.Value < before.Low || after.Value > before.High) {
		return Changes
	}
	if before.Clear() != after.Clear() {
		if deviateDistance(before.P, after.P) >= sameEvidence {
			return Changes
		}
		return crossing(after.Clear())
	}
	if !sameScale {
		return Stands
	}
	half := (before.High - before.Low) / 2
	if after.High-after.Low >= 1.25*(before.High-before.Low) || math.Abs(after.Value-before.Value) > half/2 {
		return Weakens
	}
	return Stands
}

func crossing(clearAfter bool) Judgement {
	if clearAfter {
		return Strengthens
	}
	return Weakens
}

// judgeDifference compares the test of equal slopes before and under a
// remedy.
func judgeDifference(before, after *model.Comparison, alpha float64, sameScale bool) Judgement {
	was, is := before != nil && defined(before.P), after != nil && defined(after.P)
	if was != is {
		return Changes
	}
	if !was {
		return Stands
	}
	if sameScale && moved(before.Pairs, after.Pairs) {
		return Changes
	}
	if (before.P < alpha) == (after.P < alpha) {
		return Stands
	}
	if deviateDistance(before.P, after.P) >= sameEvidence {
		return Changes
	}
	return crossing(after.P < alpha)
}

// moved reports whether the difference of some pair that both have lies outside
// the other's interval, either way round: a wild row makes the interval before
// so wide that the difference after cannot leave it.
func moved(before, after []model.Pair) bool {
	for _, b := range before {
		for _, a := range after {
			if a.A == b.A && a.B == b.B && (outside(a.Value, b.Low, b.High) || outside(b.Value, a.Low, a.High)) {
				return true
			}
		}
	}
	return false
}

func outside(v, low, high float64) bool { return v < low || v > high }

// deviateDistance is |z(p) - z(q)| with z the normal quantile of 1 - p/2.
func deviateDistance(p, q float64) float64 {
	return math.Abs(deviate(p) - deviate(q))
}

func deviate(p float64) float64 {
	if math.IsNaN(p) {
		return math.Inf(1) // an interval without width: evidence without bound
	}
	return -numeric.NormalQuantile(max(p, 1e-300) / 2)
}

func defined(v float64) bool { return !math.IsNaN(v) }
