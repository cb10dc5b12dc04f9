package readers_test

import (
	"strings"
	"testing"

	"footing/readers"
)

func TestTextTables(t *testing.T) {
	for _, c := range []struct {
		name, text, want string
		opt              readers.Options
	}{
		{
			name: "a plain table",
			text: lines("frond,site,temperature (°C),growth [mm/d]", "F01,exposed,7.25,3.125", "F02,sheltered,8.50,4"),
			want: lines("header 1: A frond text; B site text; C temperature [°C] number; D growth [mm/d] number;",
				`2: "F01" "exposed" 7.25 3.125`, `3: "F02" "sheltered" 8.5 4`),
		},
		{
			name: "semicolons and decimal commas",
			text: lines("site;x", "a;7,25", "b;-0,5", "c;12"),
			want: lines("header 1: A site text; B x number;", `2: "a" 7.25`, `3: "b" -0.5`, `4: "c" 12`),
		},
		{
			name: "tabs, with empty cells at both ends",
			text: "site\tx\ty\n\t1\t2\nb\t\t3\nc\t4\t\n",
			want: lines("header 1: A site text; B x number; C y number;", `2: _ 1 2`, `3: "b" _ 3`, `4: "c" 4 _`),
		},
		{
			name: "bars at both ends of every line",
			text: lines("| site | x |", "|------|---|", "| a | 1 |", "| b | 2.5 |"),
			want: lines("header 1: A site text; B x number;", `3: "a" 1`, `4: "b" 2.5`),
		},
		{
			name: "bars at the ends of some lines only",
			text: lines("|x|y|", "|1|2|", "a|3|4|"),
			want: lines("header 1: A  text; B x number; C y number;", `2: _ 1 2`, `3: "a" 3 4`),
		},
		{
			name: "sep= sets the delimiter",
			text: lines("sep=|", "site|x", "a, b; c|1", "a, b; d|2"),
			want: lines("header 2: A site text; B x number;", `3: "a, b; c" 1`, `4: "a, b; d" 2`),
		},
		{
			name: "an option beats sep=",
			text: lines("sep=|", "site;x", "a|1;1", "b|2;2"),
			opt:  readers.Options{Delimiter: ";"},
			want: lines("header 2: A site text; B x number;", `3: "a|1" 1`, `4: "b|2" 2`),
		},
		{
			name: "a tie of delimiters goes to the one whose columns are numbers",
			text: lines("a,b;c,d", "1,5;2,5", "2,5;3,5"),
			want: lines("header 1: A a,b number; B c,d number;", `2: 1.5 2.5`, `3: 2.5 3.5`),
		},
		{
			name: "one column, in which blank lines are blank cells",
			text: lines("growth", "1.5", "", "3", ""),
			want: lines("header 1: A growth number;", `2: 1.5`, `3: _`, `4: 3`),
		},
		{
			name: "quotes",
			text: lines(`site,note,x`, `a,"one, two",1`, `b,"she said ""no""",2`, `c,6" pot,3`, `d, "padded" ,"4.5"`, `e,"",6`, "f,\"two\r\nlines\",7"),
			want: lines("header 1: A site text; B note text; C x number;", `2: "a" "one, two" 1`, `3: "b" "she said \"no\"" 2`,
				`4: "c" "6\" pot" 3`, `5: "d" "padded" 4.5`, `6: "e" _ 6`, `7: "f" "two\nlines" 7`),
		},
		{
			name: "quotes that are not doubled",
			text: lines(`site,note,x`, `a,"6" pot",1`, `b,"exposed" side,2`, `c,plain,3`),
			want: lines("header 1: A site text; B note text; C x number;", `2: "a" "6\" pot" 1`, `3: "b" "\"exposed\" side" 2`, `4: "c" "plain" 3`),
		},
		{
			name: "comments, one of them with a quote",
			text: lines(`# tide, "low`, "site,x", "a,1", "# b,2 was lost", "c,3"),
			want: lines("header 2: A site text; B x number;", `3: "a" 1`, `5: "c" 3`),
		},
		{
			name: "a label that starts with #",
			text: lines("tag,x", "#11,1", "#12,2", "# not a row", "13,3"),
			want: lines("header 1: A tag text; B x number;", `2: "#11" 1`, `3: "#12" 2`, `5: 13 3`),
		},
		{
			name: "a comment that names the columns",
			text: lines("# kelp", "# site,x", "a,1", "b,2"),
			want: lines("header 2: A site text; B x number;", `3: "a" 1`, `4: "b" 2`),
		},
		{
			name: "padding of every kind is trimmed",
			text: lines("site,x", "\u00a0a\u2007,\u20091\u202f", "\tb\u200b,\ufeff2"),
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" 2`),
		},
		{
			name: "missing codes in any case",
			text: lines("site,x", "a,1", "b,NA", "c,n/a", "d,NaN", "e,Null", "f,none", "g,-", "h,–", "i,.", "j,..", "k,?", "l,ND", "m,n.d.", "n,Missing", "o,", "p,2"),
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" <NA>`, `4: "c" <n/a>`, `5: "d" <NaN>`, `6: "e" <Null>`, `7: "f" <none>`,
				`8: "g" <->`, `9: "h" <–>`, `10: "i" <.>`, `11: "j" <..>`, `12: "k" <?>`, `13: "l" <ND>`, `14: "m" <n.d.>`, `15: "n" <Missing>`, `16: "o" _`, `17: "p" 2`),
		},
		{
			name: "codes that the owner declares",
			text: lines("site,x", "a,1", "b,-99", "c,-99.0", "d,lost", "e,Lost", "f,99", "g,3", "h,4"),
			opt:  readers.Options{Missing: []string{"-99", "lost"}},
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" <-99>`, `4: "c" <-99.0>`, `5: "d" <lost>`, `6: "e" "Lost"`, `7: "f" 99`, `8: "g" 3`, `9: "h" 4`),
		},
		{
			name: "what is no number in a column of numbers",
			text: lines("site,x", "a,1", "b,<6", "c,14.6 C", "d,#DIV/0!", "e,#####", "f,TRUE", "g,2024-06-04", "h,4. Jun", "i,6/4", "j,0x1F", "k,7,5 "+"", "l,2", "m,3", "n,4", "o,5", "p,6", "q,7", "r,8", "s,9", "t,10", "u,11"),
			want: lines("header 1: A site text; B x number;", `2: "a" 1`, `3: "b" "<6"`, `4: "c" "14.6 C"`, `5: "d" {#DIV/0!}`, `6: "e" {#####}`, `7: "f" ?TRUE`,
				`8: "g" @2024-06-04`, `9: "h" @4. Jun`, `10: "i" @6/4`, `11: "j" "0x1F"`, `12: "k" 7 -- has 3 of 2 fields`, `13: "l" 2`, `14: "m" 3`, `15: "n" 4`, `16: "o" 5`, `17: "p" 6`, `18: "q" 7`, `19: "r" 8`, `20: "s" 9`, `21: "t" 10`, `22: "u" 11`,
				"uneven 12: 3 of 2, used false"),
		},
		{
			name: "a unit in every cell",
			text: lines("site,cover,temperature", "a,35%,4.1 °C", "b,7.5%,NA", "c,,5 °C"),
			want: lines("header 1: A site text; B cover [%] number; C temperature [°C] number;", `2: "a" 35'% 4.1'°C`, `3: "b" 7.5'% <NA>`, `4: "c" _ 5'°C`),
		},
		{
			name: "a unit in most cells",
			text: lines("site,length", "a,4.1 cm", "b,5 mm", "c,6", "d,7 cm", "e,8 cm", "f,9 cm"),
			want: lines("header 1: A site text; B length [cm] number;", `2: "a" 4.1'cm`, `3: "b" "5 mm"`, `4: "c" 6`, `5: "d" 7'cm`, `6: "e" 8'cm`, `7: "f" 9'cm`),
		},
		{
			name: "units that differ are no unit of the column",
			text: lines("site,length,y", "a,4.1 cm,1", "b,5 mm,2", "c,6 m,3"),
			want: lines("header 1: A site text; B length text; C y number;", `2: "a" "4.1 cm" 1`, `3: "b" "5 mm" 2`, `4: "c" "6 m" 3`),
		},
		{
			name: "dates and truth values make columns of their own",
			text: lines("day,seen,x", "2024-06-04,TRUE,1", "2024-06-05,FALSE,2", "2024-06-06,true,3"),
			want: lines("header 1: A day date; B seen bool; C x number;", `2: @2024-06-04 ?TRUE 1`, `3: @2024-06-05 ?FALSE 2`, `4: @2024-06-06 ?true 3`),
		},
		{
			name: "a range",
			text: lines("Kelp,,,", ",site,x,y", ",a,1,9", ",b,2,9", ",c,3,9", "end,,,"),
			opt:  readers.Options{Range: "B2:C4"},
			want: lines("header 2: B site text; C x number;", `3: "a" 1`, `4: "b" 2`),
		},
		{
			name: "columns without a name, and empty ones",
			text: lines("site,,x,,", "a,5,1,,", "b,6,2,,"),
			want: lines("header 1: A site text; B  number; C x number;", `2: "a" 5 1`, `3: "b" 6 2`),
		},
	} {
		t.Run(c.name, func(t *testing.T) { same(t, show(read(t, c.text, c.opt)), c.want) })
	}
}

// A file is the same table whatever ends its lines.
func TestLineEndsDoNotMatter(t *testing.T) {
	text := lines("site,note,x", "a,one,1", "", "b,two,2")
	want := show(read(t, text, readers.Options{}))
	for _, end := range []string{"\r\n", "\r"} {
		same(t, show(read(t, strings.ReplaceAll(text, "\n", end), readers.Options{})), want)
	}
	same(t, show(read(t, strings.TrimSuffix(text, "\n"), readers.Options{})), want)
}

func TestReadingIsTold(t *testing.T) {
	for _, c := range []struct {
		name, text                   string
		opt                          readers.Options
		encoding, delimiter, decimal string
		given, note                  string
	}{
		{name: "all decided", text: lines("a,b", "x,1.5", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: "."},
		{name: "commas", text: lines("a;b", "x;1,5", "y;2"), encoding: "UTF-8", delimiter: ";", decimal: ","},
		{name: "tab", text: "a\tb\nx\t1.5\ny\t2\n", encoding: "UTF-8", delimiter: "\t", decimal: "."},
		{name: "latin", text: "a,b\n\xe9,1.5\n\xe9,2\n", encoding: "Windows-1252", delimiter: ",", decimal: ".", note: "read as Windows-1252"},
		{
			name: "given", text: lines("a;b", "x;1,5", "y;2"), opt: readers.Options{Delimiter: ";", Decimal: ",", Encoding: "utf-8", HeaderRow: "1"},
			encoding: "UTF-8", delimiter: ";", decimal: ",", given: "encoding delimiter decimal header-row",
		},
		{name: "title", text: lines("Kelp", "", "a,b", "x,1.5", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: `row 1 is a title: "Kelp"`},
		{name: "spaces", text: lines("a,b", " x ,1.5", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "spaces around the text of 1 cell were left out"},
		{name: "mark", text: lines("a,b", "x\u200b,1.5", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "1 cell holds an invisible mark (U+FEFF or U+200B), the first in line 2"},
		{name: "thousands", text: lines("a,b", `x,"1,042.5"`, "y,2.5"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "1 cell is written with signs between thousands, in b (B)"},
		{name: "unit", text: lines("a,b", "x,1.5%", "y,2%"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "column b (B) bears the unit % in every cell"},
		{name: "two units", text: lines("a,b (cm)", "x,1.5 mm", "y,2 mm"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "the header of column b (B) has the unit cm, its cells mm"},
		{name: "sep", text: lines("sep=;", "a;b", "x;1", "y;2"), encoding: "UTF-8", delimiter: ";", decimal: ".", note: "the first line, sep=;, sets the delimiter"},
		{name: "comment", text: lines("# kelp", "a,b", "x,1", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "1 line that starts with # was passed over"},
		{name: "no name", text: lines("a,,b", "x,1,3", "y,2,4"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "column B has no name"},
		{name: "quote", text: lines("a,b", `"6" pot",1`, "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "line 2 has a quote inside a quoted field"},
		{name: "long quote", text: "a,b\n\"" + strings.Repeat("x\n", 70) + "\",1\ny,2\n", encoding: "UTF-8", delimiter: ",", decimal: ".", note: "the quoted field that opens in line 2 is more than 64 lines long"},
		{name: "lost", text: lines("a,b", "x\ufffd,1", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "line 2 holds U+FFFD, which stands for a character that was lost before"},
		{name: "units", text: lines("a,b", ",mm", "x,1", "y,2"), encoding: "UTF-8", delimiter: ",", decimal: ".", note: "row 2 holds units, no data"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := read(t, c.text, c.opt).Reading
			if r.Encoding != c.encoding || r.Delimiter != c.delimiter || r.Decimal != c.decimal {
				t.Errorf("read as %q, %q, %q", r.Encoding, r.Delimiter, r.Decimal)
			}
			if got := strings.Join(r.Given, " "); got != c.given {
				t.Errorf("given %q, want %q", got, c.given)
			}
			if c.note == "" && len(r.Notes) > 0 {
				t.Errorf("notes %q, want none", r.Notes)
			}
			if !strings.Contains(strings.Join(r.Notes, "\n"), c.note) {
				t.Errorf("notes %q lack %q", r.Notes, c.note)
			}
		})
	}
}

// What a cell holds beside its value.
func TestCellsKeepWhatWasWritten(t *testing.T) {
	table := read(t, lines("site,x", "a,7.50", `b,"1,042.5"`, "c,1e3", "d, 3", "e,+5", "f,.25", "g,-99", "h,6,", "i,7", "j,1e999", "k,Inf", "l,0x1F", `m,"7,5"`, "n,4 cm", "o,12345678901234567890", "p,0.1234567890123456789", "q,0.30000000000000004", "r,-12345678901234.568"),
		readers.Options{Missing: []string{"-99"}})
	x, err := table.Find("x")
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []struct {
		text      string
		decimals  int
		look      readers.Look
		thousands bool
		padded    bool
		declared  bool
	}{
		{text: "7.50", decimals: 2},
		{text: "1,042.5", decimals: 1, thousands: true},
		{text: "1e3", decimals: -1},
		{text: "3", padded: true},
		{text: "+5"},
		{text: ".25", decimals: 2},
		{text: "-99", declared: true},
		{text: "6"},
		{text: "7"},
		{text: "1e999", decimals: -1, look: readers.OutOfRange},
		{text: "Inf", decimals: -1, look: readers.Infinite},
		{text: "0x1F", decimals: -1, look: readers.Foreign},
		{text: "7,5", decimals: -1, look: readers.OtherSign},
		{text: "4 cm", decimals: -1, look: readers.Measure},
		{text: "12345678901234567890"},
		{text: "0.1234567890123456789", decimals: 19},
		{text: "0.30000000000000004", decimals: 17},
		{text: "-12345678901234.568", decimals: 3},
	} {
		cell := x.Cell(i)
		if cell.Text != want.text || cell.Decimals != want.decimals || cell.Look != want.look ||
			cell.Thousands != want.thousands || cell.Padded != want.padded || cell.Declared != want.declared {
			t.Errorf("row %d is %+v, want %+v", table.Row(i), cell, want)
		}
	}
}

// 3, 3.0 and the text "3" are one label; what is no label has none.
func TestLabels(t *testing.T) {
	table := read(t, lines("plot,x", "3,1", "3.0,2", `"3",3`, "3e0,4", "+3,5", "-0,6", "0,7", "007,8", "a,9", "NA,10", ",11", "#N/A,12", "TRUE,13", "2024-06-04,14"), readers.Options{})
	plot := table.Columns[0]
	for i, want := range []string{"3", "3", "3", "3", "3", "0", "0", "007", "a", "", "", "", "TRUE", "2024-06-04"} {
		got, ok := plot.Label(i)
		if got != want || ok != (want != "") {
			t.Errorf("row %d has the label %q (%t), want %q", table.Row(i), got, ok, want)
		}
	}
	names, codes := plot.Levels()
	if got := strings.Join(names, " "); got != "3 0 007 a TRUE 2024-06-04" {
		t.Errorf("levels %q", got)
	}
	for i := range table.Len() {
		label, ok := plot.Label(i)
		if !ok && codes[i] != -1 || ok && names[codes[i]] != label {
			t.Errorf("row %d has the code %d, label %q", table.Row(i), codes[i], label)
		}
	}
}

func TestOrdinals(t *testing.T) {
	table := read(t, lines("when,x", "2024-06-04,1", "4 Jun 2024 12:00,2", "6/4,3", "5,4", "TRUE,5", "late,6"), readers.Options{})
	for i, want := range []float64{45447, 45447.5, -1, 5, 1, -1} {
		got, ok := table.Columns[0].Ordinal(i)
		if ok != (want >= 0) || ok && got != want {
			t.Errorf("row %d: %v, %t; want %v", table.Row(i), got, ok, want)
		}
	}
}
