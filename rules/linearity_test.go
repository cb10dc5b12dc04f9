package rules

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

func TestLinearity(t *testing.T) {
	p := passOf(t, kelp(60, 8), kelpRoles)
	expect(t, p, ask(t, Linearity, p), Sound, "no bend")

	for _, c := range []struct {
		name  string
		bend  float64
		words string
	}{
		{"a valley", 0.1, "below the rows at both ends"},
		{"a hill", -0.1, "above the rows at both ends"},
	} {
		t.Run(c.name, func(t *testing.T) {
			random := rand.New(rand.NewPCG(8, 2))
			s := &sheet{header: []string{"site", "temperature", "growth"}}
			for i := range 60 {
				x := float64(i)/5 - 6
				s.add([]string{"exposed", "sheltered"}[i%2], x, fmt.Sprintf("%.3f", x+c.bend*x*x+0.5*random.NormFloat64()))
			}
			p := passOf(t, s, kelpRoles)
			expect(t, p, ask(t, Linearity, p), Breach, c.words)
		})
	}
}

func TestLinearityNeedsThreeValues(t *testing.T) {
	s := &sheet{header: []string{"x", "y"}}
	for i := range 20 {
		s.add(i%2, (i*7)%5)
	}
	p := passOf(t, s, model.Roles{Response: "y", Predictors: []string{"x"}})
	expect(t, p, ask(t, Linearity, p), NotAsked, "fewer than three distinct")
}

// TestLinearityBelowItsFloor: a bend that thousands of rows make certain and
// that moves no line.
func TestLinearityBelowItsFloor(t *testing.T) {
	bend := func(by float64) *Pass {
		return passOf(t, drawn(6000, 5, func(i int, z float64) float64 {
			u := float64((i*7)%6000)/5999 - 0.5
			return z + by*u*u
		}), plainRoles)
	}
	p := bend(1.2) // root mean square 0.09 SD
	expect(t, p, ask(t, Linearity, p), Sound, "detectable, but below what matters: a bend of 0.")
	p = bend(6)
	expect(t, p, ask(t, Linearity, p), Breach, "below the rows at both ends")
}

// TestLinearityOfLevels: one of six levels off the line is a lack of fit, and
// may be an error that its readings share.
func TestLinearityOfLevels(t *testing.T) {
	levels := func(shift float64) *sheet {
		random := rand.New(rand.NewPCG(6, 6))
		s := &sheet{header: []string{"x", "y"}}
		for i := range 60 {
			x := i%6 + 1
			off := 0.0
			if x == 3 {
				off = shift
			}
			s.add(x, fmt.Sprintf("%.4f", float64(x)+off+random.NormFloat64()))
		}
		return s
	}
	p := passOf(t, levels(2.5), plainRoles)
	o := ask(t, Linearity, p)
	expect(t, p, o, Breach, "name the level with --subject")
	if len(o.Target.Subjects) != 60 || o.Target.Subjects[0] != o.Target.Subjects[6] || o.Target.Subjects[0] == o.Target.Subjects[1] {
		t.Errorf("the levels are %v", o.Target.Subjects)
	}
	p = passOf(t, levels(0), plainRoles)
	o = ask(t, Linearity, p)
	expect(t, p, o, Sound, "no bend")
	if o.Target.Subjects != nil {
		t.Error("levels are named without a breach")
	}
}

// TestLinearityOfAFurtherPredictor names the one that bends.
func TestLinearityOfAFurtherPredictor(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 7))
	s := &sheet{header: []string{"x", "depth", "y"}}
	for range 60 {
		x, depth := 10*random.Float64(), 4*random.Float64()-2
		s.add(fmt.Sprintf("%.4f", x), fmt.Sprintf("%.4f", depth), fmt.Sprintf("%.4f", x+depth*depth+0.5*random.NormFloat64()))
	}
	p := passOf(t, s, model.Roles{Response: "y", Predictors: []string{"x", "depth"}})
	expect(t, p, ask(t, Linearity, p), Breach, "bend over depth")
}

func TestLinearityNeedsAPredictor(t *testing.T) {
	p := passOf(t, meansDrawn(40, 2, normal), meansRoles)
	expect(t, p, ask(t, Linearity, p), NotAsked, "no predictor")
}
