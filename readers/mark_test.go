package readers_test

import (
	"fmt"
	"slices"
	"testing"

	"footing/readers"
)

// What is told of a cell without its text agrees with the whole cell.
func TestMarksAgreeWithCells(t *testing.T) {
	text := read(t, lines("s,x", "a,7.50", `b,"1,042.5"`, "c, 3", "d,-99", "e,1e3", "f,NA", "g,", "h,torn", "i,0.30000000000000004"), readers.Options{Missing: []string{"-99"}})
	units := read(t, lines("s,x", "a,7.50 mm", "b,3 mm", "c,4"), readers.Options{})
	sheet := readBook(t, newBook("Kelp", `<worksheet `+mainSpace+`><sheetData>`+sheetRow(1, "s", "x")+sheetRow(2, "a", "=1.25")+sheetRow(3, "", "2")+
		`<row r="4"><c r="A4" t="inlineStr"><is><t>b</t></is></c><c r="B4" t="inlineStr"><is><t>7.5</t></is></c></row>`+
		`<row r="5"><c r="B5"><f>A1</f></c></row>`+`</sheetData><mergeCells><mergeCell ref="A2:A3"/></mergeCells></worksheet>`).pack(), readers.Options{})
	var all readers.Mark
	for _, table := range []*readers.Table{text, units, sheet} {
		for _, c := range table.Columns {
			var marked readers.Mark
			for i := range c.Len() {
				cell, m := c.Cell(i), c.Marks(i)
				marked |= m
				for _, f := range []struct {
					mark readers.Mark
					want bool
				}{
					{readers.TextNumber, cell.TextNumber},
					{readers.Thousands, cell.Thousands},
					{readers.Padded, cell.Padded},
					{readers.Formula, cell.Formula},
					{readers.Filled, cell.Filled},
					{readers.WithUnit, cell.Unit != ""},
					{readers.Declared, cell.Declared},
				} {
					if (m&f.mark != 0) != f.want {
						t.Errorf("%s has the mark %b: %t, its cell %+v", table.Address(c, i), f.mark, !f.want, cell)
					}
				}
				if d := c.Decimals(i); d != cell.Decimals || (d < 0) != (cell.Kind != readers.Number && !cell.Declared || cell.Text == "1e3") {
					t.Errorf("%s has %d decimals, its cell %+v", table.Address(c, i), d, cell)
				}
			}
			if c.Marked() != marked {
				t.Errorf("column %s is marked %b, its cells %b", c.Letter(), c.Marked(), marked)
			}
			all |= marked
		}
	}
	if all != 1<<7-1 {
		t.Errorf("the cells have the marks %b, not all seven", all)
	}
}

func TestKeysTellCellsApart(t *testing.T) {
	table := read(t, lines("s,x", "a,1", "b,1.0", "a,1e0", "c,NA", "c,nd", "d,", "e,0", "f,-0", "g,1 mm", "h,NA", "i,", "j,2024-06-04", "k,2", "l,3"), readers.Options{})
	for _, c := range table.Columns {
		for i := range c.Len() {
			for k := range c.Len() {
				a, b := c.Cell(i), c.Cell(k)
				same := a.Kind == b.Kind && (a.Kind == readers.Number && a.Number == b.Number || a.Kind != readers.Number && a.Text == b.Text)
				if (c.Key(i) == c.Key(k)) != same {
					t.Errorf("%s %q and %s %q have the keys %x and %x", table.Address(c, i), a.Text, table.Address(c, k), b.Text, c.Key(i), c.Key(k))
				}
			}
		}
	}
}

func TestAppendNumbers(t *testing.T) {
	table := read(t, lines("s,x", "a,1", "b,NA", "c,torn", "d,4,5", "e,6", "f,7"), readers.Options{})
	got := table.Columns[1].AppendNumbers([]float64{9})
	if want := []float64{9, 1, 6, 7}; !slices.Equal(got, want) {
		t.Errorf("got %v, want %v", got, want)
	}
	if got := fmt.Sprint(table.Columns[0].AppendNumbers(nil)); got != "[]" {
		t.Errorf("a column of texts gives %s", got)
	}
}
