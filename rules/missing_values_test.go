package rules

import "testing"

func TestMissingValues(t *testing.T) {
	s := kelp(40, 1)
	s.rows[4][2] = ""
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, MissingValues, p), Sound, "1 cell is empty", "C6")

	s.rows[7][1], s.rows[9][0] = "", ""
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, MissingValues, p), Breach, "in 7.5% of the rows", "A11", "B9", "C6")

	p = passOf(t, kelp(40, 1), kelpRoles)
	expect(t, p, ask(t, MissingValues, p), Sound, "no cell")
}

func TestMissingValuesOffersToFillBlocks(t *testing.T) {
	s := kelp(40, 1)
	for i := range s.rows {
		if i%4 != 0 {
			s.rows[i][0] = ""
		}
	}
	p := passOf(t, s, kelpRoles)
	if o := ask(t, MissingValues, p); o.Advice == "" || o.Answer != Breach {
		t.Errorf("no offer to fill the blocks: %+v", o)
	}
}
