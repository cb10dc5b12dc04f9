package rules

import (
	"fmt"
	"testing"

	"footing/rules/model"
)

// pulled is a table without a slope, but for one row far out that makes one.
func pulled() *sheet {
	s := drawn(100, 1, func(i int, z float64) float64 { return z - 10*float64((i*7)%100)/99 })
	s.rows[17][1], s.rows[17][2] = "20", "15"
	return s
}

func TestFragility(t *testing.T) {
	p := passOf(t, pulled(), plainRoles)
	o := ask(t, Fragility, p)
	expect(t, p, o, CannotTell, "the slope would not be clear without 1 row (19)", "C19")
	if o.Evidence["rows_to_flip"] != 1 || o.Evidence["of"] != "slope" || !(o.Evidence["seldom_below"].(float64) > 1) {
		t.Errorf("evidence %v", o.Evidence)
	}
	if len(o.Touches) != 1 || o.Touches[0].Difference {
		t.Errorf("it bears on %v", o.Touches)
	}

	p = passOf(t, drawn(40, 10, normal), plainRoles)
	o = ask(t, Fragility, p)
	if o.Answer != Sound || o.Evidence["rows_to_flip"] != nil {
		t.Errorf("a steep slope: answer %d, %s", o.Answer, o.Message)
	}
	expect(t, p, o, Sound, "would stay clear")
}

// TestFragilityOfTheDifference searches the two slopes and their difference.
func TestFragilityOfTheDifference(t *testing.T) {
	s := &sheet{header: []string{"g", "x", "y"}}
	for i, row := range drawn(60, 3, normal).rows {
		var x, y float64
		fmt.Sscan(row[1], &x)
		fmt.Sscan(row[2], &y)
		s.add([]string{"a", "b"}[i%2], x, fmt.Sprintf("%.6f", y+0.45*x*float64(i%2)))
	}
	p := passOf(t, s, model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"})
	if p.Answers.Difference.P >= 0.05 {
		t.Fatalf("the difference is not clear: p %v", p.Answers.Difference.P)
	}
	o := ask(t, Fragility, p)
	expect(t, p, o, Sound, "the difference would not be clear without")
	answers := o.Evidence["by_answer"].(map[string]any)
	for _, of := range []string{"a", "b", "difference"} {
		if answers[of] == nil {
			t.Errorf("nothing is told of %s", of)
		}
	}
	if o.Evidence["of"] != "difference" {
		t.Errorf("the answer that fewest rows decide is %v", o.Evidence["of"])
	}
}

func TestFragilityNeedsAClearAnswer(t *testing.T) {
	p := passOf(t, drawn(40, 10, func(i int, z float64) float64 { return z - 10*float64((i*7)%40)/39 }), plainRoles)
	expect(t, p, ask(t, Fragility, p), NotAsked, "no answer is clear")
	p = passOf(t, meansDrawn(40, 2, normal), meansRoles)
	expect(t, p, ask(t, Fragility, p), NotAsked, "no answer is clear")
}
