package rules

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

func TestRepeatedSubjects(t *testing.T) {
	roles := model.Roles{Response: "y", Predictors: []string{"x"}, Subject: "plot"}
	for _, c := range []struct {
		name   string
		share  float64 // SD of what the rows of one plot share
		answer Answer
		words  string
	}{
		{"nothing shared", 0, Sound, "not found to share"},
		{"an error shared", 2, Breach, "rows of one plot share an error"},
	} {
		t.Run(c.name, func(t *testing.T) {
			random := rand.New(rand.NewPCG(13, 4))
			s := &sheet{header: []string{"plot", "x", "y"}}
			for plot := range 15 {
				shared := c.share * random.NormFloat64()
				for range 4 {
					x := 10 * random.Float64()
					s.add(fmt.Sprintf("p%d", plot), x, 1+x+shared+random.NormFloat64())
				}
			}
			p := passOf(t, s, roles)
			expect(t, p, ask(t, RepeatedSubjects, p), c.answer, c.words)
		})
	}
	p := passOf(t, drawn(20, 13, func(_ int, z float64) float64 { return z }), plainRoles)
	expect(t, p, ask(t, RepeatedSubjects, p), NotAsked, "--subject")
}

// TestRepeatedSubjectsBelowItsFloor: a correlation that hundreds of subjects
// make certain and that matters to no interval.
func TestRepeatedSubjectsBelowItsFloor(t *testing.T) {
	random := rand.New(rand.NewPCG(8, 8))
	s := &sheet{header: []string{"pot", "x", "y"}}
	for pot := range 300 {
		shared := 0.17 * random.NormFloat64()
		for range 20 {
			x := 10 * random.Float64()
			s.add(fmt.Sprintf("p%d", pot), fmt.Sprintf("%.4f", x), fmt.Sprintf("%.4f", x+shared+random.NormFloat64()))
		}
	}
	roles := plainRoles
	roles.Subject = "pot"
	p := passOf(t, s, roles)
	expect(t, p, ask(t, RepeatedSubjects, p), Sound, "detectable, but below what matters: an intraclass correlation of 0.0")
}
