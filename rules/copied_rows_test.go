package rules

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"footing/rules/model"
)

func TestCopiedRows(t *testing.T) {
	p := passOf(t, kelp(40, 5), kelpRoles)
	expect(t, p, ask(t, CopiedRows, p), Sound, "no row")

	s := kelp(40, 5)
	s.rows[20] = s.rows[4]
	p = passOf(t, s, kelpRoles)
	o := ask(t, CopiedRows, p)
	expect(t, p, o, Breach, "rows 6 and 22", "6", "22")
	if len(o.Target.Rows) != 1 || o.Target.Rows[0] != 20 {
		t.Errorf("would drop %v, want the later row", o.Target.Rows)
	}
}

func TestCopiesUnderARunningNumber(t *testing.T) {
	s := kelp(40, 5)
	s.rows[20] = s.rows[4]
	s.header = append([]string{"no"}, s.header...)
	for i := range s.rows {
		s.rows[i] = append([]string{fmt.Sprint(i + 1)}, s.rows[i]...)
	}
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, CopiedRows, p), Breach, "rows 6 and 22")
}

// Coarse rounding makes rows alike in sound tables; those are not suspected.
func TestRoundedCoincidencesAreNotSuspected(t *testing.T) {
	alarms := 0
	for seed := range uint64(200) {
		random := rand.New(rand.NewPCG(seed, 9))
		s := &sheet{header: []string{"dose", "growth"}}
		for i := range 60 {
			s.add(i%6, fmt.Sprintf("%.0f", 5+3*random.NormFloat64()))
		}
		p := passOf(t, s, model.Roles{Response: "growth", Predictors: []string{"dose"}})
		if ask(t, CopiedRows, p).Answer == Breach {
			alarms++
		}
	}
	if alarms > 3 { // the limit is 0.2 %: more than 3 of 200 has a chance below 1e-3
		t.Errorf("%d of 200 sound tables with coarse rounding are suspected", alarms)
	}
}
