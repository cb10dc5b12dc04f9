package readers_test

import (
	"fmt"
	"strings"
	"testing"

	"footing/readers"
)

// Eight files with one trouble each, as people bring them, made here.

// A Windows-1252 export of a spreadsheet program that writes decimal commas, with a
// title: nothing to doubt, everything told.
func TestLatinTitle(t *testing.T) {
	rows := strings.ReplaceAll(strings.ReplaceAll(lines(fronds(1, 20)...), ",", ";"), ".", ",")
	text := "Kelp survey, second round\n\nfrond;site;temperature (\xb0C);growth (mm/d)\n" + rows
	table := read(t, text, readers.Options{})
	if table.HeaderRow != 3 || table.Len() != 20 || table.Row(0) != 4 {
		t.Errorf("header %d, %d records from row %d", table.HeaderRow, table.Len(), table.Row(0))
	}
	temperature, growth := table.Columns[2], table.Columns[3]
	if temperature.Name != "temperature" || temperature.Unit != "°C" || growth.Name != "growth" || growth.Unit != "mm/d" {
		t.Errorf("columns %q [%s] and %q [%s]", temperature.Name, temperature.Unit, growth.Name, growth.Unit)
	}
	if v, ok := temperature.Number(0); !ok || v != 8.62 {
		t.Errorf("the first temperature is %v (%t), want 8.62", v, ok)
	}
	if got := temperature.Cell(0).Text; got != "8,62" {
		t.Errorf("its text is %q, want 8,62", got)
	}
	if n := growth.Count(readers.Number); n != 20 {
		t.Errorf("%d of 20 growths are numbers", n)
	}
}

// Codes, a value below a limit and a unit stand in single cells, and stay there.
func TestCodesStayInTheirCells(t *testing.T) {
	rows := fronds(1, 20)
	replace := func(i int, value string) { rows[i] = rows[i][:strings.LastIndex(rows[i], ",")+1] + value }
	replace(4, "-99")
	replace(9, "missing")
	replace(14, "<6")
	rows[17] = "F18,sheltered,14.6 C,5"
	table := read(t, lines(append([]string{frondNames}, rows...)...), readers.Options{})
	for address, want := range map[string]readers.CellKind{"D6": readers.Number, "D11": readers.Code, "D16": readers.Text, "C19": readers.Text} {
		found := false
		for _, c := range table.Columns {
			for i := range table.Len() {
				if table.Address(c, i) == address {
					found = true
					if got := c.CellKind(i); got != want {
						t.Errorf("%s is a %s, want %s", address, got, want)
					}
				}
			}
		}
		if !found {
			t.Errorf("no cell is %s", address)
		}
	}
	if k := table.Columns[3].Kind(); k != readers.NumberColumn {
		t.Errorf("growth is %s", k)
	}
}

// Two files pasted together, with an average and a note: none is a measurement.
func TestPastedFiles(t *testing.T) {
	table := read(t, survey(frondNames, 20, frondNames, 20, "average,,12.00,7.681", ",,,", "thermometer no. 4,,,"), readers.Options{})
	if table.Len() != 40 {
		t.Errorf("%d records, want 40", table.Len())
	}
	if got := kinds(table.Reading.Stray); got != "22 header again, 43 summary, 45 note" {
		t.Errorf("stray %s", got)
	}
}

// A table from B4 under a merged title, with a number stored as text, an error value
// and hidden rows.
func TestWorkbookWithTroubles(t *testing.T) {
	var rows strings.Builder
	rows.WriteString(sheetRow(2, "", "Kelp growth") + sheetRow(4, "", "frond", "site", "temperature", "growth"))
	for i := range 20 {
		n := i + 5
		r := sheetRow(n, "", fmt.Sprintf("F%02d", i), [...]string{"exposed", "sheltered"}[i%2], fmt.Sprint(7+i), fmt.Sprint(3.5+float64(i)/4))
		switch n {
		case 9:
			r = strings.Replace(r, `<c r="E9"><v>4.5</v></c>`, `<c r="E9" t="inlineStr"><is><t>4.500</t></is></c>`, 1)
		case 12:
			r = strings.Replace(r, `<c r="E12"><v>5.25</v></c>`, `<c r="E12" t="e"><v>#VALUE!</v></c>`, 1)
		case 20, 21:
			r = strings.Replace(r, "<row ", `<row hidden="1" `, 1)
		}
		rows.WriteString(r)
	}
	packed := newBook("Kelp", `<worksheet `+mainSpace+`><dimension ref="A1:B2"/><sheetData>`+rows.String()+`</sheetData><mergeCells><mergeCell ref="B2:E2"/></mergeCells></worksheet>`).pack()
	table := readBook(t, packed, readers.Options{})
	growth := table.Columns[3]
	if table.HeaderRow != 4 || table.Len() != 20 || growth.Letter() != "E" {
		t.Fatalf("got:\n%s", show(table))
	}
	text, fault := growth.Cell(4), growth.Cell(7)
	if v, ok := growth.Number(4); !ok || v != 4.5 || !text.TextNumber || text.Text != "4.500" {
		t.Errorf("E9 is %+v", text)
	}
	if fault.Kind != readers.Fault || fault.Text != "#VALUE!" {
		t.Errorf("E12 is %+v", fault)
	}
	var hidden []int
	for _, i := range table.Reading.Hidden.Records {
		hidden = append(hidden, table.Row(i))
	}
	if fmt.Sprint(hidden) != "[20 21]" {
		t.Errorf("hidden rows %v", hidden)
	}
}

// Formulas whose values were never stored are named and have no value.
func TestFormulasWithoutValues(t *testing.T) {
	var rows strings.Builder
	rows.WriteString(sheetRow(1, "site", "x"))
	for i := 2; i <= 9; i++ {
		rows.WriteString(sheetRow(i, "a", fmt.Sprint(i)))
	}
	rows.WriteString(`<row r="10"><c r="A10" t="inlineStr"><is><t>a</t></is></c><c r="B10"><f>B9/2</f><v/></c></row>`)
	table := readBook(t, sheetBook(rows.String()), readers.Options{})
	x := table.Columns[1]
	if x.CellKind(8) != readers.Uncached || x.Kind() != readers.NumberColumn {
		t.Errorf("B10 is a %s in a column of %s", x.CellKind(8), x.Kind())
	}
	if _, ok := x.Number(8); ok {
		t.Error("B10 has a value")
	}
	// Nothing but formulas without values is a column of numbers all the same.
	table = readBook(t, sheetBook(sheetRow(1, "site", "x")+`<row r="2"><c r="A2" t="inlineStr"><is><t>a</t></is></c><c r="B2"><f>1</f></c></row>`+
		`<row r="3"><c r="A3" t="inlineStr"><is><t>b</t></is></c><c r="B3"><f>2</f></c></row>`), readers.Options{})
	if k := table.Columns[1].Kind(); k != readers.NumberColumn {
		t.Errorf("the column is %s", k)
	}
}

// An unquoted comma moves the numbers of its row one field on.
func TestLooseComma(t *testing.T) {
	rows := []string{"frond,site,remark,temperature,growth"}
	for i := range 20 {
		rows = append(rows, fmt.Sprintf("F%02d,exposed,,%d.5,%d.25", i, 7+i, 3+i%4))
	}
	rows[11] = strings.Replace(rows[11], ",,", ",torn, regrown,", 1)
	table := read(t, lines(rows...), readers.Options{})
	if u := table.Reading.Uneven; len(u) != 1 || u[0].Row != 12 || u[0].Fields != 6 || u[0].Kind != readers.TooMany {
		t.Errorf("uneven %+v", u)
	}
	if _, ok := table.Columns[4].Number(10); ok {
		t.Error("the row that moved gives a number")
	}
}

// A zip archive that is sound around a sheet that is cut off.
func TestCutSheet(t *testing.T) {
	var rows strings.Builder
	rows.WriteString(sheetRow(1, "site", "x"))
	for i := 2; i <= 41; i++ {
		rows.WriteString(sheetRow(i, "a", fmt.Sprint(i)))
	}
	sheet := worksheet(rows.String())
	got := refused(t, "kelp.xlsx", newBook("Kelp", sheet[:strings.Index(sheet, `<row r="30"`)+15]).pack(), readers.Options{}).Error()
	if want := "kelp.xlsx:Kelp: xl/worksheets/sheet1.xml is cut off in row 30: save the workbook again, or take an older copy"; got != want {
		t.Errorf("got:\n%s\nwant:\n%s", got, want)
	}
}

// A mark, CRLF, and labels that differ by a Cyrillic letter or by case are kept as
// they are: to judge them is not the reader's business.
func TestVariantsAreKept(t *testing.T) {
	text := "\ufeff" + strings.ReplaceAll(lines(frondNames, "F01,Exp\u043esed,15.26,6.855", "F02,SHELTERED,14.68,6.105", "F03,sheltered,15.3,6.446", "F04,exposed,16.5,6.0"), "\n", "\r\n")
	names, codes := read(t, text, readers.Options{}).Columns[1].Levels()
	if fmt.Sprintf("%q %v", names, codes) != `["Exp`+"\u043e"+`sed" "SHELTERED" "sheltered" "exposed"] [0 1 2 3]` {
		t.Errorf("levels %q %v", names, codes)
	}
}
