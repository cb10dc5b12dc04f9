package rules

import "testing"

func TestNumberFormat(t *testing.T) {
	p := passOf(t, kelp(40, 31), kelpRoles)
	expect(t, p, ask(t, NumberFormat, p), Sound, "every number")

	s := kelp(40, 31)
	s.rows[3][2], s.rows[6][1], s.rows[8][2], s.rows[9][1] = `"6,4"`, "1e999", "Inf", "1_0.5"
	p = passOf(t, s, kelpRoles)
	o := ask(t, NumberFormat, p)
	expect(t, p, o, Breach, `C5 "6,4" (a decimal comma?)`, "B8", "B11", "C5", "C10")
	expect(t, p, o, Breach, "infinite")
	expect(t, p, ask(t, MixedContent, p), Sound, "every cell")
	if p.Design.N() != 36 {
		t.Errorf("%d rows used, want 36", p.Design.N())
	}
}
