package rules

import (
	"fmt"
	"testing"

	"footing/rules/model"
)

func TestRepeatedRun(t *testing.T) {
	p := passOf(t, kelp(60, 46), kelpRoles)
	expect(t, p, ask(t, RepeatedRun, p), Sound, "no run")

	s := kelp(60, 46)
	for k := range 4 {
		s.rows[38+k][2] = s.rows[8+k][2]
	}
	p = passOf(t, s, kelpRoles)
	o := ask(t, RepeatedRun, p)
	expect(t, p, o, Breach, "C10:C13 = C40:C43", "C10", "C11", "C12", "C13", "C40", "C41", "C42", "C43")
	if len(o.Target.Rows) != 4 || o.Target.Rows[0] != 38 {
		t.Errorf("trial without %v, want the later run", o.Target.Rows)
	}
}

// A predictor measured once on each of 20 plots that serve two treatments
// stands twice by design; whole numbers repeat by chance.
func TestRunsByDesignOrChance(t *testing.T) {
	s := &sheet{header: []string{"depth", "growth"}}
	for i := range 40 {
		s.add(fmt.Sprintf("%.2f", 3+float64(i%20*i%20*7%13)+float64(i%20)/50), fmt.Sprintf("%.2f", float64(i*i*31%977)/100))
	}
	p := passOf(t, s, model.Roles{Response: "growth", Predictors: []string{"depth"}})
	expect(t, p, ask(t, RepeatedRun, p), Sound, "no run")
}
