package rules

import "testing"

func TestGroupBalance(t *testing.T) {
	p := passOf(t, kelp(40, 15), kelpRoles)
	expect(t, p, ask(t, GroupBalance, p), Sound, "exposed 20 and sheltered 20")

	s := kelp(40, 15)
	for i := range s.rows {
		if i > 5 {
			s.rows[i][0] = "exposed"
		}
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, GroupBalance, p), CannotTell, "sheltered has 3 rows")

	p = passOf(t, drawn(20, 15, func(_ int, z float64) float64 { return z }), plainRoles)
	expect(t, p, ask(t, GroupBalance, p), NotAsked, "one group")
}
