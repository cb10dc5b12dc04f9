package report

import (
	"archive/zip"
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"footing/readers"
)

func markedOf(t *testing.T, a audited) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := Marked(&b, a.result, a.table, a.input); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func opened(t *testing.T, raw []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f
}

// bookWithTrouble is the demo as a workbook with more in it: a sheet before the
// table and one called Findings, formulas, formats, a note, a print area.
func bookWithTrouble(t *testing.T) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	must := func(err error) {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
	}
	must(f.SetSheetName("Sheet1", "Findings"))
	must(f.SetCellStr("Findings", "A1", "what the diver found"))
	must(f.SetCellFormula("Findings", "B1", "=SUM('my data'!E2:E4)"))
	_, err := f.NewSheet("my data")
	must(err)
	input, err := os.ReadFile("../../testdata/demo/kelp.csv")
	must(err)
	format := `0.000" mm"`
	style, err := f.NewStyle(&excelize.Style{CustomNumFmt: &format, Font: &excelize.Font{Bold: true, Color: "0000FF"}, Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"EEEEEE"}}})
	must(err)
	table, err := readers.Read("kelp.csv", bytes.NewReader(input), readers.Options{})
	must(err)
	for _, col := range table.Columns {
		must(f.SetCellStr("my data", readers.Address(col.Index, 1), col.Header))
		for i := range table.Len() {
			if v, ok := col.Number(i); ok {
				must(f.SetCellFloat("my data", table.Address(col, i), v, -1, 64))
			} else {
				must(f.SetCellStr("my data", table.Address(col, i), col.Cell(i).Text))
			}
		}
	}
	must(f.SetCellStyle("my data", "E30", "E30", style))
	must(f.AddComment("my data", excelize.Comment{Cell: "E30", Author: "diver", Paragraph: []excelize.RichTextRun{{Text: "lost the ruler"}}}))
	must(f.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Area", RefersTo: "'my data'!$A$1:$E$61", Scope: "my data"}))
	f.SetActiveSheet(1)
	var b bytes.Buffer
	must(f.Write(&b))
	return b.Bytes()
}

func fillOf(t *testing.T, f *excelize.File, sheet, cell string) (excelize.Fill, *excelize.Style) {
	t.Helper()
	id, err := f.GetCellStyle(sheet, cell)
	if err != nil {
		t.Fatal(err)
	}
	s, err := f.GetStyle(id)
	if err != nil {
		t.Fatal(err)
	}
	return s.Fill, s
}

func noteOn(t *testing.T, f *excelize.File, sheet, cell string) string {
	t.Helper()
	all, err := f.GetComments(sheet)
	if err != nil {
		t.Fatal(err)
	}
	text := ""
	for _, c := range all {
		if c.Cell != cell {
			continue
		}
		if text != "" {
			t.Errorf("%s has two notes", cell)
		}
		text = c.Text
		for _, run := range c.Paragraph {
			text += run.Text
		}
	}
	return text
}

func isFilled(fill excelize.Fill, name string) bool {
	want := fills[name]
	return fill.Pattern == want.Pattern && len(fill.Color) == 1 && strings.HasSuffix(fill.Color[0], want.Color[0])
}

// TestMarkedText makes a workbook of a text file and reads it back.
func TestMarkedText(t *testing.T) {
	a := demo(t, "kelp.csv")
	f := opened(t, markedOf(t, a))
	if got := f.GetSheetList(); !slices.Equal(got, []string{"Findings", "kelp"}) {
		t.Fatalf("sheets %q", got)
	}
	table, err := readers.Read("m.xlsx", bytes.NewReader(markedOf(t, a)), readers.Options{Sheet: "kelp"})
	if err != nil {
		t.Fatal(err)
	}
	for k, col := range a.table.Columns {
		for i := range a.table.Len() {
			was, _ := col.Label(i)
			is, _ := table.Columns[k].Label(i)
			if was != is || a.table.Address(col, i) != table.Address(table.Columns[k], i) {
				t.Errorf("%s: %q became %q at %s", a.table.Address(col, i), was, is, table.Address(table.Columns[k], i))
			}
		}
	}
	if fill, _ := fillOf(t, f, "kelp", "E30"); !isFilled(fill, "stop") {
		t.Errorf("E30 has fill %+v", fill)
	}
	if fill, _ := fillOf(t, f, "kelp", "D30"); fill.Pattern != 0 {
		t.Errorf("D30, which nothing names, has fill %+v", fill)
	}
	if fill, _ := fillOf(t, f, "kelp", "B17"); !isFilled(fill, "hatched") {
		t.Errorf("the row set aside has fill %+v", fill)
	}
	note := noteOn(t, f, "kelp", "E30")
	for _, part := range []string{"STOP missing-codes: growth is -999", "To do: Run again with --missing -999", "STOP outliers"} {
		if !strings.Contains(note, part) {
			t.Errorf("the note lacks %q: %s", part, note)
		}
	}
	if note := noteOn(t, f, "kelp", "E17"); note != "SET ASIDE: growth is missing." {
		t.Errorf("the row set aside has the note %q", note)
	}
	if f.GetActiveSheetIndex() != 0 {
		t.Error("the findings are not in front")
	}
	if !linksTo(t, f, "Findings", "'kelp'!E30") {
		t.Error("no link jumps to E30")
	}
}

func linksTo(t *testing.T, f *excelize.File, sheet, target string) bool {
	t.Helper()
	for row := 1; row < 80; row++ {
		for col := range 6 {
			found, link, err := f.GetCellHyperLink(sheet, readers.Address(col, row))
			if err != nil {
				t.Fatal(err)
			}
			if found && link == target {
				return true
			}
		}
	}
	return false
}

// TestMarkedCopy keeps what a workbook holds.
func TestMarkedCopy(t *testing.T) {
	input := bookWithTrouble(t)
	before := bytes.Clone(input)
	a := auditOf(t, "book.xlsx", input, kelpRoles)
	f := opened(t, markedOf(t, a))
	if !bytes.Equal(before, input) {
		t.Error("the input was changed")
	}
	if got := f.GetSheetList(); !slices.Equal(got, []string{"Findings 2", "Findings", "my data"}) {
		t.Fatalf("sheets %q", got)
	}
	if formula, _ := f.GetCellFormula("Findings", "B1"); !strings.Contains(formula, "SUM('my data'!E2:E4)") {
		t.Errorf("the formula became %q", formula)
	}
	fill, style := fillOf(t, f, "my data", "E30")
	if !isFilled(fill, "stop") {
		t.Errorf("E30 has fill %+v", fill)
	}
	if style.CustomNumFmt == nil || *style.CustomNumFmt != `0.000" mm"` || style.Font == nil || !style.Font.Bold {
		t.Errorf("E30 lost its format: %+v", style)
	}
	note := noteOn(t, f, "my data", "E30")
	if !strings.HasPrefix(note, "lost the ruler") || !strings.Contains(note, "STOP missing-codes") {
		t.Errorf("note %q", note)
	}
	scope := ""
	for _, name := range f.GetDefinedName() {
		if strings.EqualFold(name.Name, "_xlnm.Print_Area") {
			scope = name.Scope
		}
	}
	if scope != "my data" {
		t.Errorf("the print area belongs to %q", scope)
	}
	if !linksTo(t, f, "Findings 2", "'my data'!E30") {
		t.Error("no link jumps to E30")
	}
	if count := strings.Count(string(sheetXML(t, markedOf(t, a))), `tabSelected="`); count > 1 {
		t.Errorf("%d sheets are selected: typing would go to each", count)
	}
}

// sheetXML is the text of all sheets.
func sheetXML(t *testing.T, raw []byte) []byte {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	if err != nil {
		t.Fatal(err)
	}
	var all bytes.Buffer
	for _, part := range archive.File {
		if !strings.HasPrefix(part.Name, "xl/worksheets/sheet") {
			continue
		}
		r, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		if _, err := all.ReadFrom(r); err != nil {
			t.Fatal(err)
		}
		r.Close()
	}
	return all.Bytes()
}

// TestMarkedHasNoFormulas finds no formula in what was made from text, and no
// text that would become one when it is typed again.
func TestMarkedHasNoFormulas(t *testing.T) {
	raw := markedOf(t, hostileTable(t))
	if text := sheetXML(t, raw); bytes.Contains(text, []byte("<f>")) || bytes.Contains(text, []byte("<f ")) {
		t.Error("a cell holds a formula")
	}
	f := opened(t, raw)
	seen := false
	for _, sheet := range f.GetSheetList() {
		rows, err := f.GetRows(sheet, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		for i, row := range rows {
			for k, text := range row {
				seen = seen || text == "'=1+1"
				if text != "" && strings.ContainsRune("=+-@\t\r", rune(text[0])) && text != "-999" {
					t.Errorf("%s %s holds %q", sheet, readers.Address(k, i+1), text)
				}
				if acting.MatchString(text) {
					t.Errorf("%s %s holds %q", sheet, readers.Address(k, i+1), text)
				}
			}
		}
	}
	if !seen {
		t.Error("the field =1+1 is not there")
	}
}

func TestMarkedHere(t *testing.T) {
	raw := markedOf(t, demo(t, "kelp.csv"))
	is := func(raw []byte) bool {
		archive, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
		if err != nil {
			t.Fatal(err)
		}
		return MarkedHere(archive)
	}
	if !is(raw) {
		t.Error("a marked workbook is not recognised")
	}
	if is(bookWithTrouble(t)) {
		t.Error("another workbook is taken for a marked one")
	}
}

func TestMarkedRefusesOtherBytes(t *testing.T) {
	a := demo(t, "kelp.csv")
	if err := Marked(&bytes.Buffer{}, a.result, a.table, append(a.input, '\n')); err == nil {
		t.Error("bytes that were not audited are marked")
	}
}

func TestSheetName(t *testing.T) {
	cases := map[string]string{
		"a/kelp.csv": "kelp", "-": "Table", "findings.csv": "Table", "a[1]:b?.csv": "a_1__b_", strings.Repeat("ä", 40) + ".csv": strings.Repeat("ä", 31), ".csv": ".csv",
	}
	for file, want := range cases {
		if got := sheetName(file); got != want {
			t.Errorf("%s: %q, want %q", file, got, want)
		}
	}
}

// TestMarkedOpensElsewhere lets another program read both kinds of workbook and
// looks for the findings in what it makes of them.
func TestMarkedOpensElsewhere(t *testing.T) {
	office, err := exec.LookPath("soffice")
	if err != nil {
		t.Skip("soffice (LibreOffice) is not installed: nothing else here opens workbooks")
	}
	if testing.Short() {
		t.Skip("converting takes seconds")
	}
	dir := t.TempDir()
	for name, a := range map[string]audited{
		"text": demo(t, "kelp.csv"), "copy": auditOf(t, "book.xlsx", bookWithTrouble(t), kelpRoles), "hostile": hostileTable(t),
	} {
		path := filepath.Join(dir, name+".xlsx")
		if err := os.WriteFile(path, markedOf(t, a), 0o600); err != nil {
			t.Fatal(err)
		}
		// A profile of its own: two runs may not share one.
		command := exec.Command(office, "-env:UserInstallation=file://"+filepath.Join(dir, "profile"), "--headless", "--convert-to", "csv", "--outdir", dir, path)
		if out, err := command.CombinedOutput(); err != nil {
			t.Fatalf("%v: %s", err, out)
		}
		text, err := os.ReadFile(filepath.Join(dir, name+".csv"))
		if err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{"footing: " + grade(a.result), "missing-codes"} {
			if !strings.Contains(string(text), want) {
				t.Errorf("%s: %q is missing from the first sheet as converted", name, want)
			}
		}
	}
}
