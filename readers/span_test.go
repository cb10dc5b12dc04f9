package readers

import (
	"strings"
	"testing"
)

func TestSpans(t *testing.T) {
	cases := []struct {
		name, text string
		place      Pos
		want       Span
	}{
		{"a plain field", "site,growth\nn,1.5\ns,-999\n", Pos{Row: 3, Column: 2}, Span{3, 3, 3, 7}},
		{"characters count, not bytes", "site,growth\nn,1.5\nÅsö,-999\n", Pos{Row: 3, Column: 2}, Span{3, 5, 3, 9}},
		{"within quotes", "site,growth\nn,1.5\n\"a, b\",2\n", Pos{Row: 3, Column: 1}, Span{3, 2, 3, 6}},
		{"after a field with a line break", "site,growth\nn,1.5\n\"a\nb\",2.25\nn,3\n", Pos{Row: 3, Column: 2}, Span{4, 4, 4, 8}},
		{"a field with a line break", "site,growth\r\nn,1.5\r\n\"a\r\nbc\",2.25\r\n", Pos{Row: 3, Column: 1}, Span{3, 2, 4, 3}},
		{"semicolons and a mark at the start", "\ufeffsite;growth\nn;1.5\ns;2.5\n", Pos{Row: 1, Column: 2}, Span{1, 6, 1, 12}},
		{"windows-1252", "site,growth\nn,1.5\n\xc5s\xf6,25\n", Pos{Row: 3, Column: 2}, Span{3, 5, 3, 7}},
	}
	for _, c := range cases {
		table, err := Read("t.csv", strings.NewReader(c.text), Options{})
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		absent := Pos{Row: 2, Column: 9}
		got, err := Spans(strings.NewReader(c.text), table, []Pos{c.place, absent})
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if got[c.place] != c.want {
			t.Errorf("%s: %+v, want %+v", c.name, got[c.place], c.want)
		}
		if _, there := got[absent]; there {
			t.Errorf("%s: a field that is not there has a span", c.name)
		}
	}
}
