package rules

import "testing"

func TestConstantColumn(t *testing.T) {
	p := passOf(t, kelp(20, 6), kelpRoles)
	expect(t, p, ask(t, ConstantColumn, p), Sound, "more than one value")

	s := kelp(20, 6)
	for i := range s.rows {
		s.rows[i][1] = "12"
	}
	p = passOf(t, s, kelpRoles)
	o := ask(t, ConstantColumn, p)
	expect(t, p, o, Breach, "temperature is 12 in every row", "temperature")
	if len(o.Denies) == 0 {
		t.Error("no answer is denied")
	}

	s = kelp(20, 6)
	for i := range s.rows {
		s.rows[i][0] = "exposed"
	}
	p = passOf(t, s, kelpRoles)
	o = ask(t, ConstantColumn, p)
	expect(t, p, o, Breach, "site is exposed in every row", "site")
	if len(o.Denies) != 1 || !o.Denies[0].Difference {
		t.Errorf("denies %v, want the difference alone", o.Denies)
	}
}
