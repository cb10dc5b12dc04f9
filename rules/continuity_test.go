package rules

import (
	"fmt"
	"testing"

	"footing/rules/model"
)

func TestContinuity(t *testing.T) {
	p := passOf(t, kelp(40, 42), kelpRoles)
	expect(t, p, ask(t, Continuity, p), Sound, "growth takes")

	s := kelp(40, 42)
	for i := range s.rows {
		s.rows[i][2] = fmt.Sprint(1 + i*7%5)
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, Continuity, p), Breach, "growth takes 5 values in 40 rows only", "growth")

	s = &sheet{header: []string{"dose", "growth"}}
	for i := range 40 {
		s.add(i%4, fmt.Sprintf("%d.%d", i%7, i*13%97))
	}
	p = passOf(t, s, model.Roles{Response: "growth", Predictors: []string{"dose"}})
	expect(t, p, ask(t, Continuity, p), Sound, "dose takes 4 values, as if it had been set")
}
