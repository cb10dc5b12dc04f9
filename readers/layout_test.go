package readers_test

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"footing/readers"
)

// fronds makes rows of a made-up survey: a label, a site, a temperature, a growth.
func fronds(from, to int) []string {
	var out []string
	for i := from; i <= to; i++ {
		site := [...]string{"exposed", "sheltered"}[i%2]
		out = append(out, fmt.Sprintf("F%02d,%s,%.2f,%.3f", i, site, 7.25+1.37*float64(i), 3.125+0.731*float64((i*7)%5)))
	}
	return out
}

const frondNames = "frond,site,temperature,growth"

// table writes lines around rows: a string is a line, a number n stands for the
// rows of n more fronds.
func survey(parts ...any) string {
	var out []string
	next := 1
	for _, p := range parts {
		switch p := p.(type) {
		case string:
			out = append(out, p)
		case int:
			out = append(out, fronds(next, next+p-1)...)
			next += p
		}
	}
	return lines(out...)
}

// Where the table is: its header, its rows, and what the other rows are.
func TestTableIsFound(t *testing.T) {
	for _, c := range []struct {
		name, text string
		opt        readers.Options
		header     int
		rows       string // of the records, as "2-9" or "3-6 8-11"
		above      string // rows above the header that hold something
		stray      string // row and kind of the others
	}{
		{name: "at the top", text: survey(frondNames, 8), header: 1, rows: "2-9"},
		{name: "a title", text: survey("Kelp survey", "", frondNames, 8), header: 3, rows: "4-11", above: "1 title"},
		{name: "a title without a gap", text: survey("Kelp survey", frondNames, 8), header: 2, rows: "3-10", above: "1 title"},
		{name: "a title with commas", text: survey("Kelp, exposed and sheltered, 2nd round", frondNames, 8), header: 2, rows: "3-10", above: "1 title"},
		{name: "a title padded with fields", text: survey("Kelp survey,,,", ",,,", frondNames, 8), header: 3, rows: "4-11", above: "1 title"},
		{
			name: "names and values above", text: survey("Observer,Smith", "Depth,3.5", "Year,2024", frondNames, 8), header: 4, rows: "5-12",
			above: "1 title, 2 title, 3 title",
		},
		{
			name: "names and values above, after a gap", text: survey("Observer,Smith", "Depth,3.5", "Year,2024", "", frondNames, 8), header: 5, rows: "6-13",
			above: "1 title, 2 title, 3 title",
		},
		{name: "a blank row under the header", text: survey(frondNames, "", 8), header: 1, rows: "3-10"},
		{name: "units under the header", text: survey(frondNames, ",,°C,mm/d", 8), header: 1, rows: "3-10", above: "2 units"},
		{name: "units with words over the labels", text: survey(frondNames, "id,place,°C,mm/d", 8), header: 1, rows: "3-10", above: "2 units"},
		{name: "units in brackets", text: survey(frondNames, ",,(degrees),[mm per day]", 8), header: 1, rows: "3-10", above: "2 units"},
		{name: "a first row with texts is no row of units", text: survey(frondNames, "F00,exposed,torn,lost", 8), header: 1, rows: "2-10"},
		{name: "blank rows between", text: survey(frondNames, 4, "", 4, ",,,", 4), header: 1, rows: "2-5 7-10 12-15"},
		{name: "a header once more", text: survey(frondNames, 4, frondNames, 4), header: 1, rows: "2-5 7-10", stray: "6 header again"},
		{name: "a header once more in other case", text: survey(frondNames, 4, "Frond,Site,Temperature,growth", 4), header: 1, rows: "2-5 7-10", stray: "6 header again"},
		{name: "a header once more above the longer part", text: survey(frondNames, 3, "", frondNames, 8), header: 1, rows: "2-4 7-14", stray: "6 header again"},
		{name: "a header once more after a gap", text: survey(frondNames, 4, "", frondNames, 4), header: 1, rows: "2-5 8-11", stray: "7 header again"},
		{
			name: "a header in another order", text: survey(frondNames, 4, "site,frond,growth,temperature", "exposed,F05,3.1,7.2", "sheltered,F06,3.2,7.5", frondNames, 4),
			header: 1, rows: "2-5 10-13", stray: "6 header in another order, 7 row under another header, 8 row under another header, 9 header again",
		},
		{name: "a mean by its word", text: survey(frondNames, 8, "average,,12.5,3.9"), header: 1, rows: "2-9", stray: "10 summary"},
		{name: "means and counts", text: survey(frondNames, 8, "", "Mean,,12.5,3.9", "SD,,2.5,0.9", "n,,8,8"), header: 1, rows: "2-9", stray: "11 summary, 12 summary, 13 summary"},
		{
			name: "a mean for each group", header: 1, rows: "2-3 5-6", stray: "4 summary, 7 summary",
			text: lines(frondNames, "F1,a,1.25,3.5", "F2,a,2.5,4.5", "mean,,1.875,4", "F3,b,5.25,3.5", "F4,b,2.5,4.5", "mean,,3.875,4"),
		},
		{name: "a sum by arithmetic", header: 1, rows: "2-4", stray: "5 summary", text: lines("site,x,y", "a,1.5,2.25", "b,2.5,3.5", "c,3.25,4.75", ",7.25,10.50")},
		{name: "a mean by arithmetic", header: 1, rows: "2-4", stray: "5 summary", text: lines("site,x,y", "a,1.52,2.25", "b,2.57,3.54", "c,3.26,4.77", "all,2.45,3.52")},
		{name: "a total with a word and no blank label", header: 1, rows: "2-4", stray: "5 summary", text: lines("site,x,y", "a,1.5,2.25", "b,2.5,3.5", "c,3.25,4.75", "Total,7.25,10.5")},
		{name: "a last row that is near the mean is a row", header: 1, rows: "2-6", text: lines("site,x", "a,3", "b,5", "c,4", "a,4", "b,4")},
		{name: "a group that is called N", header: 1, rows: "2-7", text: lines("plot,dose,y", "1,N,3.5", "2,P,4.5", "3,K,5.25", "4,N,3.25", "5,P,4", "6,N,5")},
		{name: "a group that is called total", header: 1, rows: "2-7", text: lines("plot,part,y", "p1,total,3.5", "p2,leaf,4.5", "p3,stem,5.25", "p4,total,3.25", "p5,leaf,4", "p6,total,5")},
		{
			name: "deviations under means", header: 1, rows: "2-3 6-7", stray: "4 summary, 5 summary, 8 summary, 9 summary",
			text: lines("frond,site,x,y", "F1,a,1.25,3.5", "F2,a,2.5,4.5", "mean,a,1.875,4", "sd,a,0.88,0.71", "F3,b,5.25,3.5", "F4,b,2.5,4.5", "mean,b,3.875,4", "sd,b,1.94,0.71"),
		},
		{
			name: "a level that is called max, once without its site", header: 1, rows: "2-7",
			text: lines("dose,site,y", "max,a,3.5", "none,a,4.5", "max,b,5.25", "none,b,3.25", "max,,4", "none,a,5"),
		},
		{name: "a row with codes after a gap", text: survey(frondNames, 4, "", "F05,exposed,NA,NA", "", 4), header: 1, rows: "2-5 7-7 9-12"},
		{name: "a row with texts after a gap", text: survey(frondNames, 4, "", "F05,exposed,torn,lost", "", 4), header: 1, rows: "2-5 7-7 9-12"},
		{name: "a row with codes is no row of units", text: survey(frondNames, "F00,place,in,NA", 8), header: 1, rows: "2-10"},
		{name: "a row with a known label is no row of units", text: survey(frondNames, "F00,exposed,m,s", 8), header: 1, rows: "2-10"},
		{name: "names that are measures", text: lines("site,4 °C,12 °C", "a,1,2", "b,3,4"), header: 1, rows: "2-3"},
		{name: "measures under their names", text: lines("site,x", "a,4 °C", "b,12 °C"), header: 1, rows: "2-3"},
		{name: "a last label that is called sd", header: 1, rows: "2-5", text: lines("plot,x", "sa,1.5", "sb,2.5", "sc,9", "sd,3")},
		{name: "an average that is not of these rows", header: 1, rows: "2-4", stray: "5 summary", text: lines("plot,x", "sa,1.5", "sb,2.5", "sc,9", "Average,7")},
		{name: "a footer after a gap", text: survey(frondNames, 8, "", "thermometer no. 4"), header: 1, rows: "2-9", stray: "11 note"},
		{name: "a footer after a row of commas", text: survey(frondNames, 8, ",,,", "thermometer no. 4,,,"), header: 1, rows: "2-9", stray: "11 note"},
		{name: "a footer at once", text: survey(frondNames, 8, "measured by hand,,,"), header: 1, rows: "2-9", stray: "10 note"},
		{name: "a footer with a comma", text: survey(frondNames, 8, "Source: dive log, 2024"), header: 1, rows: "2-9", stray: "10 note"},
		{name: "a label without values is a row", text: survey(frondNames, 8, "F09,,,"), header: 1, rows: "2-10"},
		{name: "codes for values are a row", text: survey(frondNames, 8, "F09,exposed,NA,NA"), header: 1, rows: "2-10"},
		{name: "texts for values are a row", text: survey(frondNames, 4, "F05,exposed,torn,lost", 4), header: 1, rows: "2-10"},
		{name: "texts for values after a gap are a row", text: survey(frondNames, 4, "", "F05,exposed,torn,lost", 4), header: 1, rows: "2-5 7-11"},
		{name: "names of sections", text: survey(frondNames, "North bay,,,", 4, "South bay,,,", 4), header: 1, rows: "3-6 8-11", stray: "2 note, 7 note"},
		{
			name: "another table below", text: survey(frondNames, 8, "", "site,mean,sd", "exposed,7.1,1.2", "sheltered,6.9,1.1"), header: 1, rows: "2-9",
			stray: "11 another table, 12 another table, 13 another table",
		},
		{
			name: "another table above", text: survey("depth,light", "1,90", "2,40", "", frondNames, 8), header: 5, rows: "6-13",
			stray: "1 another table, 2 another table, 3 another table",
		},
		{
			name: "another table beside", text: lines("frond,site,x,,site,mean", "F1,a,1,,a,5", "F2,a,2,,b,6", "F3,b,3,,,", "F4,b,4,,,", "F5,b,5,,,"),
			header: 1, rows: "2-6", stray: "1 another table",
		},
		{
			name: "a longer table beside", text: lines("site,mean,,frond,x", "a,5,,F1,1", "b,6,,F2,2", ",,,F3,3", ",,,F4,4", ",,,F5,5"),
			header: 1, rows: "2-6", stray: "1 another table",
		},
		{name: "the same names again to the right", text: lines("site,x,y,site,x,y", "a,1,2,b,3,4", "a,2,3,b,4,5"), header: 1, rows: "2-3", stray: "1 another table"},
		{name: "an empty column parts nothing", text: lines("frond,site,,x", "F1,a,,1", "F2,a,,2", "F3,b,,3"), header: 1, rows: "2-4"},
		{name: "a header row that is given", text: lines("site,2023,2024", "a,1,2", "b,3,4"), opt: readers.Options{HeaderRow: "1"}, header: 1, rows: "2-3"},
		{name: "a header row below others", text: lines("x,1,2", "y,3,4", "site,2023,2024", "a,1,2", "b,3,4"), opt: readers.Options{HeaderRow: "3"}, header: 3, rows: "4-5", above: "1 title, 2 title"},
		{name: "no header", text: survey(8), opt: readers.Options{HeaderRow: "none"}, header: 0, rows: "1-8"},
		{name: "no header under a title", text: survey("Kelp survey", "", 8), opt: readers.Options{HeaderRow: "none"}, header: 0, rows: "3-10", above: "1 title"},
	} {
		t.Run(c.name, func(t *testing.T) {
			table := read(t, c.text, c.opt)
			if table.HeaderRow != c.header {
				t.Errorf("header in row %d, want %d", table.HeaderRow, c.header)
			}
			if got := ranges(table); got != c.rows {
				t.Errorf("records in rows %s, want %s", got, c.rows)
			}
			if got := kinds(table.Reading.Titles); got != c.above {
				t.Errorf("above the header %q, want %q", got, c.above)
			}
			if got := kinds(table.Reading.Stray); got != c.stray {
				t.Errorf("stray %q, want %q", got, c.stray)
			}
		})
	}
}

func ranges(t *readers.Table) string {
	var out []string
	first := 0
	for i := range t.Len() {
		row := t.Row(i)
		if i == 0 || row != t.Row(i-1)+1 {
			first = row
			out = append(out, "")
		}
		out[len(out)-1] = fmt.Sprintf("%d-%d", first, row)
	}
	return strings.Join(out, " ")
}

func kinds(s []readers.Stray) string {
	var out []string
	for _, r := range s {
		out = append(out, fmt.Sprintf("%d %s", r.Row, r.Kind))
	}
	return strings.Join(out, ", ")
}

// A stray row says what it holds and what it is taken for.
func TestStrayRowsSayWhatTheyHold(t *testing.T) {
	table := read(t, survey(frondNames, 4, "average,,10.68,4.587", "", "thermometer, no. 4"), readers.Options{})
	if n := len(table.Reading.Stray); n != 2 {
		t.Fatalf("%d stray rows, want 2", n)
	}
	for i, want := range []readers.Stray{
		{Row: 6, Kind: readers.Summary, Word: "mean", Cells: []string{"average", "", "10.68", "4.587"}},
		{Row: 8, Kind: readers.Note, Cells: []string{"thermometer", "no. 4"}},
	} {
		got := table.Reading.Stray[i]
		if got.Row != want.Row || got.Kind != want.Kind || got.Word != want.Word || strings.Join(got.Cells, "|") != strings.Join(want.Cells, "|") {
			t.Errorf("stray row %+v, want %+v", got, want)
		}
	}
}

func TestNamesAndUnits(t *testing.T) {
	table := read(t, `"a (mm/d)",b [°C] ,c(),(d),"e (x) (y)","f ( g (h) )","i
(kg)",j (k`+"\n1,1,1,1,1,1,1,1\n2,2,2,2,2,2,2,2\n", readers.Options{})
	for i, want := range []struct{ header, name, unit string }{
		{"a (mm/d)", "a", "mm/d"},
		{"b [°C]", "b", "°C"},
		{"c()", "c()", ""},
		{"(d)", "(d)", ""},
		{"e (x) (y)", "e (x)", "y"},
		{"f ( g (h) )", "f", "g (h)"},
		{"i (kg)", "i", "kg"},
		{"j (k", "j (k", ""},
	} {
		c := table.Columns[i]
		if c.Header != want.header || c.Name != want.name || c.Unit != want.unit {
			t.Errorf("column %s is %q, %q, %q; want %q", c.Letter(), c.Header, c.Name, c.Unit, want)
		}
	}
}

func TestFind(t *testing.T) {
	table := read(t, lines("growth (mm),growth (cm),site,B,Temperature,,site", "1,2,a,3,4,5,b", "2,3,b,4,5,6,a"), readers.Options{})
	for _, c := range []struct{ name, letter, refusal string }{
		{"growth (mm)", "A", ""},
		{" growth (cm) ", "B", ""},
		{"B", "D", ""}, // a name beats a letter
		{"E", "E", ""},
		{"e", "E", ""},
		{"F", "F", ""},
		{"Temperature", "E", ""},
		{"growth", "", `kelp.csv:1: "growth" is the name of columns A and B: rename one in the file, or give the full header`},
		{"site", "", `kelp.csv:1: "site" is the name of columns C and G: rename one in the file, or give the full header`},
		{"temperature", "", `kelp.csv:1: there is no column "temperature"; the columns are "growth (mm)", "growth (cm)", "site", "B" and "Temperature": did you mean "Temperature"?`},
		{"grwoth", "", `kelp.csv:1: there is no column "grwoth"; the columns are "growth (mm)", "growth (cm)", "site", "B" and "Temperature": did you mean "growth (mm)" or "growth (cm)"?`},
		{"H", "", `kelp.csv:1: there is no column "H"; the columns are "growth (mm)", "growth (cm)", "site", "B" and "Temperature"`},
		{"", "", `kelp.csv:1: there is no column ""; the columns are "growth (mm)", "growth (cm)", "site", "B" and "Temperature"`},
	} {
		col, err := table.Find(c.name)
		switch {
		case c.refusal == "" && (err != nil || col.Letter() != c.letter):
			t.Errorf("%q finds %v, %v; want %s", c.name, col, err, c.letter)
		case c.refusal != "" && (err == nil || err.Error() != c.refusal):
			t.Errorf("%q: %v\nwant %s", c.name, err, c.refusal)
		}
	}
	// Two ways to type the same letter are one name.
	umlaut := read(t, lines("Bl\u00e4tter,x", "a,1", "b,2"), readers.Options{})
	if c, err := umlaut.Find("Bla\u0308tter"); err != nil || c.Letter() != "A" {
		t.Errorf("the decomposed name finds %v, %v", c, err)
	}
}

func TestNearest(t *testing.T) {
	names := []string{"growth", "growth_rate", "temperature", "site", "depth"}
	for name, want := range map[string]string{
		"grwth":   "growth",
		"gorwth":  "growth",
		"temp":    "temperature",
		"Site":    "site",
		"dept":    "depth",
		"rate":    "site,growth_rate",
		"salt":    "",
		"":        "",
		"growths": "growth",
	} {
		if got := strings.Join(readers.Nearest(name, names), ","); got != want {
			t.Errorf("nearest to %q: %q, want %q", name, got, want)
		}
	}
}

func TestUnevenRows(t *testing.T) {
	for _, c := range []struct {
		name, text, want string
	}{
		{
			"an unquoted comma moves the numbers on",
			survey("frond,site,remark,x,y", "F1,a,,1,2", "F2,a,torn, regrown,3,4", "F3,b,,5,6"),
			"uneven 3: 6 of 5, used false",
		},
		{"blank fields too many", survey("site,x", "a,1", "b,2,,", "c,3"), "uneven 3: 4 of 2, used true"},
		{"the last fields left out", survey("site,x,y,note", "a,1,2,", "b,2,3", "c,3", "a,4,5,ok"), "uneven 3: 3 of 4, used true\nuneven 4: 2 of 4, used true"},
		{"two rows in thirty", survey("site,x", strings.Repeat("a,1\n", 14)+"b,2,3", strings.Repeat("a,1\n", 14)+"b,4,5"), "uneven 16: 3 of 2, used false\nuneven 31: 3 of 2, used false"},
		{"a field left out before a text", survey("site,x,part,y", "a,1,leaf,2", "b,leaf,3", "c,3,leaf,4", "a,4,stem,5"), "uneven 3: 3 of 4, used false"},
		{"all rows end in a delimiter", survey("site,x", "a,1,", "b,2,", "c,3,"), ""},
		{"all rows lack the last field", survey("site,x,note", "a,1", "b,2", "c,3"), ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			table := read(t, c.text, readers.Options{})
			var out []string
			for _, u := range table.Reading.Uneven {
				out = append(out, fmt.Sprintf("uneven %d: %d of %d, used %t", u.Row, u.Fields, u.Want, u.Kind.Used()))
				if table.Row(u.Record) != u.Row {
					t.Errorf("record %d lies in row %d, not %d", u.Record, table.Row(u.Record), u.Row)
				}
				if (table.RowFault(u.Record) == "") != u.Kind.Used() {
					t.Errorf("row %d has the fault %q", u.Row, table.RowFault(u.Record))
				}
			}
			same(t, strings.Join(out, "\n"), c.want)
		})
	}
}

// A row with a fault keeps its place and its cells, and gives no values.
func TestRowsWithFaultsGiveNoValues(t *testing.T) {
	table := read(t, survey("frond,site,x", "F1,a,1", "F2,torn, once,2", "F3,b,3"), readers.Options{})
	if table.Len() != 3 || table.Row(1) != 3 || table.RowFault(1) != "has 4 of 3 fields" || len(table.Faults()) != 1 || table.Faults()[0] != 1 {
		t.Fatalf("got:\n%s", show(table))
	}
	x, site := table.Columns[2], table.Columns[1]
	if _, ok := x.Number(1); ok {
		t.Error("the row gives a number")
	}
	if _, ok := site.Label(1); ok {
		t.Error("the row gives a label")
	}
	if _, ok := x.Ordinal(1); ok {
		t.Error("the row gives an ordinal")
	}
	if _, codes := site.Levels(); codes[1] != -1 {
		t.Error("the row has a level")
	}
	if got := site.Cell(1).Text; got != "torn" {
		t.Errorf("its cell holds %q", got)
	}
	if n := site.Count(readers.Text); n != 2 {
		t.Errorf("%d texts are counted, want 2", n)
	}
}

func TestDecimalSign(t *testing.T) {
	for _, c := range []struct {
		name, text, decimal string
		want                string // the cells of x
	}{
		{"points without evidence where the delimiter is a comma", lines("s,x", "a,2.517", "b,3.125"), ".", "2.517 3.125"},
		{"points without evidence where it is a tab", "s\tx\na\t2.517\nb\t3.125\n", ".", "2.517 3.125"},
		{"a comma without three digits", lines("s;x", "a;7,5", "b;2,517"), ",", "7.5 2.517"},
		{"a leading zero", lines("s;x", "a;0,125", "b;2,517"), ",", "0.125 2.517"},
		{"both signs in one cell", lines("s;x", "a;1.042,7", "b;2.517"), ",", "1042.7 2517"},
		{"a sign given twice", lines("s;x", "a;1.042.700", "b;2,517"), ",", "1.0427e+06 2.517"},
		{"a sign given twice, the other way", lines("s;x", "a;1,042,700", "b;2.517"), ".", "1.0427e+06 2.517"},
		{"an exponent", lines("s;x", "a;2,517e3", "b;2,517"), ",", "2517 2.517"},
		{"the majority reads the file", lines("s;x", "a;7,5", "b;8,5", "c;9.5"), ",", `7.5 8.5 "9.5"`},
		{"the majority reads the file, the other way", lines("s;x", "a;7.5", "b;8.5", "c;9,5"), ".", `7.5 8.5 "9,5"`},
		{"commas between thousands where points decide", lines("s,x", "a,7.5", `b,"2,517"`, `c,"1,002,517.5"`), ".", "7.5 2517 1.0025175e+06"},
		{"points are no evidence where a comma is", "s\tx\na\t1.042\nb\t2.517\nc\t7,5\n", ",", "1042 2517 7.5"},
		{"numbers with a unit tell too", lines("s;x", "a;7,5%", "b;2,517%"), ",", "7.5'% 2.517'%"},
		{"whole numbers need no sign", lines("s;x", "a;7", "b;8"), ".", "7 8"},
		{"spaces between thousands", lines("s;x", "a;1 042,5", "b;7"), ",", "1042.5 7"},
	} {
		t.Run(c.name, func(t *testing.T) {
			table := read(t, c.text, readers.Options{})
			if table.Reading.Decimal != c.decimal {
				t.Errorf("decimal sign %q, want %q", table.Reading.Decimal, c.decimal)
			}
			var cells []string
			for i := range table.Len() {
				cells = append(cells, showCell(table.Columns[1], i))
			}
			same(t, strings.Join(cells, " "), c.want)
		})
	}
}

// The sign of a file that is larger than the sample is decided by all of it.
func TestDecimalSignOfTheWholeFile(t *testing.T) {
	var b strings.Builder
	b.WriteString("s;x\n")
	for i := range 120_000 {
		fmt.Fprintf(&b, "a;%d\n", 1_000_000+i)
	}
	for range 10 {
		b.WriteString("a;7,25\n")
	}
	table := read(t, b.String(), readers.Options{})
	if v, ok := table.Columns[1].Number(table.Len() - 1); !ok || v != 7.25 || table.Reading.Decimal != "," {
		t.Errorf("the last number is %v (%t), the sign %q", v, ok, table.Reading.Decimal)
	}
}

// No sound table loses a row: whatever its groups are called and wherever cells are
// missing, all rows are records and none is taken for a sum, a note or a title.
func TestSoundTablesLoseNoRow(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 3))
	groups := [...][]string{
		{"a", "b"},
		{"exposed", "sheltered"},
		{"N", "P", "K", "NPK"},
		{"max", "min"},
		{"total", "part"},
		{"1", "2", "3"},
		{"A1", "B2"},
		{"North bay", "South bay"},
		{"control", "high dose"},
		{"m", "f"},
		{"mean", "median"},
	}
	islands := [...]string{"Porto Santo", "Rio", "La Palma", "Hiva Oa", "Ile", "Sal", "Bom dia", "Ano"}
	for k := range 600 {
		n := 8 + rng.IntN(50)
		decimals, group, missing := rng.IntN(4), groups[rng.IntN(len(groups))], [...]string{"", "NA", "-"}[rng.IntN(3)]
		share := [...]float64{0, 0.05, 0.15}[rng.IntN(3)]
		design, labels := rng.IntN(2) == 0, rng.IntN(4)
		text := []string{"label,group,x,y"}
		for i := range n {
			label := [...]string{fmt.Sprintf("F%02d", i+1), fmt.Sprint(i + 1), islands[rng.IntN(len(islands))], fmt.Sprintf("plot %d", 1+i%5)}[labels]
			x := 10 * rng.Float64()
			if design {
				x = float64(5 * (i % 5))
			}
			cells := []string{label, group[rng.IntN(len(group))], fmt.Sprintf("%.*f", decimals, x), fmt.Sprintf("%.*f", 3-decimals, 3+2*rng.NormFloat64())}
			if c := rng.IntN(4); rng.Float64() < share {
				cells[c] = missing
			}
			text = append(text, strings.Join(cells, ","))
		}
		table := read(t, lines(text...), readers.Options{})
		if table.Len() != n || len(table.Reading.Stray)+len(table.Reading.Titles)+len(table.Faults()) > 0 {
			t.Fatalf("table %d: %d of %d rows, stray %s:\n%s", k, table.Len(), n, kinds(table.Reading.Stray), lines(text...))
		}
	}
}
