package rules

import (
	"testing"

	"footing/rules/model"
)

func TestConstantVariance(t *testing.T) {
	place := func(i, n int) float64 { return float64((i*7)%n) / float64(n-1) } // 0 to 1 along x
	for _, c := range []struct {
		name    string
		n       int
		errorAt func(int, float64) float64
		answer  Answer
		words   string
	}{
		{"even scatter", 80, normal, Sound, "not found to vary"},
		{"a fan", 80, func(i int, z float64) float64 { return z * (0.2 + 4*place(i, 80)) }, Breach, "residual SD"},
		{"a slight fan in a large table", 6000, func(i int, z float64) float64 { return z * (1 + 0.2*place(i, 6000)) }, Sound, "detectable, but below what matters: a spread ratio of 1."},
		{"a fan in a large table", 6000, func(i int, z float64) float64 { return z * (1 + 2*place(i, 6000)) }, Breach, "residual SD"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, drawn(c.n, 10, c.errorAt), plainRoles)
			o := ask(t, ConstantVariance, p)
			expect(t, p, o, c.answer, c.words)
			if ratio := o.Evidence["spread_ratio"].(float64); !(ratio >= 1) {
				t.Errorf("spread ratio %v", ratio)
			}
		})
	}
}

// TestConstantVarianceOfGroups: the message names the wide group, with a
// predictor and without.
func TestConstantVarianceOfGroups(t *testing.T) {
	wide := func(i int, z float64) float64 { return z * float64(1+4*(i%2)) }
	p := passOf(t, meansDrawn(60, 4, wide), meansRoles)
	expect(t, p, ask(t, ConstantVariance, p), Breach, " in b, ")
	p = passOf(t, meansDrawn(60, 4, normal), meansRoles)
	expect(t, p, ask(t, ConstantVariance, p), Sound, "not found to vary")

	s := drawn(60, 4, wide)
	s.header = append(s.header, "g")
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], []string{"a", "b"}[i%2])
	}
	p = passOf(t, s, model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"})
	o := ask(t, ConstantVariance, p)
	expect(t, p, o, Breach, " in b, ")
	if o.Statistic.Name != koenkerName {
		t.Errorf("the statistic is %q", o.Statistic.Name)
	}
}

func TestConstantVarianceHasNothingToVaryWith(t *testing.T) {
	s := &sheet{header: []string{"g", "y"}}
	for i := range 12 {
		s.add("a", (i*7)%5)
	}
	p := passOf(t, s, meansRoles)
	expect(t, p, ask(t, ConstantVariance, p), NotAsked, "nothing for the scatter to vary with")
	s = &sheet{header: []string{"x", "y"}}
	s.add(1, 2)
	s.add(2, 4)
	s.add(3, 5)
	p = passOf(t, s, plainRoles)
	expect(t, p, ask(t, ConstantVariance, p), NotAsked, "one row is left")
}

// TestConstantVarianceOfPairs: two rows of a group are as far from its median as
// each other, so the test between groups is left out.
func TestConstantVarianceOfPairs(t *testing.T) {
	s := &sheet{header: []string{"g", "y"}}
	for i, y := range []string{"1.137", "2.291", "4.618", "9.343"} {
		s.add([]string{"a", "b"}[i/2], y)
	}
	p := passOf(t, s, meansRoles)
	chance, reason := ConstantVariance.Chance(p)
	if chance == nil || len(chance.Members) != 1 || chance.Members[0].Test.Name != koenkerName {
		t.Fatalf("members %v: %s", chance, reason)
	}
}
