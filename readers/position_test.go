package readers_test

import (
	"strings"
	"testing"

	"footing/readers"

	"pgregory.net/rapid"
)

func TestPosString(t *testing.T) {
	for _, c := range []struct {
		pos  readers.Pos
		want string
	}{
		{readers.Pos{}, ""},
		{readers.Pos{File: "kelp.csv"}, "kelp.csv"},
		{readers.Pos{File: "kelp.csv", Row: 14}, "kelp.csv:14"},
		{readers.Pos{File: "kelp.csv", Row: 14, Column: 3}, "kelp.csv:14:3"},
		{readers.Pos{File: "kelp.xlsx", Sheet: "Sheet1"}, "kelp.xlsx:Sheet1"},
		{readers.Pos{File: "kelp.xlsx", Sheet: "Sheet1", Row: 14, Column: 3}, "kelp.xlsx:Sheet1!C14"},
		{readers.Pos{File: "kelp.xlsx", Sheet: "Sheet1", Row: 14}, "kelp.xlsx:Sheet1!14"},
		{readers.Pos{File: "kelp.xlsx", Sheet: "Tom's bay", Row: 1, Column: 27}, "kelp.xlsx:'Tom''s bay'!AA1"},
	} {
		if got := c.pos.String(); got != c.want {
			t.Errorf("%#v is %q, want %q", c.pos, got, c.want)
		}
	}
}

func TestLetter(t *testing.T) {
	for index, want := range map[int]string{-1: "", 0: "A", 25: "Z", 26: "AA", 51: "AZ", 52: "BA", 701: "ZZ", 702: "AAA", 16383: "XFD"} {
		if got := readers.Letter(index); got != want {
			t.Errorf("column %d is %q, want %q", index, got, want)
		}
	}
	if got := readers.Address(2, 18); got != "C18" {
		t.Errorf("address is %q, want C18", got)
	}
}

// A mark before each field of a record gives its expected place; the marks are
// taken off before the text is read. ∎ starts a record, § another field of it.
func TestEveryCellKnowsItsPlace(t *testing.T) {
	for name, marked := range map[string]string{
		"plain":              "∎a,§b,§c\n∎x,§1,§2\n∎y,§3,§4\n",
		"no last line end":   "∎a,§b,§c\n∎x,§1,§2\n∎y,§3,§4",
		"blank lines":        "\n\n∎a,§b,§c\n\n∎x,§1,§2\n\n\n∎y,§3,§4\n\n",
		"breaks in quotes":   "∎a,§b,§c\n∎\"x\n1\n2\",§1,§2\n∎y,§3,§4\n∎\"z\r\n\",§5,§6\n∎w,§7,§8\n",
		"CRLF":               "∎a,§b,§c\r\n∎x,§1,§2\r\n∎\"y\r\nz\",§3,§4\r\n∎y,§5,§6\r\n",
		"lone CR":            "∎a,§b,§c\r∎x,§1,§2\r∎\"y\rz\",§3,§4\r∎y,§5,§6\r",
		"mixed ends":         "∎a,§b,§c\r\n∎x,§1,§2\r∎y,§3,§4\n∎z,§5,§6\r\n",
		"comments":           "# one, \"two\n∎a,§b,§c\n#\n∎x,§1,§2\n# three\n∎y,§3,§4\n",
		"title and gap":      "Kelp survey\n\n∎a,§b,§c\n∎x,§1,§2\n∎y,§3,§4\n",
		"sep line":           "sep=;\n∎a;§b;§c\n∎x;§1;§2\n∎y;§3;§4\n",
		"a mark and padding": "\ufeff∎a,§b,§c\n∎ x ,§ 1,§2 \n∎y,§3,§4\n",
		"empty fields":       "∎a,§b,§c\n∎,§1,§2\n∎y,§,§4\n∎z,§4,§\n",
	} {
		t.Run(name, func(t *testing.T) {
			type place struct{ row, column int }
			var want [][]place
			line, column := 1, 0
			var text strings.Builder
			for _, r := range marked {
				switch r {
				case '∎':
					column = 1
					want = append(want, []place{{line, 1}})
				case '§':
					column++
					first := want[len(want)-1][0]
					want[len(want)-1] = append(want[len(want)-1], place{first.row, column})
				default:
					text.WriteRune(r)
				}
				line = 1 + breaks(text.String())
			}
			table := read(t, text.String(), readers.Options{})
			if table.HeaderRow != want[0][0].row {
				t.Errorf("header in row %d, want %d", table.HeaderRow, want[0][0].row)
			}
			if table.Len() != len(want)-1 {
				t.Fatalf("%d records, want %d", table.Len(), len(want)-1)
			}
			for i, record := range want[1:] {
				for k, p := range record {
					c := table.Columns[k]
					pos := table.Pos(c, i)
					if pos.Row != p.row || pos.Column != p.column || pos.File != "kelp.csv" {
						t.Errorf("record %d, field %d is at %v, want %v", i, k, pos, p)
					}
					if got, want := table.Address(c, i), readers.Address(p.column-1, p.row); got != want {
						t.Errorf("record %d, field %d is %s, want %s", i, k, got, want)
					}
				}
				if at, ok := table.Record(record[0].row); !ok || at != i {
					t.Errorf("row %d is record %d (%t), want %d", record[0].row, at, ok, i)
				}
			}
			if _, ok := table.Record(999); ok {
				t.Error("row 999 is a record")
			}
		})
	}
}

// breaks counts line ends of the three kinds.
func breaks(s string) int {
	n := strings.Count(s, "\n")
	for i := range len(s) {
		if s[i] == '\r' && (i+1 == len(s) || s[i+1] != '\n') {
			n++
		}
	}
	// A CR whose LF has not been written yet ends the line already, and only once.
	return n
}

// A column's letter read back by Find is the column, as long as no header has
// that name.
func TestLettersFindColumns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 60).Draw(t, "columns")
		head, row := make([]string, n), make([]string, n)
		for i := range n {
			head[i], row[i] = "name of "+readers.Letter(i), "1"
		}
		table, err := readers.Read("-", strings.NewReader(lines(strings.Join(head, ";"), strings.Join(row, ";"), strings.Join(row, ";"))), readers.Options{})
		if n == 1 {
			return // one column has no delimiter to find
		}
		if err != nil {
			t.Fatal(err)
		}
		i := rapid.IntRange(0, n-1).Draw(t, "column")
		c, err := table.Find(readers.Letter(i))
		if err != nil || c.Index != i {
			t.Fatalf("letter %s finds %v, %v", readers.Letter(i), c, err)
		}
	})
}
