package rules

import "testing"

func TestMixedContent(t *testing.T) {
	p := passOf(t, kelp(40, 3), kelpRoles)
	expect(t, p, ask(t, MixedContent, p), Sound, "every cell")

	s := kelp(40, 3)
	s.rows[10][2], s.rows[2][1] = "1I.4", "warm"
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, MixedContent, p), Breach, `B4 "warm" and C12 "1I.4" (11.4?)`, "B4", "C12")
	if p.Design.N() != 38 || len(p.Design.SetAside) != 2 {
		t.Errorf("%d rows used, %d set aside, want 38 and 2", p.Design.N(), len(p.Design.SetAside))
	}
}
