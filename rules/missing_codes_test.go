package rules

import (
	"slices"
	"testing"
)

func TestMissingCodes(t *testing.T) {
	cases := []struct {
		name   string
		change func(*sheet)
		answer Answer
		words  string
		cells  []string
	}{
		{"nothing", func(*sheet) {}, Sound, "no code", nil},
		{"one -999", func(s *sheet) { s.rows[3][2] = "-999" }, Breach, "growth is -999 at C5", []string{"C5"}},
		{"9999 in the predictor", func(s *sheet) { s.rows[3][1] = "9999" }, Breach, "temperature is 9999 at B5", []string{"B5"}},
		{"a zero twice where none belongs", func(s *sheet) { s.rows[3][1], s.rows[8][1] = "0", "0" }, Breach, "temperature is 0", []string{"B5", "B10"}},
		{"9.9 among its like", func(s *sheet) { s.rows[3][2] = "9.9" }, Sound, "no code", nil},
		{"one wild value that is no code", func(s *sheet) { s.rows[3][2] = "87.3" }, Sound, "no code", nil},
		{"a text code alone", func(s *sheet) { s.rows[3][2] = "NA" }, Sound, `taken as missing: "na" (1)`, nil},
		{"two text codes", func(s *sheet) { s.rows[3][2], s.rows[5][2] = "NA", "null" }, Breach, "two codes", []string{"C5", "C7"}},
		{"a dash", func(s *sheet) { s.rows[3][2] = "-" }, Breach, "may also mean zero", []string{"C5"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := kelp(40, 2)
			c.change(s)
			p := passOf(t, s, kelpRoles)
			expect(t, p, ask(t, MissingCodes, p), c.answer, c.words, c.cells...)
		})
	}
}

func TestDeclaredCodeIsNotSuspected(t *testing.T) {
	s := kelp(40, 2)
	s.rows[3][2] = "-999"
	p := passOf(t, s, kelpRoles, "-999")
	expect(t, p, ask(t, MissingCodes, p), Sound, "taken as missing")
	if slices.Contains(p.Design.Rows, 3) {
		t.Error("the row with the declared code is used")
	}
}
