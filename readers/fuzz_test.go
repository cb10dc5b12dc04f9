package readers_test

import (
	"encoding/csv"
	"math"
	"strconv"
	"strings"
	"sync"
	"testing"

	"footing/readers"

	"pgregory.net/rapid"
)

// check asks a table for everything it can say, and holds it to what every table
// promises.
func check(t *testing.T, table *readers.Table) {
	if table.Len() == 0 || len(table.Columns) == 0 {
		t.Fatal("a table without rows or columns is none")
	}
	last := table.HeaderRow
	for i := range table.Len() {
		row := table.Row(i)
		if row <= last {
			t.Fatalf("record %d lies in row %d, after row %d", i, row, last)
		}
		last = row
		if at, ok := table.Record(row); !ok || at != i {
			t.Fatalf("row %d is record %d, not %d", row, at, i)
		}
	}
	for _, c := range table.Columns {
		names, codes := c.Levels()
		for i := range c.Len() {
			cell := c.Cell(i)
			v, isNumber := c.Number(i)
			if isNumber != (cell.Kind == readers.Number && table.RowFault(i) == "") {
				t.Fatalf("%s is %+v, and a number: %t", table.Address(c, i), cell, isNumber)
			}
			if isNumber && (v != cell.Number || math.IsNaN(v) || math.IsInf(v, 0)) {
				t.Fatalf("%s is %v and %v", table.Address(c, i), v, cell.Number)
			}
			if (cell.Text == "") != (cell.Kind == readers.Blank || cell.Kind == readers.Uncached) && cell.Kind != readers.Date {
				t.Fatalf("%s is %+v", table.Address(c, i), cell)
			}
			label, ok := c.Label(i)
			if ok != (codes[i] >= 0) || ok && names[codes[i]] != label {
				t.Fatalf("%s has the label %q and the code %d", table.Address(c, i), label, codes[i])
			}
			c.Ordinal(i)
		}
	}
	show(table)
}

func FuzzText(f *testing.F) {
	for _, s := range []string{
		lines("a,b", "x,1", "y,2"),
		"\xef\xbb\xbfa;b\r\nx;1,5\r\n\"y\r\nz\";2\r\n",
		"\xff\xfea\x00,\x00b\x00\n\x00x\x00,\x001\x00\n\x00",
		lines("# c", "|a|b|", "|-|-|", "|x|1|"),
		survey("Kelp", "", frondNames, ",,°C,mm", 3, frondNames, 3, "mean,,1,2", "", "note"),
		lines("a,b", `"6" pot",1`, `x" y,2`, `"q""q",3`),
		"a\tb\rx\t1\ry\t2",
		"sep=;\na;b\n1;2",
		"growth\n1\n\n2\n",
		"a,b\n\xe9,1\n",
	} {
		f.Add([]byte(s))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		table, err := readers.Read("-", strings.NewReader(string(data)), readers.Options{})
		if err != nil {
			if _, ok := err.(*readers.Error); !ok {
				t.Fatalf("%T: %v", err, err)
			}
			return
		}
		check(t, table)
	})
}

func FuzzNumber(f *testing.F) {
	for _, v := range []float64{0, 1, -1.5, 0.1, 1e21, 1e-7, math.MaxFloat64, 5e-324, 123456789012345678} {
		f.Add(math.Float64bits(v), strconv.FormatFloat(v, 'g', -1, 64))
	}
	f.Add(uint64(0), "1,042.5")
	f.Add(uint64(0), "\u22121\u202f042")
	f.Add(uint64(0), "0x1p-2")
	f.Fuzz(func(t *testing.T, bits uint64, text string) {
		// What strconv writes reads back exactly, also by way of a file.
		v := math.Float64frombits(bits)
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			s := strconv.FormatFloat(v, 'g', -1, 64)
			got, ok := readers.ParseNumber(s, '.')
			if !ok || got != v || math.Signbit(got) != math.Signbit(v) {
				t.Fatalf("%s reads as %v (%t)", s, got, ok)
			}
			table, err := readers.Read("-", strings.NewReader("a,b\nx,"+s+"\ny,7.25\n"), readers.Options{})
			if err != nil {
				t.Fatal(err)
			}
			if cell := table.Columns[1].Cell(0); cell.Kind != readers.Number || cell.Number != v {
				t.Fatalf("%s reads as %+v", s, cell)
			}
		}
		// Whatever is taken for a number, strconv takes too once the signs are mended.
		got, ok := readers.ParseNumber(text, '.')
		if !ok {
			return
		}
		plain := strings.NewReplacer(",", "", " ", "", "'", "", "\u00a0", "", "\u2007", "", "\u2009", "", "\u202f", "", "\u2019", "", "\u2212", "-").Replace(text)
		want, err := strconv.ParseFloat(plain, 64)
		if err != nil || want != got {
			t.Fatalf("%q reads as %v, %q as %v (%v)", text, got, plain, want, err)
		}
		if strings.ContainsAny(plain, "xX_pPnNiI") {
			t.Fatalf("%q is no number here", text)
		}
	})
}

func FuzzSheet(f *testing.F) {
	for _, rows := range []string{
		kelpRows(),
		sheetRow(1, "site", "x") + sheetRow(2, "a", "=1") + sheetRow(3, "@0", "!#N/A") + sheetRow(4, "b", "?1"),
		`<row><c t="str"><v>a</v></c></row><row r="3"><c r="B3"><f>1</f></c></row>`,
		`<row r="2" hidden="1"><c r="A2" s="3"><v>45000</v></c></row></sheetData><mergeCells><mergeCell ref="A1:A3"/></mergeCells><sheetData>`,
		`<!-- x --><row><c t="inlineStr"><is><r><t>_x0041_</t></r><rPh><t>y</t></rPh></is></c></row>`,
	} {
		f.Add(rows, `<si><t>a</t></si>`)
	}
	f.Fuzz(func(t *testing.T, rows, texts string) {
		b := withStyles(newBook("Kelp", rows))
		b.set("xl/sharedStrings.xml", `<sst `+mainSpace+`>`+texts+`</sst>`)
		b.relate("t1", "sharedStrings", "sharedStrings.xml")
		table, err := readers.Read("kelp.xlsx", strings.NewReader(b.pack()), readers.Options{})
		if err != nil {
			if _, ok := err.(*readers.Error); !ok {
				t.Fatalf("%T: %v", err, err)
			}
			return
		}
		check(t, table)
	})
}

// What a table says of its cells, written as CSV and read again, is the same table.
func TestTablesComeBack(t *testing.T) {
	word := rapid.StringMatching(`[B-Db-d][B-Db-d ,;"|#'\n%°é-]{0,8}[b-d]`)
	rapid.Check(t, func(t *rapid.T) {
		records := [][]string{{"label", "site", "x", "y"}}
		for range rapid.IntRange(2, 12).Draw(t, "rows") {
			number := func() string {
				if rapid.IntRange(0, 9).Draw(t, "missing") == 0 {
					return "NA"
				}
				return strconv.FormatFloat(rapid.Float64Range(-1e6, 1e6).Draw(t, "number"), 'f', rapid.IntRange(1, 5).Draw(t, "decimals"), 64)
			}
			records = append(records, []string{word.Draw(t, "label"), rapid.SampledFrom([]string{"exposed", "sheltered"}).Draw(t, "site"), number(), "1." + strconv.Itoa(rapid.IntRange(0, 99).Draw(t, "y"))})
		}
		write := func(records [][]string) string {
			var b strings.Builder
			w := csv.NewWriter(&b)
			if err := w.WriteAll(records); err != nil {
				t.Fatal(err)
			}
			return b.String()
		}
		table, err := readers.Read("-", strings.NewReader(write(records)), readers.Options{Delimiter: ","})
		if err != nil {
			t.Skip(err) // one of the words may be a quote that closes nowhere, or the like
		}
		again := [][]string{nil}
		for _, c := range table.Columns {
			again[0] = append(again[0], c.Header)
		}
		for i := range table.Len() {
			var record []string
			for _, c := range table.Columns {
				record = append(record, c.Cell(i).Text)
			}
			again = append(again, record)
		}
		back, err := readers.Read("-", strings.NewReader(write(again)), readers.Options{Delimiter: ","})
		if err != nil {
			t.Fatal(err)
		}
		if back.Len() != table.Len() {
			t.Fatalf("%d records became %d", table.Len(), back.Len())
		}
		for k, c := range table.Columns {
			for i := range table.Len() {
				if a, b := c.Cell(i), back.Columns[k].Cell(i); a.Text != b.Text || a.Kind != b.Kind || a.Number != b.Number && a.Kind == readers.Number {
					t.Fatalf("%s was %+v and is %+v", table.Address(c, i), a, b)
				}
			}
		}
	})
}

// A file by the rules of RFC 4180 has the fields that the standard library finds.
func TestFieldsAgreeWithTheStandardLibrary(t *testing.T) {
	// No letters that could spell a word for a sum.
	field := rapid.StringMatching(`[bcd][bcd,;" \n|]{0,6}[bcd]`)
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		w := csv.NewWriter(&b)
		w.UseCRLF = rapid.Bool().Draw(t, "crlf")
		w.Write([]string{"a", "b", "c", "x"})
		var want [][]string
		for range rapid.IntRange(3, 10).Draw(t, "rows") {
			record := []string{field.Draw(t, "a"), field.Draw(t, "b"), field.Draw(t, "c"), "1.5"}
			w.Write(record)
			want = append(want, record)
		}
		w.Flush()
		table, err := readers.Read("-", strings.NewReader(b.String()), readers.Options{Delimiter: ","})
		if err != nil {
			t.Fatal(err)
		}
		if table.Len() != len(want) {
			t.Fatalf("%d records of %d in\n%q", table.Len(), len(want), b.String())
		}
		for i, record := range want {
			for k, text := range record[:3] {
				if got := table.Columns[k].Cell(i).Text; got != text {
					t.Fatalf("%s is %q, want %q", table.Address(table.Columns[k], i), got, text)
				}
			}
		}
	})
}

// A table may be asked from several goroutines at once; the race detector looks on.
func TestTablesAreSharedSafely(t *testing.T) {
	table := read(t, survey(frondNames, 50), readers.Options{})
	var wait sync.WaitGroup
	for range 8 {
		wait.Go(func() { check(t, table) })
	}
	wait.Wait()
}
