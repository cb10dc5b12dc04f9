package rules

import (
	"bytes"
	"testing"

	"github.com/xuri/excelize/v2"

	"footing/readers"
	"footing/rules/model"
)

// bookOf writes a sheet into a workbook, lets change mark it, and fits the
// model of the roles.
func bookOf(t *testing.T, s *sheet, roles model.Roles, change func(f *excelize.File, sheet string)) *Pass {
	t.Helper()
	f := excelize.NewFile()
	const name = "Sheet1"
	for k, row := range append([][]string{s.header}, s.rows...) {
		for c, text := range row {
			cell, _ := excelize.CoordinatesToCellName(c+1, k+1)
			var value any = text
			if v, ok := readers.ParseNumber(text, '.'); ok {
				value = v
			}
			if err := f.SetCellValue(name, cell, value); err != nil {
				t.Fatal(err)
			}
		}
	}
	change(f, name)
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	table, err := readers.Read("table.xlsx", &b, readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	p := passOn(t, table, roles)
	return p
}

func TestHiddenCells(t *testing.T) {
	p := bookOf(t, kelp(40, 39), kelpRoles, func(*excelize.File, string) {})
	expect(t, p, ask(t, HiddenCells, p), Sound, "nothing that is used")

	p = bookOf(t, kelp(40, 39), kelpRoles, func(f *excelize.File, sheet string) {
		for _, row := range []int{30, 31, 32, 33} {
			if err := f.SetRowVisible(sheet, row, false); err != nil {
				t.Fatal(err)
			}
		}
	})
	o := ask(t, HiddenCells, p)
	expect(t, p, o, Breach, "4 rows are hidden: 30 to 33; all of it is used", "30", "31", "32", "33")
	if len(o.Target.Rows) != 4 || p.Design.N() != 40 {
		t.Errorf("trial without %v of %d rows", o.Target.Rows, p.Design.N())
	}
}

func TestStruckThrough(t *testing.T) {
	p := bookOf(t, kelp(40, 39), kelpRoles, func(f *excelize.File, sheet string) {
		style, err := f.NewStyle(&excelize.Style{Font: &excelize.Font{Strike: true}})
		if err != nil {
			t.Fatal(err)
		}
		if err := f.SetCellStyle(sheet, "C7", "C7", style); err != nil {
			t.Fatal(err)
		}
	})
	expect(t, p, ask(t, HiddenCells, p), Breach, "1 cell is struck through: C7", "C7")
}

func TestColours(t *testing.T) {
	paint := func(rows func(i int) bool) func(*excelize.File, string) {
		return func(f *excelize.File, sheet string) {
			style, err := f.NewStyle(&excelize.Style{Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"FFCC00"}}})
			if err != nil {
				t.Fatal(err)
			}
			for i := range 40 {
				if !rows(i) {
					continue
				}
				from, _ := excelize.CoordinatesToCellName(1, i+2)
				to, _ := excelize.CoordinatesToCellName(3, i+2)
				if err := f.SetCellStyle(sheet, from, to, style); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
	blocks := kelp(40, 39) // two rows of each site in turn
	for i := range blocks.rows {
		blocks.rows[i][0] = []string{"exposed", "sheltered"}[i/3%2]
	}
	cases := []struct {
		name   string
		rows   func(i int) bool
		answer Answer
		words  string
	}{
		{"a stretch", func(i int) bool { return i >= 5 && i < 15 }, Breach, "which no column says"},
		{"one row alone", func(i int) bool { return i == 7 }, Sound, "nothing that is used"},
		{"the groups", func(i int) bool { return blocks.rows[i][0] == "exposed" }, Sound, "as site says too"},
		{"bands", func(i int) bool { return i%2 == 0 }, Sound, "in turn"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p := bookOf(t, blocks, kelpRoles, paint(c.rows))
			expect(t, p, ask(t, HiddenCells, p), c.answer, c.words)
		})
	}
}

// A number held as text among true numbers is used; the cell is told.
func TestTextNumbersInAWorkbook(t *testing.T) {
	p := bookOf(t, kelp(40, 39), kelpRoles, func(f *excelize.File, sheet string) {
		if err := f.SetCellStr(sheet, "C9", "4.25"); err != nil {
			t.Fatal(err)
		}
	})
	expect(t, p, ask(t, NumberFormat, p), Sound, "1 number is held as text", "C9")
	if p.Design.N() != 40 {
		t.Errorf("%d rows used, want 40", p.Design.N())
	}
}
