package rules

import "testing"

func TestStrayRows(t *testing.T) {
	p := passOf(t, kelp(40, 38), kelpRoles)
	expect(t, p, ask(t, StrayRows, p), Sound, "every row")

	s := kelp(40, 38)
	s.rows[20] = s.header
	s.rows = append(s.rows, []string{"average", "14.00", "4.400"}, []string{"", "", ""}, []string{"thermometer no. 4", "", ""})
	p = passOf(t, s, kelpRoles)
	o := ask(t, StrayRows, p)
	expect(t, p, o, o.Answer, "row 22 (header again)", "22", "42", "44")
	if p.Design.N() != 39 || p.Table.Len() != 39 {
		t.Errorf("%d of %d rows used, want 39 of 39", p.Design.N(), p.Table.Len())
	}
}

// Rows under a header in another order are lost, and that is more than a note.
func TestRowsUnderAnotherHeaderAreDoubted(t *testing.T) {
	s := kelp(40, 38)
	s.rows = append(s.rows, []string{"growth (mm/day)", "site", "temperature (°C)"}, []string{"5.2", "exposed", "12.4"})
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, StrayRows, p), Breach, "perhaps measurements", "42", "43")
}
