package wording

import (
	"math"
	"testing"
)

func TestFigures(t *testing.T) {
	cases := []struct{ name, got, want string }{
		{"two digits of a small number", Figure(0.0012345, 2), "0.0012"},
		{"rounding carries into the next place", Figure(9.96, 2), "10"},
		{"a negative number keeps its sign", Figure(-0.4157, 3), "-0.416"},
		{"a tiny number has an exponent", Figure(1.234e-9, 2), "1.2e-09"},
		{"what is not defined says so", Figure(math.NaN(), 3), "undefined"},
		{"zeros at the end go", Number(12.500), "12.5"},
		{"a round number stays whole", Number(-999), "-999"},
		{"decimals follow the standard error", To(-0.41571, Places(0.0623)), "-0.416"},
		{"a large standard error rounds to tens", To(12345, Places(240)), "12350"},
		{"a rounded zero has no sign", To(-0.0004, 2), "0.00"},
		{"an ordinary p", P(0.1734), "p = 0.17"},
		{"a small p has four decimals", P(0.00123), "p = 0.0012"},
		{"a tiny p is a bound", P(3e-7), "p < 0.0001"},
		{"few percent have a decimal", Percent(0.0512), "5.1%"},
		{"many percent have none", Percent(0.512), "51%"},
		{"one is singular", Count(1, "row"), "1 row"},
		{"none is plural", Count(0, "row"), "0 rows"},
		{"three in a list", List([]string{"a", "b", "c"}), "a, b and c"},
		{"a long list is cut and counted", Some([]string{"a", "b", "c", "d"}, 2), "a, b and 2 more"},
		{"a sentence has a capital and a stop", Sentence("nothing found"), "Nothing found."},
	}
	for _, c := range cases {
		if c.got != c.want {
			t.Errorf("%s: got %q, want %q", c.name, c.got, c.want)
		}
	}
}
