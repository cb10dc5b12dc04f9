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
