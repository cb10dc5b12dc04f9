package readers_test

import (
	"fmt"
	"strconv"
	"strings"
	"testing"

	"footing/readers"
)

// read reads a text under a name that agrees with its bytes.
func read(t *testing.T, text string, opt readers.Options) *readers.Table {
	t.Helper()
	table, err := readers.Read("kelp.csv", strings.NewReader(text), opt)
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// refused gives the refusal of a text, and fails when it is read.
func refused(t *testing.T, name, text string, opt readers.Options) *readers.Error {
	t.Helper()
	table, err := readers.Read(name, strings.NewReader(text), opt)
	if err == nil {
		t.Fatalf("was read:\n%s", show(table))
	}
	e, ok := err.(*readers.Error)
	if !ok {
		t.Fatalf("%T is no *readers.Error: %v", err, err)
	}
	return e
}

// show writes a whole table down, so that a test compares everything it holds: a
// line of columns, a line per record, then what lies beside the table.
func show(t *readers.Table) string {
	var b strings.Builder
	fmt.Fprintf(&b, "header %d:", t.HeaderRow)
	for _, c := range t.Columns {
		fmt.Fprintf(&b, " %s %s", c.Letter(), c.Name)
		if c.Unit != "" {
			fmt.Fprintf(&b, " [%s]", c.Unit)
		}
		fmt.Fprintf(&b, " %s;", c.Kind())
	}
	b.WriteString("\n")
	for i := range t.Len() {
		fmt.Fprintf(&b, "%d:", t.Row(i))
		for _, c := range t.Columns {
			b.WriteString(" " + showCell(c, i))
		}
		if why := t.RowFault(i); why != "" {
			b.WriteString(" -- " + why)
		}
		b.WriteString("\n")
	}
	for _, s := range t.Reading.Titles {
		fmt.Fprintf(&b, "above %d: %s\n", s.Row, s.Kind)
	}
	for _, s := range t.Reading.Stray {
		fmt.Fprintf(&b, "stray %d: %s", s.Row, s.Kind)
		if s.Word != "" {
			b.WriteString(", " + s.Word)
		}
		b.WriteString("\n")
	}
	for _, u := range t.Reading.Uneven {
		fmt.Fprintf(&b, "uneven %d: %d of %d, used %t\n", u.Row, u.Fields, u.Want, u.Kind.Used())
	}
	return b.String()
}

// showCell writes a cell so that its kind shows: 7.25, "text", _ for a blank,
// <NA> for a code, {#N/A} for an error value, @2024-06-04 for a date, =? for a
// formula without a value.
func showCell(c *readers.Column, i int) string {
	cell := c.Cell(i)
	switch cell.Kind {
	case readers.Blank:
		return "_"
	case readers.Number:
		s := strconv.FormatFloat(cell.Number, 'g', -1, 64)
		if cell.Unit != "" {
			s += "'" + cell.Unit
		}
		if cell.TextNumber {
			s += "'text"
		}
		return s
	case readers.Code:
		return "<" + cell.Text + ">"
	case readers.Bool:
		return "?" + cell.Text
	case readers.Date:
		return "@" + cell.Text
	case readers.Fault:
		return "{" + cell.Text + "}"
	case readers.Uncached:
		return "=?"
	}
	return strconv.Quote(cell.Text)
}

// same compares two texts line by line.
func same(t *testing.T, got, want string) {
	t.Helper()
	got, want = strings.TrimSpace(got), strings.TrimSpace(want)
	if got != want {
		t.Errorf("got:\n%s\nwant:\n%s", got, want)
	}
}

// lines joins lines with an end each.
func lines(l ...string) string { return strings.Join(l, "\n") + "\n" }

// hasNote tells whether a note contains a text.
func hasNote(t *readers.Table, part string) bool {
	for _, n := range t.Reading.Notes {
		if strings.Contains(n, part) {
			return true
		}
	}
	return false
}
