package rules

import (
	"math"
	"testing"

	"footing/rules/numeric"
)

func TestPredictorError(t *testing.T) {
	for _, c := range []struct {
		name   string
		sd     float64
		answer Answer
		words  string
		denies int
	}{
		{"not declared", math.NaN(), NotAsked, "--predictor-error", 0},
		{"none", 0, Sound, "too small to flatten", 0},
		{"a small one", 0.2, Sound, "too small to flatten", 0},
		{"one that flattens", 1, Breach, "flattens the slope", 0},
		{"one as large as the scatter", 4, Breach, "as large as its whole scatter in exposed and sheltered", 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, kelp(60, 8), kelpRoles)
			p.Settings.PredictorError = c.sd
			o := ask(t, PredictorError, p)
			expect(t, p, o, c.answer, c.words)
			if len(o.Denies) != c.denies {
				t.Errorf("%d answers are denied, want %d", len(o.Denies), c.denies)
			}
			if c.answer == NotAsked {
				return
			}
			// By definition, within each group.
			for g, group := range p.Design.Groups {
				x := p.Design.OfGroup(p.Design.X(), g)
				want := 1 - c.sd*c.sd/numeric.SampleVariance(x)
				if got := o.Target.Reliability[group]; math.Abs(got-want) > 1e-12 {
					t.Errorf("reliability of %s is %v, want %v", group, got, want)
				}
			}
		})
	}
}

// TestPredictorErrorOfASharedSlope takes the scatter of all rows for one line.
func TestPredictorErrorOfASharedSlope(t *testing.T) {
	p := passOf(t, drawn(40, 10, normal), plainRoles)
	p.Settings.PredictorError = 1
	o := ask(t, PredictorError, p)
	expect(t, p, o, Breach, "corrected")
	want := 1 - 1/numeric.SampleVariance(p.Design.X())
	if got := o.Target.Reliability[""]; math.Abs(got-want) > 1e-12 {
		t.Errorf("reliability %v, want %v", got, want)
	}
	p = passOf(t, meansDrawn(40, 2, normal), meansRoles)
	p.Settings.PredictorError = 1
	expect(t, p, ask(t, PredictorError, p), NotAsked, "no predictor")
}
