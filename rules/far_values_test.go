package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

func TestFarValues(t *testing.T) {
	p := passOf(t, kelp(40, 48), kelpRoles)
	expect(t, p, ask(t, FarValues, p), Sound, "no number")

	s := kelp(40, 48)
	s.rows[4][2], s.rows[9][1] = "53.1", "140.5"
	p = passOf(t, s, kelpRoles)
	o := ask(t, FarValues, p)
	expect(t, p, o, Breach, "(5.31 with the point moved?)", "B11", "C6")
	expect(t, p, o, Breach, "(14.05 with the point moved?)")
	if len(o.Target.Values) != 2 || len(o.Target.Rows) != 2 {
		t.Errorf("would change %v, or leave out %v", o.Target.Values, o.Target.Rows)
	}
}

// A long tail is no slip, and neither is a level that was set.
func TestLongTailsAreNotFar(t *testing.T) {
	alarms := 0
	for seed := range uint64(200) {
		random := rand.New(rand.NewPCG(seed, 7))
		s := &sheet{header: []string{"dose", "growth"}}
		for i := range 60 {
			s.add([]int{0, 1, 10, 100, 1000}[i%5], fmt.Sprintf("%.3g", math.Exp(1.2*random.NormFloat64())))
		}
		p := passOf(t, s, model.Roles{Response: "growth", Predictors: []string{"dose"}})
		if ask(t, FarValues, p).Answer == Breach {
			alarms++
		}
	}
	if alarms > 4 {
		t.Errorf("%d of 200 lognormal columns are suspected", alarms)
	}
}

// A dose typed with a zero too many stands out of its levels, as long as these
// do not grow by tens themselves.
func TestFarLevels(t *testing.T) {
	s := kelp(40, 48)
	for i := range s.rows {
		s.rows[i][1] = fmt.Sprint(8 + 2*(i/2%5))
	}
	s.rows[9][1] = "140"
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, FarValues, p), Breach, "B11 temperature is 140 beside 8 to 16 (14 with the point moved?)", "B11")
}
