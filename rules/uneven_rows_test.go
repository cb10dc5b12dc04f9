package rules

import "testing"

func TestUnevenRows(t *testing.T) {
	p := passOf(t, kelp(40, 37), kelpRoles)
	expect(t, p, ask(t, UnevenRows, p), Sound, "every row")

	s := kelp(40, 37)
	s.rows[7] = append([]string{"exposed, torn"}, s.rows[7][1:]...)
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, UnevenRows, p), Breach, "row 9 has 4 of 3 fields (a delimiter", "9")
	if p.Design.N() != 39 {
		t.Errorf("%d rows used, want 39", p.Design.N())
	}
}

// A row that ends before a column of remarks loses nothing; one that ends
// before the response does.
func TestRowsCutShort(t *testing.T) {
	s := kelp(40, 37)
	s.header = append(s.header, "remark")
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], "fine")
	}
	s.rows[7] = s.rows[7][:3]
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, UnevenRows, p), Sound, "row 9 has 3 of 4 fields", "9")
	s.rows[7] = s.rows[7][:2]
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, UnevenRows, p), Breach, "row 9 has 2 of 4 fields", "9")
}
