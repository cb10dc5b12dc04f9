package rules

import (
	"testing"

	"footing/rules/model"
)

func TestSampleSize(t *testing.T) {
	p := passOf(t, kelp(40, 7), kelpRoles)
	expect(t, p, ask(t, SampleSize, p), Sound, "40 rows used, 36 beyond")

	p = passOf(t, kelp(8, 7), kelpRoles)
	expect(t, p, ask(t, SampleSize, p), CannotTell, "only 4 rows beyond")

	p = passOf(t, kelp(3, 7), kelpRoles)
	o := ask(t, SampleSize, p)
	expect(t, p, o, Breach, "sheltered has a single row")
}

func TestSampleSizeOfDegenerateTables(t *testing.T) {
	line := model.Roles{Response: "y", Predictors: []string{"x"}}
	grouped := model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"}
	cases := []struct {
		name  string
		rows  [][3]any // g, x, y
		roles model.Roles
		words string
	}{
		{"two rows", [][3]any{{"a", 1, 2}, {"a", 2, 5}}, line, "leave nothing to estimate the scatter from"},
		{"one row", [][3]any{{"a", 1, 2}}, line, "a single row"},
		{"a perfect line", [][3]any{{"a", 1, 2}, {"a", 2, 4}, {"a", 3, 6}, {"a", 4, 8}}, line, "pass through every row"},
		{"one x in a group", [][3]any{{"a", 1, 2}, {"a", 2, 4.1}, {"a", 3, 6.3}, {"a", 4, 7.5}, {"b", 5, 8}, {"b", 5, 9}}, grouped, "in b all 2 rows have the same x, 5"},
		{"a group of two rows", [][3]any{{"a", 1, 2}, {"a", 2, 4.1}, {"a", 3, 6.3}, {"a", 4, 7.5}, {"b", 5, 8}, {"b", 6, 9}}, grouped, "b has 2 rows, which fix its line"},
		{"a group without scatter", [][3]any{{"a", 1, 2}, {"a", 2, 4.1}, {"a", 3, 6.3}, {"b", 4, 7}, {"b", 5, 8}, {"b", 6, 9}}, grouped, "b has no scatter at all"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := &sheet{header: []string{"g", "x", "y"}}
			for _, r := range c.rows {
				s.add(r[0], r[1], r[2])
			}
			p := passOf(t, s, c.roles)
			o := ask(t, SampleSize, p)
			expect(t, p, o, Breach, c.words)
			if len(o.Denies) == 0 {
				t.Error("no answer is denied")
			}
		})
	}
}
