package readers

import (
	"fmt"
	"slices"
	"strings"

	"golang.org/x/text/unicode/norm"
)

// Find gives the column that a user means: by its full header, or by its name
// without the unit, or by its letter when no header is called so. A name that two
// columns bear is refused with both letters, an unknown one with the nearest
// names; both refusals are *Error.
func (t *Table) Find(name string) (*Column, error) {
	want := canonical(name)
	for _, part := range [...]func(*Column) string{
		func(c *Column) string { return c.Header },
		func(c *Column) string { return c.Name },
	} {
		var found []*Column
		for _, c := range t.Columns {
			if have := part(c); have != "" && canonical(have) == want {
				found = append(found, c)
			}
		}
		switch len(found) {
		case 0:
		case 1:
			return found[0], nil
		default:
			return nil, t.ambiguous(name, found)
		}
	}
	if i, ok := columnIndex(want); ok {
		for _, c := range t.Columns {
			if c.Index == i {
				return c, nil
			}
		}
	}
	return nil, t.unknown(name)
}

// canonical makes two ways to type the same letters equal.
func canonical(s string) string { return norm.NFC.String(oneLine(trimPadding(s))) }

// oneLine writes line breaks and what surrounds them as single spaces.
func oneLine(s string) string {
	if !strings.ContainsAny(s, "\r\n\t") {
		return s
	}
	return strings.Join(strings.Fields(s), " ")
}

func (t *Table) ambiguous(name string, found []*Column) error {
	letters := make([]string, len(found))
	for i, c := range found {
		letters[i] = c.Letter()
	}
	return refuse(Pos{File: t.File, Sheet: t.Sheet, Row: t.HeaderRow},
		"%q is the name of columns %s: rename one in the file, or give the full header",
		name, list(letters, "and"))
}

func (t *Table) unknown(name string) error {
	// Columns whose names are alike are told by their full headers.
	headers := map[string][]string{}
	var plain []string
	for _, c := range t.Columns {
		if c.Header == "" || slices.Contains(headers[c.Name], c.Header) {
			continue
		}
		if headers[c.Name] == nil {
			plain = append(plain, c.Name)
		}
		headers[c.Name] = append(headers[c.Name], c.Header)
	}
	full := func(names []string) (out []string) {
		for _, n := range names {
			if h := headers[n]; len(h) == 1 {
				out = append(out, n)
			} else {
				out = append(out, h...)
			}
		}
		return out
	}
	names := full(plain)
	msg := fmt.Sprintf("there is no column %q", name)
	near := full(Nearest(name, plain))
	switch {
	case len(names) == 0:
		letters := make([]string, 0, len(t.Columns))
		for _, c := range t.Columns {
			letters = append(letters, c.Letter())
		}
		msg += "; the columns have no names, give a letter: " + list(short(letters), "or")
	case len(t.Columns) <= 12:
		msg += "; the columns are " + list(quoted(names), "and")
		if len(near) > 0 {
			msg += ": did you mean " + list(quoted(near), "or") + "?"
		}
	case len(near) > 0:
		msg += "; the nearest of " + count(len(t.Columns)) + " are " + list(quoted(near), "and")
	default:
		msg += "; there are " + count(len(t.Columns)) + " columns, from " + list(quoted([]string{names[0], names[len(names)-1]}), "to")
	}
	return refuse(Pos{File: t.File, Sheet: t.Sheet, Row: t.HeaderRow}, "%s", msg)
}

// short keeps the first dozen of a long list.
func short(s []string) []string {
	if len(s) > 12 {
		return append(s[:11:11], "...", s[len(s)-1])
	}
	return s
}

func quoted(s []string) []string {
	out := make([]string, len(s))
	for i, v := range s {
		out[i] = fmt.Sprintf("%q", v)
	}
	return out
}

// list joins words as a sentence does: a, b and c.
func list(s []string, last string) string {
	switch len(s) {
	case 0:
		return ""
	case 1:
		return s[0]
	}
	return strings.Join(s[:len(s)-1], ", ") + " " + last + " " + s[len(s)-1]
}
