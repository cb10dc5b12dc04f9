package rules

import "testing"

func TestLeverage(t *testing.T) {
	s := drawn(40, 12, func(_ int, z float64) float64 { return z })
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Leverage, p), Sound, "no row carries half a slope")

	s.rows[17][1] = "60"
	p = passOf(t, s, plainRoles)
	expect(t, p, ask(t, Leverage, p), CannotTell, "row 19 alone carries", "C19")

	for i := range s.rows {
		s.rows[i][1] = "5"
	}
	s.rows[17][1] = "9"
	p = passOf(t, s, plainRoles)
	o := ask(t, Leverage, p)
	expect(t, p, o, Breach, "row 19 alone decides the slope", "C19")
	if len(o.Limits) != 1 || o.Limits[0].Of == nil {
		t.Errorf("the slope is not limited: %+v", o.Limits)
	}
}
