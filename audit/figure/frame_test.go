package figure

import (
	"slices"
	"testing"
)

func TestNiceTicks(t *testing.T) {
	cases := []struct {
		name string
		span span
		n    int
		want []string
	}{
		{"tens", span{0, 42}, 5, []string{"0", "10", "20", "30", "40"}},
		{"halves around zero", span{-1.1, 1.2}, 5, []string{"-1.0", "-0.5", "0", "0.5", "1.0"}},
		{"far from zero", span{1000.02, 1000.11}, 5, []string{"1000.02", "1000.04", "1000.06", "1000.08", "1000.10"}},
		{"steps of two", span{3, 13}, 5, []string{"4", "6", "8", "10", "12"}},
		{"a single value", span{7, 7}, 5, []string{"7.00"}},
	}
	for _, c := range cases {
		ticks, decimals := nice(c.span, c.n)
		if got := tickWords(ticks, decimals); !slices.Equal(got, c.want) {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func TestWordsAreInert(t *testing.T) {
	cases := []struct{ in, want string }{
		{`<b a="1">&`, `&lt;b a=&#34;1&#34;&gt;&amp;`},
		{"a\u202eb\nc", `a\u202eb\u000ac`},
		{"\xff", `\xff`},
	}
	for _, c := range cases {
		if got := words(c.in); got != c.want {
			t.Errorf("words(%q) is %q, want %q", c.in, got, c.want)
		}
	}
}

func TestShortCountsWideLetters(t *testing.T) {
	cases := []struct {
		in   string
		n    int
		want string
	}{
		{"sheltered", 9, "sheltered"},
		{"sheltered", 6, "shelt…"},
		{"藻場藻場", 8, "藻場藻場"},
		{"藻場藻場", 6, "藻場…"},
	}
	for _, c := range cases {
		if got := short(c.in, c.n); got != c.want {
			t.Errorf("short(%q, %d) is %q, want %q", c.in, c.n, got, c.want)
		}
	}
}

// TestLabelsKeepApart fills a small frame with labels and looks for two that
// overlap, or one outside.
func TestLabelsKeepApart(t *testing.T) {
	var c canvas
	f := frame{box: box{left: 40, top: 20, right: 240, bottom: 120}}
	written := 0
	for k := range 60 {
		if c.labelAt(f, 45+float64(k*37%190), 25+float64(k*23%90), "", "row 123") {
			written++
		}
	}
	if written < 5 || written == 60 || written != len(c.placed) {
		t.Fatalf("%d labels are written and %d places taken", written, len(c.placed))
	}
	for i, a := range c.placed {
		for _, b := range c.placed[:i] {
			if a.meets(b) {
				t.Errorf("labels overlap: %v and %v", a, b)
			}
		}
	}
}
