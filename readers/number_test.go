package readers_test

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"footing/readers"

	"pgregory.net/rapid"
)

func TestParseNumber(t *testing.T) {
	for _, c := range []struct {
		text    string
		decimal byte
		want    float64
		ok      bool
	}{
		{"7", '.', 7, true},
		{"7.25", '.', 7.25, true},
		{"-7.25", '.', -7.25, true},
		{"+7.25", '.', 7.25, true},
		{"\u22127.25", '.', -7.25, true},
		{"7,25", ',', 7.25, true},
		{"7,25", '.', 0, false},
		{"7.25", ',', 0, false},
		{".5", '.', 0.5, true},
		{"5.", '.', 5, true},
		{".", '.', 0, false},
		{"-", '.', 0, false},
		{"", '.', 0, false},
		{"+-5", '.', 0, false},
		{"- 5", '.', 0, false},
		{"5-", '.', 0, false},
		{"(5)", '.', 0, false},
		{"1e3", '.', 1000, true},
		{"1E-3", '.', 0.001, true},
		{"1.5e+03", '.', 1500, true},
		{"1,5e3", ',', 1500, true},
		{"1e\u22123", '.', 0.001, true},
		{"1e", '.', 0, false},
		{"e5", '.', 0, false},
		{"1e5.5", '.', 0, false},
		// Signs between thousands: groups of three after the first.
		{"1,042.7", '.', 1042.7, true},
		{"1.042,7", ',', 1042.7, true},
		{"1,042,700", '.', 1042700, true},
		{"1 042 700", '.', 1042700, true},
		{"1\u00a0042,5", ',', 1042.5, true},
		{"1\u202f042", '.', 1042, true},
		{"1'042.5", '.', 1042.5, true},
		{"1\u2019042", '.', 1042, true},
		{"12,34", '.', 0, false},
		{"1234,567", '.', 0, false},
		{"1,04", '.', 0, false},
		{"0,125", '.', 0, false}, // a zero starts no group
		{"1,042 700", '.', 0, false},
		{"1,,042", '.', 0, false},
		{"1 ", '.', 0, false},
		{"2,517e3", '.', 0, false},
		{",042", '.', 0, false},
		// What other grammars take.
		{"0x1F", '.', 0, false},
		{"0x1p-2", '.', 0, false},
		{"1_000", '.', 0, false},
		{"1d5", '.', 0, false},
		{"Inf", '.', 0, false},
		{"-inf", '.', 0, false},
		{"Infinity", '.', 0, false},
		{"NaN", '.', 0, false},
		{"٣", '.', 0, false},
		{"７", '.', 0, false},
		{"1.2.3", '.', 0, false},
		{"12:30", '.', 0, false},
		// The edges of the doubles.
		{"1.7976931348623157e308", '.', math.MaxFloat64, true},
		{"1.8e308", '.', 0, false},
		{"5e-324", '.', 5e-324, true},
		{"1e-400", '.', 0, false},
		{"0e-400", '.', 0, true},
		{"0.1", '.', 0.1, true},
		{"123456789012345678", '.', 123456789012345678, true},
		{"0.30000000000000004", '.', 0.30000000000000004, true},
		{"9007199254740993", '.', 9007199254740992, true}, // half way, to even
	} {
		got, ok := readers.ParseNumber(c.text, c.decimal)
		if ok != c.ok || ok && got != c.want {
			t.Errorf("%q with %q: %v, %t; want %v, %t", c.text, c.decimal, got, ok, c.want, c.ok)
		}
	}
}

func TestParseMeasure(t *testing.T) {
	for _, c := range []struct {
		text, unit string
		want       float64
		ok         bool
	}{
		{"4.1 °C", "°C", 4.1, true},
		{"35%", "%", 35, true},
		{"-2.5 mm/d", "mm/d", -2.5, true},
		{"1e5 m", "m", 1e5, true},
		{"5 e", "e", 5, true},
		{"1,042 kg", "kg", 1042, true},
		{"14.6 C", "C", 14.6, true},
		{"7", "", 0, false},
		{"kg", "", 0, false},
		{"7 or 8", "", 0, false},
		{"7 mg L-1", "mg L-1", 7, true},
		{"7 blades", "blades", 7, true},
		{"<6", "", 0, false},
		{"7-8", "", 0, false},
		{"12:30", "", 0, false},
		{"3 blades, one torn off", "", 0, false},
	} {
		got, unit, ok := readers.ParseMeasure(c.text, '.')
		if ok != c.ok || ok && (got != c.want || unit != c.unit) {
			t.Errorf("%q: %v %q, %t; want %v %q, %t", c.text, got, unit, ok, c.want, c.unit, c.ok)
		}
	}
}

// The fast path for plain numbers and strconv must agree to the last bit, and the
// text of a plain number must come back from the value and the decimals alone.
func TestPlainNumbersComeBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		whole := rapid.Uint64Range(0, 999_999_999).Draw(t, "whole")
		decimals := rapid.IntRange(0, 6).Draw(t, "decimals")
		text := strconv.FormatUint(whole, 10)
		if decimals > 0 {
			digits := strconv.FormatUint(rapid.Uint64Range(0, 999_999).Draw(t, "fraction"), 10)
			for len(digits) < decimals {
				digits = "0" + digits
			}
			text += "." + digits[:decimals]
		}
		if rapid.Bool().Draw(t, "negative") {
			text = "-" + text
		}
		table, err := readers.Read("-", strings.NewReader("a,b\nx,"+text+"\ny,7.25\n"), readers.Options{})
		if err != nil {
			t.Fatal(err)
		}
		want, _ := strconv.ParseFloat(text, 64)
		cell := table.Columns[1].Cell(0)
		if cell.Kind != readers.Number || cell.Number != want || cell.Text != text || cell.Decimals != decimals {
			t.Fatalf("%q came as %+v", text, cell)
		}
	})
}
