package rules

import "testing"

func TestSpreadsheetErrors(t *testing.T) {
	p := passOf(t, kelp(40, 33), kelpRoles)
	expect(t, p, ask(t, SpreadsheetErrors, p), Sound, "no cell")

	s := kelp(40, 33)
	s.rows[3][2], s.rows[5][1], s.rows[9][0], s.rows[12][2] = "#NUM!", "#N/A", "#REF!", "#####"
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, SpreadsheetErrors, p), Breach, "C5 #NUM!", "A11", "B7", "C5", "C14")
	expect(t, p, ask(t, MixedContent, p), Sound, "every cell")
	if p.Design.N() != 36 {
		t.Errorf("%d rows used, want 36", p.Design.N())
	}
}

// An error in a column that nobody uses is told, and no alarm.
func TestErrorsElsewhereAreTold(t *testing.T) {
	s := kelp(40, 33)
	s.header = append(s.header, "depth")
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], "3.2")
	}
	s.rows[7][3] = "#DIV/0!"
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, SpreadsheetErrors, p), Sound, "not used: D9 #DIV/0!", "D9")
}
