package rules

import "testing"

func TestCensoredValues(t *testing.T) {
	s := kelp(40, 32)
	s.rows[3][2], s.rows[6][2], s.rows[8][2], s.rows[11][2] = "<0.2", "> 60", "below LOD", "≤ 3"
	s.rows[20][2] = "nd"
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, CensoredValues, p), Breach, `"<0.2"`, "C5", "C8", "C10", "C13", "C22")
	expect(t, p, ask(t, MissingCodes, p), Sound, "no code")
	expect(t, p, ask(t, MixedContent, p), Sound, "every cell")
	if p.Design.N() != 35 {
		t.Errorf("%d rows used, want 35", p.Design.N())
	}
}

func TestAloneNotDetectedIsACode(t *testing.T) {
	s := kelp(40, 32)
	s.rows[20][2], s.rows[21][2] = "nd", "lost"
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, CensoredValues, p), Sound, "no value")
	expect(t, p, ask(t, MissingCodes, p), Breach, "below a limit", "C22")
	expect(t, p, ask(t, MixedContent, p), Breach, "lost", "C23")
}

func TestLimitIn(t *testing.T) {
	cases := []struct {
		text, side string
		ok         bool
	}{
		{"<0.2", "below", true},
		{"> 60", "above", true},
		{"≥60 mm", "above", true},
		{"below LOD", "below", true},
		{"<LOD", "below", true},
		{"BDL", "below", true},
		{"less than 0.5", "below", true},
		{"overgrown", "", false},
		{"over", "above", false},
		{"<", "below", false},
		{"warm", "", false},
		{"trough", "", false},
	}
	for _, c := range cases {
		side, ok := limitIn(c.text)
		if ok != c.ok || ok && side != c.side {
			t.Errorf("%q: %q %v, want %q %v", c.text, side, ok, c.side, c.ok)
		}
	}
}
