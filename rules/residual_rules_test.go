package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

// drawn makes a table of n rows in one line, x evenly on 0 to 10, with errors
// by the given function of row and normal deviate.
func drawn(n int, seed uint64, errorAt func(i int, z float64) float64) *sheet {
	random := rand.New(rand.NewPCG(seed, 3))
	s := &sheet{header: []string{"no", "x", "y"}}
	for i := range n {
		x := 10 * float64((i*7)%n) / float64(n-1)
		s.add(i+1, fmt.Sprintf("%.4f", x), fmt.Sprintf("%.6f", 1+x+errorAt(i, random.NormFloat64())))
	}
	return s
}

var plainRoles = model.Roles{Response: "y", Predictors: []string{"x"}}

func TestResidualRules(t *testing.T) {
	sound := func(_ int, z float64) float64 { return z }
	order := plainRoles
	order.Order = "no"
	cases := []struct {
		name    string
		rule    *Rule
		roles   model.Roles
		errorAt func(int, float64) float64
		answer  Answer
		words   string
	}{
		{"normal errors", Normality, plainRoles, sound, Sound, "as a normal distribution would"},
		{"exponential errors", Normality, plainRoles, func(_ int, z float64) float64 { return -math.Log(0.5 * math.Erfc(z/math.Sqrt2)) }, Breach, "further up than down"},
		{"even scatter", ConstantVariance, plainRoles, sound, Sound, "not found to vary"},
		{"a fan", ConstantVariance, plainRoles, func(i int, z float64) float64 { return z * (0.2 + float64((i*7)%80)/20) }, Breach, "residual SD"},
		{"no wild row", Outliers, plainRoles, sound, Sound, "no row lies further"},
		{"one wild row", Outliers, plainRoles, func(i int, z float64) float64 {
			if i == 11 {
				return -9
			}
			return z
		}, Breach, "row 13 lies"},
		{"independent neighbours", Independence, order, sound, Sound, "not found to be alike"},
		{"a drift", Independence, order, func(i int, z float64) float64 { return z + float64(i)/15 }, Breach, "drift along the order"},
		{"no order given", Independence, plainRoles, sound, NotAsked, "--order"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, drawn(80, 10, c.errorAt), c.roles)
			expect(t, p, ask(t, c.rule, p), c.answer, c.words)
		})
	}
}
