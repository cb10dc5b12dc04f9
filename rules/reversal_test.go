package rules

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

// reversedTable rises within each reef and falls over all: the reef measured at
// higher x lies lower. step is how much lower.
func reversedTable(step float64) *sheet {
	random := rand.New(rand.NewPCG(2, 2))
	s := &sheet{header: []string{"reef", "x", "y"}}
	for i := range 60 {
		g := i % 3
		x := float64(4*g) + 3*random.Float64()
		s.add([]string{"inner", "middle", "outer"}[g], fmt.Sprintf("%.3f", x), fmt.Sprintf("%.3f", 20+x-step*float64(g)+0.5*random.NormFloat64()))
	}
	return s
}

func TestReversal(t *testing.T) {
	withGroup := plainRoles
	withGroup.Group = "reef"

	p := passOf(t, reversedTable(9), plainRoles)
	o := ask(t, Reversal, p)
	expect(t, p, o, Breach, "reef belongs into the model", "reef")
	if o.Advice != "run again with -g reef" || len(o.Limits) != 0 {
		t.Errorf("advice %q, limits %v", o.Advice, o.Limits)
	}
	if !(o.Evidence["pooled_slope"].(float64) < 0 && o.Evidence["within_slope"].(float64) > 0) {
		t.Errorf("evidence %v", o.Evidence)
	}

	p = passOf(t, reversedTable(9), withGroup)
	o = ask(t, Reversal, p)
	expect(t, p, o, Sound, "over all rows y falls with x")
	if len(o.Limits) != 1 || o.Limits[0].Of != nil {
		t.Errorf("the pooled slope is not kept from being quoted: %v", o.Limits)
	}

	p = passOf(t, reversedTable(0), withGroup)
	o = ask(t, Reversal, p)
	expect(t, p, o, Sound, "do not run against each other")
	if len(o.Limits) != 0 {
		t.Errorf("limits %v", o.Limits)
	}
}

func TestReversalIsNotAsked(t *testing.T) {
	p := passOf(t, drawn(40, 10, normal), plainRoles)
	expect(t, p, ask(t, Reversal, p), NotAsked, "no column of labels")
	p = passOf(t, meansDrawn(40, 2, normal), meansRoles)
	expect(t, p, ask(t, Reversal, p), NotAsked, "no predictor")
	s := reversedTable(9)
	for i := range s.rows {
		s.rows[i][0] = "inner"
	}
	p = passOf(t, s, model.Roles{Response: "y", Predictors: []string{"x"}, Group: "reef"})
	expect(t, p, ask(t, Reversal, p), NotAsked, "one group")

	// Names of rows are no groups: each occurs once.
	s = drawn(40, 10, normal)
	for i := range s.rows {
		s.rows[i][0] = fmt.Sprintf("plot %c%c", 'a'+i/8, 'a'+i%8)
	}
	p = passOf(t, s, plainRoles)
	expect(t, p, ask(t, Reversal, p), NotAsked, "no column of labels")
}
