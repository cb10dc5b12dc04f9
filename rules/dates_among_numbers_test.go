package rules

import "testing"

func TestDatesAmongNumbers(t *testing.T) {
	p := passOf(t, kelp(40, 34), kelpRoles)
	expect(t, p, ask(t, DatesAmongNumbers, p), Sound, "no number")

	s := kelp(40, 34)
	s.rows[3][2], s.rows[6][2], s.rows[8][1] = "2024-06-04", "4. Jun", "6/4"
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, DatesAmongNumbers, p), Breach, "4 June: 4.6 or 6.4?", "B10", "C5", "C8")
	expect(t, p, ask(t, MixedContent, p), Sound, "every cell")
	if p.Design.N() != 37 {
		t.Errorf("%d rows used, want 37", p.Design.N())
	}
}

// A date that lost its format is a number that reads well: it stays in use, and
// the trial leaves it out.
func TestSerialsAreGuessed(t *testing.T) {
	s := kelp(40, 34)
	s.rows[3][2] = "45447"
	p := passOf(t, s, kelpRoles)
	o := ask(t, DatesAmongNumbers, p)
	expect(t, p, o, Breach, "day number of 4 June 2024?", "C5")
	if p.Design.N() != 40 || len(o.Target.Rows) != 1 || o.Target.Rows[0] != 3 {
		t.Errorf("%d rows used, trial without %v", p.Design.N(), o.Target.Rows)
	}
	s = kelp(40, 34)
	for i := range s.rows {
		s.rows[i][2] += "e4" // tens of thousands are what this column holds
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, DatesAmongNumbers, p), Sound, "no number")
}
