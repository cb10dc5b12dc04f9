package rules

import "testing"

func TestInfluence(t *testing.T) {
	s := drawn(40, 21, func(_ int, z float64) float64 { return z })
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Influence, p), Sound, "no row pulls")

	s.rows[17][1], s.rows[17][2] = "24", "5"
	p = passOf(t, s, plainRoles)
	expect(t, p, ask(t, Influence, p), Breach, "row 19 moves the slope", "C19")
}
