package readers_test

import (
	"archive/zip"
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"footing/readers"

	"github.com/xuri/excelize/v2"
)

func itoa(n int) string { return strconv.Itoa(n) }

// zipOf packs parts, given as names and contents in turn.
func zipOf(parts ...string) string {
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	for i := 0; i < len(parts); i += 2 {
		w, err := z.Create(parts[i])
		if err != nil {
			panic(err)
		}
		if _, err := w.Write([]byte(parts[i+1])); err != nil {
			panic(err)
		}
	}
	if err := z.Close(); err != nil {
		panic(err)
	}
	return b.String()
}

const (
	mainSpace   = `xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"`
	officeSpace = `xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships"`
	relSpace    = `xmlns="http://schemas.openxmlformats.org/package/2006/relationships"`
	relType     = "http://schemas.openxmlformats.org/officeDocument/2006/relationships/"
)

// bookParts are the parts of a workbook by name, in a fixed order.
type bookParts struct {
	names []string
	part  map[string]string
}

func (b *bookParts) set(name, content string) {
	if _, ok := b.part[name]; !ok {
		b.names = append(b.names, name)
	}
	b.part[name] = content
}

func (b *bookParts) pack() string {
	var all []string
	for _, n := range b.names {
		all = append(all, n, b.part[n])
	}
	return zipOf(all...)
}

// newBook makes a workbook of sheets, given as names and XML of the rows in turn;
// a name that starts with - is hidden. XML that starts with <worksheet is the whole
// part.
func newBook(sheets ...string) *bookParts {
	b := &bookParts{part: map[string]string{}}
	b.set("_rels/.rels", `<Relationships `+relSpace+`><Relationship Id="r1" Type="`+relType+`officeDocument" Target="xl/workbook.xml"/></Relationships>`)
	var list, rels strings.Builder
	for i := 0; i < len(sheets); i += 2 {
		n := i/2 + 1
		name, hidden := strings.CutPrefix(sheets[i], "-")
		state := ""
		if hidden {
			state = ` state="hidden"`
		}
		fmt.Fprintf(&list, `<sheet name=%q sheetId="%d"%s r:id="rId%d"/>`, name, n, state, n)
		fmt.Fprintf(&rels, `<Relationship Id="rId%d" Type="%sworksheet" Target="worksheets/sheet%d.xml"/>`, n, relType, n)
		body := sheets[i+1]
		if !strings.HasPrefix(body, "<worksheet") {
			body = worksheet(body)
		}
		b.set(fmt.Sprintf("xl/worksheets/sheet%d.xml", n), body)
	}
	b.set("xl/workbook.xml", `<workbook `+mainSpace+` `+officeSpace+`><sheets>`+list.String()+`</sheets></workbook>`)
	b.set("xl/_rels/workbook.xml.rels", `<Relationships `+relSpace+`>`+rels.String()+`</Relationships>`)
	return b
}

// relate adds a relation to the workbook.
func (b *bookParts) relate(id, kind, target string) {
	const end = `</Relationships>`
	rels := strings.TrimSuffix(b.part["xl/_rels/workbook.xml.rels"], end)
	b.set("xl/_rels/workbook.xml.rels", rels+fmt.Sprintf(`<Relationship Id=%q Type="%s%s" Target=%q/>`, id, relType, kind, target)+end)
}

func worksheet(rows string) string {
	return `<worksheet ` + mainSpace + `><sheetData>` + rows + `</sheetData></worksheet>`
}

// sheetBook packs a workbook of one sheet.
func sheetBook(rows string) string { return newBook("Kelp", rows).pack() }

// sheetRow writes a row of cells: a number as one, @2 as an index of a shared text,
// =x as a formula with the value x, !x as an error value, ?1 as a truth value,
// anything else as a text of its own; "" leaves a cell out.
func sheetRow(row int, cells ...string) string {
	var b strings.Builder
	fmt.Fprintf(&b, `<row r="%d">`, row)
	for i, c := range cells {
		at := readers.Address(i, row)
		if c == "" {
			continue
		}
		switch c[0] {
		case '@':
			fmt.Fprintf(&b, `<c r="%s" t="s"><v>%s</v></c>`, at, c[1:])
		case '=':
			fmt.Fprintf(&b, `<c r="%s"><f>A1</f><v>%s</v></c>`, at, c[1:])
		case '!':
			fmt.Fprintf(&b, `<c r="%s" t="e"><v>%s</v></c>`, at, c[1:])
		case '?':
			fmt.Fprintf(&b, `<c r="%s" t="b"><v>%s</v></c>`, at, c[1:])
		default:
			if _, err := strconv.ParseFloat(c, 64); err == nil {
				fmt.Fprintf(&b, `<c r="%s"><v>%s</v></c>`, at, c)
			} else {
				fmt.Fprintf(&b, `<c r="%s" t="inlineStr"><is><t>%s</t></is></c>`, at, c)
			}
		}
	}
	b.WriteString("</row>")
	return b.String()
}

// readBook reads a packed workbook.
func readBook(t *testing.T, packed string, opt readers.Options) *readers.Table {
	t.Helper()
	table, err := readers.Read("kelp.xlsx", strings.NewReader(packed), opt)
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// kelpRows is a small sound table from A1.
func kelpRows() string {
	return sheetRow(1, "site", "x") + sheetRow(2, "a", "1") + sheetRow(3, "b", "2.5") + sheetRow(4, "a", "4")
}

func TestSheetTables(t *testing.T) {
	for _, c := range []struct {
		name, rows, want string
		opt              readers.Options
	}{
		{name: "a plain table", rows: kelpRows(), want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" 2.5`, `4: "a" 4`)},
		{
			name: "away from the corner, under a title",
			rows: sheetRow(2, "", "Kelp survey") + sheetRow(4, "", "site", "x (mm)") + sheetRow(5, "", "a", "1") + sheetRow(6, "", "b", "2"),
			want: lines("header 4: B site text; C x [mm] number;", `5: "a" 1`, `6: "b" 2`, "above 2: title"),
		},
		{
			name: "cells and rows without addresses",
			rows: `<row><c t="inlineStr"><is><t>site</t></is></c><c t="inlineStr"><is><t>x</t></is></c></row><row r="3"><c t="inlineStr"><is><t>a</t></is></c><c><v>1</v></c></row><row><c r="B4"><v>2</v></c></row>`,
			want: lines("header 1: A site text; B x number;", `3: "a" 1`, `4: _ 2`),
		},
		{
			name: "kinds of values",
			rows: sheetRow(1, "site", "x") + sheetRow(2, "a", "1") + sheetRow(3, "b", "=2.5") + sheetRow(4, "c", "!#DIV/0!") + sheetRow(5, "d", "?1") +
				`<row r="6"><c r="A6" t="inlineStr"><is><t>e</t></is></c><c r="B6"><f>A1/3</f></c></row>` +
				`<row r="7"><c r="A7" t="inlineStr"><is><t>f</t></is></c><c r="B7"><f>A1/3</f><v></v></c></row>` +
				`<row r="8"><c r="A8" t="inlineStr"><is><t>g</t></is></c><c r="B8" t="str"><f>A1</f><v></v></c></row>` +
				`<row r="9"><c r="A9" t="inlineStr"><is><t>h</t></is></c><c r="B9" t="str"><f>A1</f><v>torn</v></c></row>` +
				`<row r="10"><c r="A10" t="inlineStr"><is><t>i</t></is></c><c r="B10" t="d"><v>2024-06-04T00:00:00</v></c></row>` +
				`<row r="11"><c r="A11" t="inlineStr"><is><t>j</t></is></c><c r="B11" t="inlineStr"><is><t> 7.5 </t></is></c></row>` +
				sheetRow(12, "k", "NA") + sheetRow(13, "l", "1e-400") + sheetRow(14, "m", "8.970000000000001") + sheetRow(15, "n", "5") + sheetRow(16, "o", "6"),
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" 2.5`, `4: "c" {#DIV/0!}`, `5: "d" ?TRUE`, `6: "e" =?`, `7: "f" =?`, `8: "g" _`,
				`9: "h" "torn"`, `10: "i" @2024-06-04`, `11: "j" 7.5'text`, `12: "k" <NA>`, `13: "l" "1e-400"`, `14: "m" 8.97`, `15: "n" 5`, `16: "o" 6`),
		},
		{
			name: "all numbers stored as text",
			rows: sheetRow(1, "site", "x") + `<row r="2"><c t="inlineStr"><is><t>a</t></is></c><c t="inlineStr"><is><t>1.5</t></is></c></row>` +
				`<row r="3"><c t="inlineStr"><is><t>b</t></is></c><c t="inlineStr"><is><t>2</t></is></c></row>`,
			want: lines("header 1: A site text; B x number;", `2: "a" 1.5'text`, `3: "b" 2'text`),
		},
		{
			name: "rich text, phonetics and escapes",
			rows: sheetRow(1, "site", "x") + `<row r="2"><c t="inlineStr"><is><r><t>ex</t></r><r><rPr/><t xml:space="preserve">posed </t></r><rPh sb="0" eb="1"><t>IGNORE</t></rPh></is></c><c><v>1</v></c></row>` +
				`<row r="3"><c t="inlineStr"><is><t>a_x0041_b_x001B_c_x005F_x0041_&amp;<![CDATA[<d>]]></t></is></c><c><v>2</v></c></row>`,
			want: lines("header 1: A site text; B x number;", `2: "exposed" 1`, `3: "aAb\x1bc_x0041_&<d>" 2`),
		},
		{
			name: "prefixed elements and a comment",
			rows: `<worksheet>`,
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" 2`),
		},
		{
			name: "a range", opt: readers.Options{Range: "B2:C4"},
			rows: sheetRow(1, "p", "q", "r") + sheetRow(2, "1", "site", "x") + sheetRow(3, "2", "a", "1") + sheetRow(4, "3", "b", "2") + sheetRow(5, "4", "c", "3"),
			want: lines("header 2: B site text; C x number;", `3: "a" 1`, `4: "b" 2`),
		},
	} {
		t.Run(c.name, func(t *testing.T) {
			rows := c.rows
			if rows == `<worksheet>` {
				rows = `<worksheet xmlns:x="http://schemas.openxmlformats.org/spreadsheetml/2006/main"><!-- > --><x:sheetData>` +
					`<x:row r="1"><x:c r="A1" t="inlineStr"><x:is><x:t>site</x:t></x:is></x:c><x:c r="B1" t="inlineStr"><x:is><x:t>x</x:t></x:is></x:c></x:row>` +
					`<x:row r="2"><x:c r="A2" t="inlineStr"><x:is><x:t>a</x:t></x:is></x:c><x:c r="B2"><x:v>1</x:v></x:c></x:row>` +
					`<x:row r="3"><x:c r="A3" t="inlineStr"><x:is><x:t>b</x:t></x:is></x:c><x:c r="B3"><x:v>2</x:v></x:c></x:row></x:sheetData></worksheet>`
				rows = strings.Replace(strings.Replace(rows, "<worksheet xmlns", "<worksheet  xmlns", 1), "</worksheet>", "</worksheet>", 1)
			}
			table := readBook(t, sheetBook(rows), c.opt)
			same(t, show(table), c.want)
			if table.Sheet != "Kelp" || table.Format != readers.Workbook {
				t.Errorf("sheet %q, format %s", table.Sheet, table.Format)
			}
		})
	}
}

func TestSharedTexts(t *testing.T) {
	b := newBook("Kelp", sheetRow(1, "@0", "@1")+sheetRow(2, "@2", "1")+sheetRow(3, "@2", "2")+sheetRow(4, "@3", "3"))
	b.set("xl/sharedStrings.xml", `<sst `+mainSpace+`><si><t>site</t></si><si><r><t>gro</t></r><r><t>wth</t></r></si><si><t xml:space="preserve"> a </t><rPh sb="0" eb="1"><t>no</t></rPh></si><si><t>b &amp; c</t></si></sst>`)
	b.relate("t1", "sharedStrings", "sharedStrings.xml")
	same(t, show(readBook(t, b.pack(), readers.Options{})), lines("header 1: A site text; B growth number;", `2: "a" 1`, `3: "a" 2`, `4: "b & c" 3`))
}

// Members may have any case, and targets may climb out of their folder.
func TestPartsAreFound(t *testing.T) {
	want := show(readBook(t, sheetBook(kelpRows()), readers.Options{}))
	b := newBook("Kelp", kelpRows())
	strict := strings.NewReplacer(
		"http://schemas.openxmlformats.org/officeDocument/2006/relationships", "http://purl.oclc.org/ooxml/officeDocument/relationships",
		"http://schemas.openxmlformats.org/spreadsheetml/2006/main", "http://purl.oclc.org/ooxml/spreadsheetml/main")
	for n, part := range b.part {
		b.part[n] = strict.Replace(part)
	}
	same(t, show(readBook(t, b.pack(), readers.Options{})), want)

	other := zipOf(
		"_rels/.rels", `<Relationships `+relSpace+`><Relationship Id="r1" Type="`+relType+`officeDocument" Target="/Book/Main.xml"/></Relationships>`,
		"book/main.xml", `<workbook `+mainSpace+` `+officeSpace+`><sheets><sheet name="Kelp" sheetId="1" r:id="a"/></sheets></workbook>`,
		"book/_rels/main.xml.rels", `<Relationships `+relSpace+`><Relationship Id="a" Type="`+relType+`worksheet" Target="../data/./one.xml"/></Relationships>`,
		`DATA\one.xml`, worksheet(kelpRows()))
	same(t, show(readBook(t, other, readers.Options{})), want)
}

func TestSheetIsChosen(t *testing.T) {
	const (
		empty = ""
		notes = `<row r="1"><c t="inlineStr"><is><t>measured by hand</t></is></c></row>`
	)
	one := sheetRow(1, "site", "x") + sheetRow(2, "a", "1")
	for _, c := range []struct {
		name          string
		book          string
		opt           readers.Options
		sheet         string
		note, refusal string
	}{
		{name: "the only one", book: newBook("A", kelpRows()).pack(), sheet: "A"},
		{name: "the only one with a table", book: newBook("A", notes, "B", kelpRows(), "C", empty).pack(), sheet: "B", note: `the sheets "A" and "C" were passed over`},
		{name: "the only visible one", book: newBook("-A", kelpRows(), "B", kelpRows()).pack(), sheet: "B", note: `the sheet "A" (hidden) was passed over`},
		{name: "one row is no table where another has more", book: newBook("A", one, "B", kelpRows()).pack(), sheet: "B", note: `the sheet "A" was passed over`},
		{name: "two", book: newBook("A", kelpRows(), "B", kelpRows()).pack(), refusal: `kelp.xlsx: has a table in each of the sheets "A" and "B": choose one with --sheet`},
		{name: "two, of which one is named", book: newBook("A", kelpRows(), "B", kelpRows()).pack(), opt: readers.Options{Sheet: "b"}, sheet: "B"},
		{name: "a hidden one that is named", book: newBook("-A", kelpRows(), "B", kelpRows()).pack(), opt: readers.Options{Sheet: "A"}, sheet: "A", note: `the sheet "A" is hidden`},
		{name: "one that is not there", book: newBook("Kelp", kelpRows(), "Light", kelpRows()).pack(), opt: readers.Options{Sheet: "Klep"}, refusal: `kelp.xlsx: there is no sheet "Klep"; the sheets are "Kelp" and "Light": did you mean "Kelp"?`},
		{name: "hidden ones only", book: newBook("-A", kelpRows()).pack(), refusal: `kelp.xlsx: has only hidden sheets: "A" (hidden): choose one with --sheet`},
		{name: "no table in any", book: newBook("A", notes, "B", notes).pack(), refusal: `kelp.xlsx: has no visible sheet with a table (names, two rows, a column of numbers); the sheets are "A" and "B": choose one with --sheet`},
		{name: "an empty one", book: newBook("A", empty).pack(), refusal: `kelp.xlsx:A: is empty`},
		{name: "no table in the only one", book: newBook("A", notes).pack(), refusal: `kelp.xlsx:A!1: has a header and no rows`},
	} {
		t.Run(c.name, func(t *testing.T) {
			if c.refusal != "" {
				if got := refused(t, "kelp.xlsx", c.book, c.opt).Error(); got != c.refusal {
					t.Errorf("got:\n%s\nwant:\n%s", got, c.refusal)
				}
				return
			}
			table := readBook(t, c.book, c.opt)
			if table.Sheet != c.sheet {
				t.Errorf("sheet %q, want %q", table.Sheet, c.sheet)
			}
			if got := strings.Join(table.Reading.Notes, "\n"); got != c.note {
				t.Errorf("notes %q, want %q", got, c.note)
			}
		})
	}
}

// stylesPart has one cell style for each number format, and three with looks.
func withStyles(b *bookParts) *bookParts {
	b.set("xl/styles.xml", `<styleSheet `+mainSpace+`><numFmts count="4"><numFmt numFmtId="164" formatCode="yyyy\-mm\-dd"/><numFmt numFmtId="165" formatCode="0.0&quot; mm/d&quot;"/><numFmt numFmtId="166" formatCode="[h]:mm"/><numFmt numFmtId="167" formatCode="0\ \d\a\y\s"/></numFmts>`+
		`<fonts count="3"><font><sz val="11"/></font><font><strike/><sz val="11"/></font><font><color rgb="FFFF0000"/></font></fonts>`+
		`<fills count="3"><fill><patternFill patternType="none"/></fill><fill><patternFill patternType="gray125"/></fill><fill><patternFill patternType="solid"><fgColor rgb="FFFFFF00"/></patternFill></fill></fills>`+
		`<borders count="1"><border/></borders><cellStyleXfs count="1"><xf/></cellStyleXfs>`+
		`<cellXfs count="11"><xf numFmtId="0" fontId="0" fillId="0"/>`+ // 0
		`<xf numFmtId="14" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 1 date
		`<xf numFmtId="164" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 2 date
		`<xf numFmtId="165" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 3 a number with a text that has d and m
		`<xf numFmtId="9" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 4 per cent
		`<xf numFmtId="166" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 5 hours
		`<xf numFmtId="0" fontId="1" applyFont="1" fillId="0"/>`+ // 6 struck
		`<xf numFmtId="0" fontId="2" applyFont="1" fillId="0"/>`+ // 7 red
		`<xf numFmtId="0" fontId="0" fillId="2" applyFill="1"/>`+ // 8 yellow
		`<xf numFmtId="0" fontId="99" applyFont="1" fillId="0"/>`+ // 9 a font that is not there
		`<xf numFmtId="167" applyNumberFormat="1" fontId="0" fillId="0"/>`+ // 10 a number with letters
		`</cellXfs></styleSheet>`)
	b.relate("s1", "styles", "styles.xml")
	return b
}

// styled writes a number cell with a style.
func styled(at string, style int, value string) string {
	return fmt.Sprintf(`<c r="%s" s="%d"><v>%s</v></c>`, at, style, value)
}

func TestNumberFormatsMakeDates(t *testing.T) {
	rows := sheetRow(1, "d", "e", "f", "g", "h", "i", "j") +
		`<row r="2">` + styled("A2", 1, "45447") + styled("B2", 2, "45447.5") + styled("C2", 3, "45447") + styled("D2", 4, "0.35") + styled("E2", 5, "0.25") + styled("F2", 9, "1") + styled("G2", 99, "1") + `</row>` +
		`<row r="3">` + styled("A3", 1, "1") + styled("B3", 2, "60") + styled("C3", 3, "2.5") + styled("D3", 4, "1") + styled("E3", 5, "1.5") + styled("F3", 10, "2") + `</row>`
	table := readBook(t, withStyles(newBook("Kelp", rows)).pack(), readers.Options{})
	same(t, show(table), lines("header 1: A d date; B e date; C f number; D g number; E h date; F i number; G j number;",
		`2: @2024-06-04 @2024-06-04 12:00:00 45447 0.35 @06:00:00 1 1`, `3: @1899-12-31 @1900-02-28 2.5 1 @1899-12-31 12:00:00 2 _`))
	if !hasNote(table, "the cells of column g (D) shown as per cent; the values are the stored fractions") {
		t.Errorf("notes %q", table.Reading.Notes)
	}
	if c := table.Columns[3].Cell(0); !c.Style.Percent || c.Unit != "" {
		t.Errorf("the per cent cell is %+v", c)
	}
	if v, ok := table.Columns[0].Ordinal(0); !ok || v != 45447 {
		t.Errorf("the day is %v", v)
	}
	b := withStyles(newBook("Kelp", rows))
	b.set("xl/workbook.xml", strings.Replace(b.part["xl/workbook.xml"], "<sheets>", `<workbookPr date1904="1"/><sheets>`, 1))
	old := readBook(t, b.pack(), readers.Options{})
	if got := old.Columns[0].Cell(0).Text; got != "2028-06-05" || !old.Reading.Date1904 {
		t.Errorf("with days from 1904 the date is %s", got)
	}
}

func TestLooksOfCells(t *testing.T) {
	rows := sheetRow(1, "site", "x") + `<row r="2"><c r="A2" t="inlineStr" s="8"><is><t>a</t></is></c>` + styled("B2", 6, "1") + `</row>` +
		`<row r="3"><c r="A3" t="inlineStr"><is><t>b</t></is></c>` + styled("B3", 7, "2") + `</row>`
	table := readBook(t, withStyles(newBook("Kelp", rows)).pack(), readers.Options{})
	site, x := table.Columns[0], table.Columns[1]
	for _, c := range []struct {
		got, want readers.Style
	}{
		{site.Style(0), readers.Style{Fill: "FFFF00"}},
		{site.Style(1), readers.Style{}},
		{x.Style(0), readers.Style{Struck: true}},
		{x.Cell(0).Style, readers.Style{Struck: true}},
		{x.Style(1), readers.Style{Ink: "FF0000"}},
	} {
		if c.got != c.want {
			t.Errorf("style %+v, want %+v", c.got, c.want)
		}
	}
	if !table.Reading.Colored || table.Reading.Hidden.Struck != 1 {
		t.Errorf("colored %t, struck %d", table.Reading.Colored, table.Reading.Hidden.Struck)
	}
}

func TestHiddenCells(t *testing.T) {
	rows := sheetRow(1, "site", "x", "y") + strings.Replace(sheetRow(2, "a", "1", "5"), `<row `, `<row hidden="1" `, 1) + sheetRow(3, "b", "2", "6") +
		strings.Replace(sheetRow(4, "c", "3", "7"), `<row `, `<row hidden="true" `, 1)
	table := readBook(t, newBook("Kelp", `<worksheet `+mainSpace+`><cols><col min="1" max="1" width="9"/><col min="3" max="3" hidden="1"/></cols><sheetData>`+rows+
		`</sheetData><autoFilter ref="A1:C4"><filterColumn colId="1"/></autoFilter></worksheet>`).pack(), readers.Options{})
	h := table.Reading.Hidden
	if table.Len() != 3 || len(h.Records) != 2 || h.Records[0] != 0 || h.Records[1] != 2 || len(h.Columns) != 1 || h.Columns[0].Letter() != "C" || h.Filter != "A1:C4" {
		t.Errorf("hidden %+v in:\n%s", h, show(table))
	}
	for i, c := range table.Columns {
		for r, want := range []bool{true, i == 2, true} {
			if c.Cell(r).Hidden != want {
				t.Errorf("cell %s is hidden: %t", table.Address(c, r), !want)
			}
		}
	}
	// A sheet whose rows are hidden unless they say otherwise.
	table = readBook(t, newBook("Kelp", `<worksheet `+mainSpace+`><sheetFormatPr zeroHeight="1"/><sheetData>`+
		strings.Replace(kelpRows(), `<row r="3">`, `<row r="3" hidden="0">`, 1)+`</sheetData></worksheet>`).pack(), readers.Options{})
	if h := table.Reading.Hidden.Records; len(h) != 2 || h[0] != 0 || h[1] != 2 {
		t.Errorf("hidden records %v, want 0 and 2", h)
	}
}

func TestMergedCells(t *testing.T) {
	rows := sheetRow(1, "Kelp survey") + sheetRow(2, "site", "x", "y") + sheetRow(3, "a", "1", "5") + sheetRow(4, "", "2", "6") + sheetRow(5, "", "3", "7") +
		sheetRow(6, "b", "4", "8") + sheetRow(7, "", "5", "") + sheetRow(8, "c", "6", "9") + sheetRow(9, "", "", "3") + sheetRow(10, "d", "7", "3")
	table := readBook(t, newBook("Kelp", `<worksheet `+mainSpace+`><sheetData>`+rows+`</sheetData><mergeCells>`+
		`<mergeCell ref="A1:C1"/><mergeCell ref="A3:A5"/><mergeCell ref="A6:A7"/><mergeCell ref="C6:C7"/><mergeCell ref="A8:B9"/></mergeCells></worksheet>`).pack(), readers.Options{})
	same(t, show(table), lines("header 2: A site text; B x number; C y number;", `3: "a" 1 5`, `4: "a" 2 6`, `5: "a" 3 7`, `6: "b" 4 8`, `7: "b" 5 _`, `8: "c" 6 9`, `9: _ _ 3`, `10: "d" 7 3`, "above 1: title"))
	var got []string
	for _, m := range table.Reading.Merged {
		got = append(got, fmt.Sprintf("%s filled %t title %t", m.Range, m.Filled, m.Title))
	}
	same(t, strings.Join(got, "\n"), lines("A1:C1 filled false title true", "A3:A5 filled true title false", "A6:A7 filled true title false", "C6:C7 filled false title false", "A8:B9 filled false title false"))
	site := table.Columns[0]
	if site.Cell(0).Filled || !site.Cell(1).Filled || site.Cell(3).Filled {
		t.Error("the wrong cells are marked as filled")
	}
	if names, codes := site.Levels(); strings.Join(names, " ") != "a b c d" || codes[2] != 0 {
		t.Errorf("levels %v %v", names, codes)
	}
	if !hasNote(table, "A3:A5 are merged; the value holds for all their rows") {
		t.Errorf("notes %q", table.Reading.Notes)
	}
}

func TestDeclaredTables(t *testing.T) {
	rows := sheetRow(1, "Kelp", "survey", "2") + sheetRow(2, "", "", "3") + sheetRow(4, "", "site", "x") + sheetRow(5, "", "a", "1") + sheetRow(6, "", "b", "2") + sheetRow(7, "", "sum", "3") + sheetRow(8, "", "c", "9")
	b := newBook("Kelp", rows)
	rel := func(n int) string {
		return fmt.Sprintf(`<Relationship Id="t%d" Type="%stable" Target="../tables/table%d.xml"/>`, n, relType, n)
	}
	b.set("xl/worksheets/_rels/sheet1.xml.rels", `<Relationships `+relSpace+`>`+rel(1)+`</Relationships>`)
	b.set("xl/tables/table1.xml", `<table `+mainSpace+` id="1" name="T" displayName="Growth" ref="B4:C7" totalsRowCount="1"/>`)
	table := readBook(t, b.pack(), readers.Options{})
	same(t, show(table), lines("header 4: B site text; C x number;", `5: "a" 1`, `6: "b" 2`))
	if !hasNote(table, `the declared table "Growth" at B4:C7 fixes the boundary`) {
		t.Errorf("notes %q", table.Reading.Notes)
	}
	b.set("xl/worksheets/_rels/sheet1.xml.rels", `<Relationships `+relSpace+`>`+rel(1)+rel(2)+`</Relationships>`)
	b.set("xl/tables/table2.xml", `<table `+mainSpace+` id="2" displayName="Other" ref="B7:C8"/>`)
	if got, want := refused(t, "kelp.xlsx", b.pack(), readers.Options{}).Error(), "kelp.xlsx:Kelp: has 2 declared tables, at B4:C7 and B7:C8: choose one with --range"; got != want {
		t.Errorf("got:\n%s\nwant:\n%s", got, want)
	}
	same(t, show(readBook(t, b.pack(), readers.Options{Range: "B4:C6"})), lines("header 4: B site text; C x number;", `5: "a" 1`, `6: "b" 2`))
}

func TestFormulasAreToldInNotes(t *testing.T) {
	table := readBook(t, sheetBook(sheetRow(1, "site", "x", "y")+sheetRow(2, "a", "=1", "2")+sheetRow(3, "b", "=2", "=3")+sheetRow(4, "c", "3", "4")+
		`<row r="5"><c r="B5" t="str"><f>A1</f><v></v></c><c r="C5"><v>7</v></c></row>`), readers.Options{})
	for _, want := range []string{
		"3 cells are results of formulas, in x (B) and y (C); the stored values were used",
		"1 cell is formulas whose stored result is an empty text",
	} {
		if !hasNote(table, want) {
			t.Errorf("notes %q lack %q", table.Reading.Notes, want)
		}
	}
	if c := table.Columns[1].Cell(0); !c.Formula || c.Kind != readers.Number {
		t.Errorf("the result of a formula is %+v", c)
	}
}

// Every damage to the structure is refused with the part and how far it is sound;
// the rows before it are never a table.
func TestDamagedWorkbooks(t *testing.T) {
	sound := worksheet(kelpRows())
	cut := func(at string, more int) string { return sound[:strings.Index(sound, at)+more] }
	for _, c := range []struct {
		name, sheet, want string
	}{
		{"cut inside a row", cut(`<row r="3"`, 15), "xl/worksheets/sheet1.xml is cut off in row 3"},
		{"cut between rows", cut(`<row r="3"`, 0), "xl/worksheets/sheet1.xml is cut off after row 2"},
		{"cut before the end tag", strings.TrimSuffix(sound, "</worksheet>"), "xl/worksheets/sheet1.xml is cut off after row 4"},
		{"cut at the start", "<worksheet", "xl/worksheets/sheet1.xml is cut off"},
		{"badly nested", strings.Replace(sound, "</c></row>", "</row></c>", 1), "xl/worksheets/sheet1.xml is badly nested in row 1"},
		{"an end without a start", strings.Replace(sound, "</sheetData>", "</v></sheetData>", 1), "xl/worksheets/sheet1.xml is badly nested after row 4"},
		{"an element after the end", sound + "<row/>", "xl/worksheets/sheet1.xml has an element after its end after row 4"},
		{"text after the end", sound + "x", "xl/worksheets/sheet1.xml has text outside its root after row 4"},
		{"an unknown entity", strings.Replace(sound, "<v>1</v>", "<v>&one;</v>", 1), "xl/worksheets/sheet1.xml is damaged in row 2"},
		{"a document type", "<!DOCTYPE worksheet [<!ENTITY one '1'>]>" + sound, "xl/worksheets/sheet1.xml has a document type declaration, which no workbook needs"},
		{"another root", strings.NewReplacer("<worksheet", "<chartsheet", "</worksheet", "</chartsheet").Replace(sound), `xl/worksheets/sheet1.xml starts with "chartsheet", so it is no sheet of cells`},
		{"an address out of its row", strings.Replace(sound, `r="B3"`, `r="B4"`, 1), "xl/worksheets/sheet1.xml has the cell B4 out of its row in row 3"},
		{"an address beyond the sheet", strings.Replace(sound, `r="B3"`, `r="ZZZ3"`, 1), `xl/worksheets/sheet1.xml has a cell with the address "ZZZ3" in row 3`},
		{"an address that is none", strings.Replace(sound, `r="B3"`, `r="1A"`, 1), `xl/worksheets/sheet1.xml has a cell with the address "1A" in row 3`},
		{"cells out of order", strings.Replace(sound, `<c r="A3"`, `<c r="C3"`, 1), "xl/worksheets/sheet1.xml has the cell B3 out of order in row 3"},
		{"a cell twice", strings.Replace(sound, `r="B3"`, `r="A3"`, 1), "xl/worksheets/sheet1.xml has the cell A3 out of order in row 3"},
		{"rows out of order", strings.Replace(sound, `<row r="3"`, `<row r="2"`, 1), "xl/worksheets/sheet1.xml has row 2 out of order after row 2"},
		{"a row that is none", strings.Replace(sound, `<row r="3"`, `<row r="0"`, 1), `xl/worksheets/sheet1.xml has a row numbered "0" after row 2`},
		{"a row beyond the sheet", strings.Replace(sound, `<row r="3"`, `<row r="1048577"`, 1), `xl/worksheets/sheet1.xml has a row numbered "1048577" after row 2`},
		{"a shared text without its part", strings.Replace(sound, `<c r="B3"><v>2.5</v>`, `<c r="B3" t="s"><v>0</v>`, 1), "xl/worksheets/sheet1.xml has in B3 a reference to a list of texts that is not there in row 3"},
		{"a number that is none", strings.Replace(sound, "<v>2.5</v>", "<v>2,5</v>", 1), `xl/worksheets/sheet1.xml has in B3 a number that reads "2,5" in row 3`},
		{"a type that is none", strings.Replace(sound, `<c r="B3">`, `<c r="B3" t="z">`, 1), `xl/worksheets/sheet1.xml has in B3 a value of the unknown type "z" in row 3`},
		{"a style that is none", strings.Replace(sound, `<c r="B3">`, `<c r="B3" s="x">`, 1), `xl/worksheets/sheet1.xml has a cell with the style "x" in row 3`},
		{"a tag of two megabytes", strings.Replace(sound, `<c r="B3">`, `<c r="B3" x="`+strings.Repeat(" ", 2<<20)+`">`, 1), "xl/worksheets/sheet1.xml has a tag or a text of more than 1 MiB in row 3"},
		{"nothing", " ", "xl/worksheets/sheet1.xml is cut off"},
	} {
		t.Run(c.name, func(t *testing.T) {
			b := newBook("Kelp", kelpRows())
			b.set("xl/worksheets/sheet1.xml", c.sheet)
			want := "kelp.xlsx:Kelp: " + c.want + ": save the workbook again, or take an older copy"
			if got := refused(t, "kelp.xlsx", b.pack(), readers.Options{}).Error(); got != want {
				t.Errorf("got:\n%s\nwant:\n%s", got, want)
			}
		})
	}
}

func TestDamagedParts(t *testing.T) {
	withTexts := func(sst, cell string) *bookParts {
		b := newBook("Kelp", kelpRows()+`<row r="5"><c r="A5" t="s"><v>`+cell+`</v></c><c r="B5"><v>1</v></c></row>`)
		b.set("xl/sharedStrings.xml", sst)
		b.relate("t1", "sharedStrings", "sharedStrings.xml")
		return b
	}
	sst := `<sst ` + mainSpace + `><si><t>a</t></si></sst>`
	again := ": save the workbook again, or take an older copy"
	lacking := newBook("Kelp", kelpRows())
	lacking.set("xl/workbook.xml", strings.Replace(lacking.part["xl/workbook.xml"], "</sheets>", `<sheet name="B" sheetId="2" r:id="rId9"/></sheets>`, 1))
	lacking.relate("rId9", "worksheet", "worksheets/sheet9.xml")
	doctype := newBook("Kelp", kelpRows())
	doctype.set("xl/workbook.xml", "<!DOCTYPE x>"+doctype.part["xl/workbook.xml"])
	badStyles := withStyles(newBook("Kelp", sheetRow(1, "a", "b")+`<row r="2"><c r="A2"><v>1</v></c><c r="B2" s="1"><v>2</v></c></row>`))
	badStyles.set("xl/styles.xml", "<styleSheet>")
	for _, c := range []struct{ name, book, want string }{
		{"a text that is not in the list", withTexts(sst, "1").pack(), `xl/worksheets/sheet1.xml has in A5 a reference to text "1", which the list of texts does not have in row 5` + again},
		{"a text before the list", withTexts(sst, "-1").pack(), `xl/worksheets/sheet1.xml has in A5 a reference to text "-1", which the list of texts does not have in row 5` + again},
		{"a reference that is no number", withTexts(sst, "x").pack(), `xl/worksheets/sheet1.xml has in A5 a reference to text "x", which the list of texts does not have in row 5` + again},
		{"a cut list of texts", withTexts(sst[:len(sst)-6], "0").pack(), "xl/sharedStrings.xml is cut off after text 1" + again},
		{"an entity in the list of texts", withTexts(strings.Replace(sst, "<t>a", "<t>&a;", 1), "0").pack(), "xl/sharedStrings.xml is damaged after text 0" + again},
		{"a list of texts that is not there", func() string {
			b := newBook("Kelp", kelpRows())
			b.relate("t1", "sharedStrings", "sharedStrings.xml")
			return b.pack()
		}(), "lacks the part xl/sharedStrings.xml: save the workbook again"},
		{"a sheet that is not there", lacking.pack(), "lacks the part xl/worksheets/sheet9.xml: save the workbook again"},
		{"a part twice", sheetBook(kelpRows()) + "", ""},
		{"a document type in the list of sheets", doctype.pack(), "xl/workbook.xml has a document type declaration, which no workbook needs" + again},
		{"cut styles", badStyles.pack(), "xl/styles.xml is cut off" + again},
	} {
		t.Run(c.name, func(t *testing.T) {
			book := c.book
			if c.want == "" {
				b := newBook("Kelp", kelpRows())
				var parts []string
				for _, n := range b.names {
					parts = append(parts, n, b.part[n])
				}
				book = zipOf(append(parts, "xl/Worksheets/sheet1.xml", worksheet(kelpRows()))...)
				c.want = `holds the part "xl/worksheets/sheet1.xml" twice: save the workbook again`
			}
			want := "kelp.xlsx: " + c.want
			if strings.HasPrefix(c.want, "xl/worksheets") {
				want = "kelp.xlsx:Kelp: " + c.want
			}
			if got := refused(t, "kelp.xlsx", book, readers.Options{}).Error(); got != want {
				t.Errorf("got:\n%s\nwant:\n%s", got, want)
			}
		})
	}
}

// A byte that is changed in a packed part is found by its checksum at the latest.
func TestChangedBytesAreFound(t *testing.T) {
	packed := sheetBook(kelpRows())
	want := show(readBook(t, packed, readers.Options{}))
	refusedCount := 0
	for i := range len(packed) {
		b := []byte(packed)
		b[i] ^= 0x20
		table, err := readers.Read("kelp.xlsx", bytes.NewReader(b), readers.Options{})
		if err != nil {
			refusedCount++
			continue
		}
		// Some bytes say nothing of the table: times, the version that packed it.
		if got := show(table); got != want {
			t.Fatalf("byte %d of %d changes the table to:\n%s", i, len(packed), got)
		}
	}
	if 2*refusedCount < len(packed) {
		t.Errorf("only %d of %d changes are refused", refusedCount, len(packed))
	}
}

func TestUnpackedLimit(t *testing.T) {
	var rows strings.Builder
	rows.WriteString(sheetRow(1, "site", "x"))
	for i := range 20_000 {
		rows.WriteString(sheetRow(i+2, "a", "1"))
	}
	packed := sheetBook(rows.String())
	if _, err := readers.Read("kelp.xlsx", strings.NewReader(packed), readers.Options{}); err != nil {
		t.Fatal(err)
	}
	limits := readers.Limits{Unpacked: 100 << 10}
	got := refused(t, "kelp.xlsx", packed, readers.Options{Limits: limits}).Error()
	if want := "more than 100 KiB isn't read: raise it with --limit unpacked="; !strings.Contains(got, want) {
		t.Errorf("got %s, want %s", got, want)
	}
	// A directory that lies about the size is found while unpacking. Sizes are the
	// four bytes at 24 of each entry of the directory.
	b := []byte(packed)
	for i := 0; i+28 < len(b); i++ {
		if string(b[i:i+4]) == "PK\x01\x02" {
			copy(b[i+24:], []byte{10, 0, 0, 0})
		}
	}
	if got := refused(t, "kelp.xlsx", string(b), readers.Options{Limits: limits}).Error(); !strings.Contains(got, "unpacked") && !strings.Contains(got, "damaged") {
		t.Errorf("a directory that lies: %s", got)
	}
}

// One cell in the last corner costs no more than its row and column.
func TestLastCornerIsCheap(t *testing.T) {
	rows := kelpRows() + `<row r="1048576"><c r="XFD1048576"><v>1</v></c></row>`
	table := readBook(t, sheetBook(rows), readers.Options{})
	same(t, show(table), lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" 2.5`, `4: "a" 4`, "stray 1048576: note, column XFD"))
}

// A workbook that another program wrote holds what that program says it holds.
func TestCellsAgreeWithTheLibrary(t *testing.T) {
	f := excelize.NewFile()
	defer f.Close()
	day, err := f.NewStyle(&excelize.Style{NumFmt: 14})
	if err != nil {
		t.Fatal(err)
	}
	red, err := f.NewStyle(&excelize.Style{Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"FF0000"}}, Font: &excelize.Font{Strike: true}})
	if err != nil {
		t.Fatal(err)
	}
	set := func(cell string, v any) {
		t.Helper()
		if err := f.SetCellValue("Sheet1", cell, v); err != nil {
			t.Fatal(err)
		}
	}
	for i, name := range []string{"site", "x", "seen", "day"} {
		set(readers.Address(i, 1), name)
	}
	rng := rand.New(rand.NewPCG(5, 9))
	const n = 200
	for i := range n {
		row := i + 2
		set(readers.Address(0, row), [...]string{"exposed", "sheltered", "a & b <c>", "Höhe"}[rng.IntN(4)])
		set(readers.Address(1, row), rng.NormFloat64()*math.Pow(10, float64(rng.IntN(20)-10)))
		set(readers.Address(2, row), rng.IntN(2) == 0)
		set(readers.Address(3, row), 45000+rng.IntN(1000))
	}
	for _, err := range []error{
		f.SetCellStyle("Sheet1", "D2", readers.Address(3, n+1), day), f.SetCellStyle("Sheet1", "A5", "B5", red),
		f.SetRowVisible("Sheet1", 7, false), f.SetColVisible("Sheet1", "C", false), f.MergeCell("Sheet1", "A10", "A11"),
	} {
		if err != nil {
			t.Fatal(err)
		}
	}
	packed, err := f.WriteToBuffer()
	if err != nil {
		t.Fatal(err)
	}
	table := readBook(t, packed.String(), readers.Options{})
	if table.Len() != n || len(table.Columns) != 4 {
		t.Fatalf("%d records in %d columns", table.Len(), len(table.Columns))
	}
	for i := range n {
		for _, c := range table.Columns {
			want, err := f.GetCellValue("Sheet1", table.Address(c, i), excelize.Options{RawCellValue: true})
			if err != nil {
				t.Fatal(err)
			}
			cell := c.Cell(i)
			switch c.Name {
			case "x":
				if v, err := strconv.ParseFloat(want, 64); err != nil || cell.Number != v {
					t.Errorf("%s is %v, want %s", table.Address(c, i), cell.Number, want)
				}
			case "seen":
				if cell.Kind != readers.Bool || fmt.Sprint(cell.Number) != want {
					t.Errorf("%s is %+v, want %s", table.Address(c, i), cell, want)
				}
			case "day":
				if cell.Kind != readers.Date || fmt.Sprint(cell.Number) != want {
					t.Errorf("%s is %+v, want %s", table.Address(c, i), cell, want)
				}
			default:
				if cell.Text != want {
					t.Errorf("%s is %q, want %q", table.Address(c, i), cell.Text, want)
				}
			}
		}
	}
	if h := table.Reading.Hidden; len(h.Records) != 1 || table.Row(h.Records[0]) != 7 || len(h.Columns) != 1 || h.Columns[0].Name != "seen" {
		t.Errorf("hidden %+v", h)
	}
	if s := table.Columns[1].Style(3); s.Fill != "FF0000" || !s.Struck {
		t.Errorf("B5 looks like %+v", s)
	}
	if m := table.Reading.Merged; len(m) != 1 || m[0].Range != "A10:A11" {
		t.Errorf("merged %+v", m)
	}
}
