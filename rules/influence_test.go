package rules

import (
	"fmt"
	"math"
	"testing"
)

func TestInfluence(t *testing.T) {
	s := drawn(40, 21, normal)
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Influence, p), Sound, "no row pulls a slope")

	s.rows[17][1], s.rows[17][2] = "24", "5"
	p = passOf(t, s, plainRoles)
	o := ask(t, Influence, p)
	expect(t, p, o, Breach, "row 19 moves the slope", "C19")
	if len(o.Target.Rows) != 1 || o.Target.Rows[0] != 17 {
		t.Errorf("the remedies are to act on %v", o.Target.Rows)
	}
}

// TestInfluenceBelowItsFloor: among thousands of rows one may be far beyond
// chance and still move the slope by next to nothing.
func TestInfluenceBelowItsFloor(t *testing.T) {
	s := drawn(4000, 21, normal)
	s.rows[1][2] = fmt.Sprint(1 + 0.0175 + 9.0) // near the low end of x
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Influence, p), Sound, "detectable, but below what matters: a pull of 0.2")
}

// TestInfluenceOfMeans: without a predictor a row pulls its group's mean.
func TestInfluenceOfMeans(t *testing.T) {
	wild := func(i int, z float64) float64 {
		if i == 7 {
			return 9
		}
		return z
	}
	p := passOf(t, meansDrawn(30, 6, wild), meansRoles)
	expect(t, p, ask(t, Influence, p), Breach, "row 9 moves the mean of b", "B9")
	p = passOf(t, meansDrawn(30, 6, normal), meansRoles)
	expect(t, p, ask(t, Influence, p), Sound, "no row pulls a mean")
}

func TestInfluenceNeedsRows(t *testing.T) {
	s := &sheet{header: []string{"x", "y"}}
	s.add(1, 2)
	s.add(2, 4)
	s.add(3, 5)
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Influence, p), NotAsked, "too few rows")
}

// The simulated statistics of the row rules are the reported ones: what is
// compared with the null must be what was observed.
func TestRowStatisticsAreThoseReported(t *testing.T) {
	p := passOf(t, drawn(30, 4, normal), plainRoles)
	for _, r := range []*Rule{Outliers, Influence} {
		chance, reason := r.Chance(p)
		if chance == nil {
			t.Fatal(reason)
		}
		s := NewSample(p.Fit)
		copy(s.E, p.Fit.Residual)
		s.Changed()
		m := chance.Members[0]
		if got := m.New()(s); math.Abs(got-m.Test.Value) > 1e-10*m.Test.Value {
			t.Errorf("%s: simulated %.15g, reported %.15g", r.Name, got, m.Test.Value)
		}
	}
}
