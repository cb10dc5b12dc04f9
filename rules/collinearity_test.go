package rules

import (
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

func TestCollinearity(t *testing.T) {
	random := rand.New(rand.NewPCG(14, 5))
	table := func(light func(x, z float64) float64) *sheet {
		s := &sheet{header: []string{"light", "depth", "growth"}}
		for range 30 {
			x := 10 * random.Float64()
			s.add(light(x, random.NormFloat64()), x, x+random.NormFloat64())
		}
		return s
	}
	roles := model.Roles{Response: "growth", Predictors: []string{"depth", "light"}}

	p := passOf(t, table(func(_, z float64) float64 { return z }), roles)
	expect(t, p, ask(t, Collinearity, p), Sound, "times as wide")

	p = passOf(t, table(func(x, _ float64) float64 { return 3 - 2*x }), roles)
	o := ask(t, Collinearity, p)
	expect(t, p, o, Breach, "cannot be told apart")
	if len(o.Where) == 0 || len(o.Denies) == 0 {
		t.Errorf("columns or answers are not named: %+v", o)
	}

	p = passOf(t, kelp(20, 14), kelpRoles)
	expect(t, p, ask(t, Collinearity, p), NotAsked, "fewer than two")
}
