package rules

import (
	"fmt"
	"strconv"
	"testing"
)

// scaled multiplies cells of a column.
func scaled(s *sheet, column int, f func(float64) float64, rows ...int) {
	for _, i := range rows {
		v, _ := strconv.ParseFloat(s.rows[i][column], 64)
		s.rows[i][column] = fmt.Sprintf("%.3f", f(v))
	}
}

func TestUnitShift(t *testing.T) {
	p := passOf(t, kelp(40, 49), kelpRoles)
	expect(t, p, ask(t, UnitShift, p), Sound, "no stretch")

	stretch := []int{10, 11, 12, 13, 14, 15, 16}
	cases := []struct {
		name   string
		column int
		f      func(float64) float64
		words  string
	}{
		{"mm for cm", 2, func(v float64) float64 { return 10 * v }, "growth is 10 times too large"},
		{"a thousand", 2, func(v float64) float64 { return 1000 * v }, "growth is 1000 times too large"},
		{"Fahrenheit", 1, func(v float64) float64 { return v*9/5 + 32 }, "temperature is in °F"},
		{"inches", 2, func(v float64) float64 { return 2.54 * v }, "growth is 2.54 times too large"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := kelp(40, 49)
			scaled(s, c.column, c.f, stretch...)
			p := passOf(t, s, kelpRoles)
			o := ask(t, UnitShift, p)
			if c.name == "inches" {
				expect(t, p, o, Breach, c.words)
				return
			}
			letter := string(rune('A' + c.column))
			expect(t, p, o, Breach, c.words, letter+"12", letter+"13", letter+"14", letter+"15", letter+"16", letter+"17", letter+"18")
			if len(o.Target.Values) != 7 || len(o.Target.Rows) != 7 {
				t.Errorf("would change %v, or leave out %v", o.Target.Values, o.Target.Rows)
			}
		})
	}
}

// The rows of one observer, scattered over the file, in another unit.
func TestUnitOfOneLabel(t *testing.T) {
	s := kelp(40, 49)
	s.header = append(s.header, "observer")
	var rows []int
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], []string{"ka", "lo", "mi"}[i%3])
		if i%3 == 1 {
			rows = append(rows, i)
		}
	}
	scaled(s, 2, func(v float64) float64 { return 10 * v }, rows...)
	p := passOf(t, s, kelpRoles)
	o := ask(t, UnitShift, p)
	expect(t, p, o, Breach, "the 13 rows of observer lo")
	if len(o.Where) != 13 {
		t.Errorf("points at %d cells, want 13", len(o.Where))
	}
}
