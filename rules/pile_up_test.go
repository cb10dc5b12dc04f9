package rules

import (
	"strconv"
	"testing"
)

func TestPileUp(t *testing.T) {
	p := passOf(t, kelp(60, 44), kelpRoles)
	expect(t, p, ask(t, PileUp, p), Sound, "no more ties")

	s := kelp(60, 44)
	var cells []string
	for i := range s.rows {
		if v, _ := strconv.ParseFloat(s.rows[i][2], 64); v > 6 {
			s.rows[i][2] = "6.000"
			cells = append(cells, "C"+strconv.Itoa(i+2))
		}
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, PileUp, p), Breach, "of growth are 6, its greatest value", cells...)

	s = kelp(60, 44)
	for i := range s.rows {
		if v, _ := strconv.ParseFloat(s.rows[i][1], 64); v < 9.5 {
			s.rows[i][1] = "9.50"
		}
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, PileUp, p), Breach, "of temperature are 9.5, its least value")
}

// The levels of a predictor that was set tie at both ends.
func TestSetLevelsDoNotPileUp(t *testing.T) {
	s := kelp(60, 44)
	for i := range s.rows {
		s.rows[i][1] = strconv.Itoa(8 + 2*(i%6))
	}
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, PileUp, p), Sound, "no more ties")
}
