package readers_test

import (
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"
	"testing"

	"footing/readers"
)

// Every text that can't be read, with the sentence that says so.
func TestTextRefusals(t *testing.T) {
	for _, c := range []struct {
		name, file, text, want string
		opt                    readers.Options
	}{
		{name: "nothing", text: "", want: "kelp.csv: is empty"},
		{name: "blank lines", text: "\n \n\t\r\n", want: "kelp.csv: is empty: it has blank lines only"},
		{name: "a mark alone", text: "\ufeff", want: "kelp.csv: is empty: it has blank lines only"},
		{name: "commas alone", text: ",,,\n,,,\n", want: "kelp.csv: is empty"},
		{name: "comments alone", text: "# a,b\n# 1,2\n", want: "kelp.csv: has only comments"},
		{name: "NUL bytes", text: "a,b\nx,1\ny\x00,2\n", want: "kelp.csv: line 3 holds NUL bytes: not text, or UTF-16 without its mark; try --encoding"},
		{name: "UTF-16 without a mark", text: utf16Bytes("a,b\nx,1\n", false), want: "kelp.csv: line 1 holds NUL bytes: not text, or UTF-16 without its mark; try --encoding"},
		{name: "control characters", text: "a,b\nx,1\n\x01\x02\x03,2\n", want: "kelp.csv:3: holds control characters, and more than one character in a hundred is one: not text"},
		{name: "two encodings", text: "a,b\né,1\r\n\xe9,2\n", want: "kelp.csv:3: is not UTF-8, while other lines are: save the file in one encoding, or name it with --encoding"},
		{name: "no encoding", text: "a,b\nx,1\n\x81,2\n", want: "kelp.csv:3: is neither UTF-8 nor Windows-1252: name the encoding with --encoding"},
		{name: "UTF-8 with a mark that is none", text: "\ufeffa,b\n\xe9,1\n", want: "kelp.csv:2: is not UTF-8, while other lines are: save the file in one encoding, or name it with --encoding"},
		{name: "not UTF-8, though it was told", text: "a,b\n\xe9,1\n", opt: readers.Options{Encoding: "utf-8"}, want: "kelp.csv:2: is not UTF-8: name another encoding with --encoding"},
		{name: "an encoding that is none", text: "a,b\nx,1\n", opt: readers.Options{Encoding: "klingon"}, want: `kelp.csv: there is no encoding "klingon" here: give a name such as utf-8, windows-1252, utf-16le, shift_jis`},
		{name: "a mark against the encoding", text: "\xff\xfe" + utf16Bytes("a,b\n", false), opt: readers.Options{Encoding: "utf-8"}, want: "kelp.csv: starts with the mark of UTF-16LE, so it is not UTF-8: leave --encoding out"},
		{name: "half a surrogate", text: "\xff\xfe" + utf16Bytes("a,b\nx", false) + "\x00\xd8" + utf16Bytes(",1\n", false), want: "kelp.csv:2: holds a character that UTF-16LE does not have: name another encoding with --encoding"},
		{name: "an odd byte", text: "\xff\xfe" + utf16Bytes("a,b\nx,1\n", false) + "1", want: "kelp.csv:3: holds a character that UTF-16LE does not have: name another encoding with --encoding"},
		{name: "bad Shift JIS", text: "a,b\nx,1\n\x8a\x01,2\n", opt: readers.Options{Encoding: "shift_jis"}, want: "kelp.csv:3: holds a character that shift_jis does not have: name another encoding with --encoding"},

		{name: "a quote that never closes", text: lines("a,b", `"x,1`, "y,2"), want: "kelp.csv:2: opens a quote that never closes: close it, or double it if it belongs to the text"},
		{name: "a quote that never closes, after one with a break", text: lines("a,b", "\"x\ny\",1", `z,"2`, "w,3"), want: "kelp.csv:4: opens a quote that never closes: close it, or double it if it belongs to the text"},
		{name: "a quote that closes in another row", text: lines("a,b", `"x,1`, `y,2`, `"z",3`), want: "kelp.csv:2: opens a quote that never closes: close it, or double it if it belongs to the text"},
		{name: "two delimiters", text: lines("a;b,c", "1;2,3"), want: "kelp.csv: the fields could be delimited by , or ;: give --delimiter"},
		{name: "a delimiter that is none", text: lines("a;b", "1;2"), opt: readers.Options{Delimiter: ";;"}, want: `kelp.csv: the delimiter ";;" is not one character: give , ; | or tab`},
		{name: "a sign that could be either", text: lines("s;x", "a;12", "b;2,517", "c;3,125"), want: `kelp.csv:3:2: "2,517" could be 2.517 or 2517, and no number of the file tells: give --decimal . or --decimal ,`},
		{name: "a point that could be either", text: lines("s;x", "a;12", "b;2.517"), want: `kelp.csv:3:2: "2.517" could be 2.517 or 2517, and no number of the file tells: give --decimal . or --decimal ,`},
		{name: "quoted signs that could be either", text: lines("s,x", `a,"2,517"`, `b,"3,125"`), want: `kelp.csv:2:2: "2,517" could be 2.517 or 2517, and no number of the file tells: give --decimal . or --decimal ,`},
		{name: "both signs, equally often", text: lines("s;x", "a;7,5", "b;7.5"), want: "kelp.csv: has as many numbers with a decimal comma as with a decimal point, 1 of each: give --decimal . or --decimal ,"},
		{name: "a decimal sign that is none", text: lines("a;b", "1;2"), opt: readers.Options{Decimal: ";"}, want: `kelp.csv: the decimal sign ";" is neither . nor ,`},

		{name: "no header", text: survey(8), want: `kelp.csv:1:3: has numbers where names are expected, the first is "8.62": give --header-row N, or --header-row none`},
		{name: "no header under a title", text: survey("Kelp survey", "", 8), want: `kelp.csv:3:3: has numbers where names are expected, the first is "8.62": give --header-row N, or --header-row none`},
		{name: "no header above a second one", text: survey(4, frondNames, 8), want: `kelp.csv:1:3: has numbers where names are expected, the first is "8.62": give --header-row N, or --header-row none`},
		{name: "years for names", text: lines("site,2023,2024", "a,1,2", "b,3,4"), want: `kelp.csv:1:2: has numbers where names are expected, the first is "2023": give --header-row N, or --header-row none`},
		{name: "texts alone", text: lines("a,b", "x,y", "z,w"), want: "kelp.csv: has no row of names with a column of numbers under it: give --header-row N, or --header-row none"},
		{name: "codes alone", text: lines("a,b", "NA,-", "NA,?"), want: "kelp.csv: has no row of names with a column of numbers under it: give --header-row N, or --header-row none"},
		{name: "a header alone", text: lines("a,b"), want: "kelp.csv:1: has a header and no rows"},
		{name: "a header alone under a title", text: lines("Kelp survey", "", "a,b,c"), want: "kelp.csv:3: has a header and no rows"},
		{name: "a header and its sums", text: lines("a,b", "", "b,1"), opt: readers.Options{HeaderRow: "3"}, want: "kelp.csv:3: has a header and no rows"},
		{name: "a header row that is blank", text: lines("a,b", "", "b,1"), opt: readers.Options{HeaderRow: "2"}, want: "kelp.csv:2: row 2 is blank or not there, so it can't be the header"},
		{name: "a header row that is none", text: lines("a,b", "b,1"), opt: readers.Options{HeaderRow: "first"}, want: `kelp.csv: the header row "first" is neither a row number nor none`},
		{name: "a range that is none", text: lines("a,b", "b,1"), opt: readers.Options{Range: "A1-B2"}, want: `kelp.csv: the range "A1-B2" is not of the form A1:F60`},
		{
			name: "names for the rows, but not for their column", text: lines("a,b", "r1,1,2", "r2,3,4", "r3,5,6"),
			want: "kelp.csv:2: 3 of 3 rows have more or fewer fields than the header, first row 2 with 3 of 2: check --delimiter, and whether fields that hold it are quoted",
		},
		{
			name: "decimal commas between commas", text: lines("a,b", "x,1,5", "y,2,5", "z,3"),
			want: "kelp.csv:2: 2 of 3 rows have more or fewer fields than the header, first row 2 with 3 of 2: check --delimiter, and whether fields that hold it are quoted",
		},

		{name: "HTML", text: "<!DOCTYPE html><p>1</p>", want: "kelp.csv: is HTML (a web page), not a table: save it as CSV or .xlsx"},
		{name: "HTML after a mark", text: "\ufeff\n <HTML><p>1</p>", want: "kelp.csv: is HTML (a web page), not a table: save it as CSV or .xlsx"},
		{name: "an HTML table", text: "<table><tr><td>1</td></tr></table>", want: "kelp.csv: is HTML (a web page), not a table: save it as CSV or .xlsx"},
		{name: "XHTML", text: "<?xml version=\"1.0\"?>\n<html><p>1</p></html>", want: "kelp.csv: is HTML (a web page), not a table: save it as CSV or .xlsx"},
		{name: "XML", text: "<?xml version=\"1.0\"?><rows/>", want: "kelp.csv: is XML, not a table: save it as CSV or .xlsx"},
		{name: "gzip", text: "\x1f\x8b\x08\x00", want: "kelp.csv: is gzip-compressed: unpack it first"},
		{name: "PDF", text: "%PDF-1.7", want: "kelp.csv: is a PDF document, not a table: save the table as CSV or .xlsx"},
		{name: "PNG", text: "\x89PNG\r\n\x1a\n", want: "kelp.csv: is a PNG picture, not text"},
		{name: "JPEG", text: "\xff\xd8\xff\xe0", want: "kelp.csv: is a JPEG picture, not text"},
		{name: "a zip archive of other things", text: zipOf("notes.txt", "hello"), want: "kelp.csv: is a zip archive without a workbook in it: unpack it first, or save the table as .xlsx or CSV"},
		{name: "a zip archive that is cut", text: zipOf("notes.txt", "hello")[:40], want: "kelp.csv: is a cut or damaged zip archive: save the workbook again"},
		{name: "an empty zip archive", text: zipOf(), want: "kelp.csv: is an empty zip archive"},
		{name: "an old workbook", text: "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + strings.Repeat("\x00", 600) + utf16Bytes("Workbook", false), want: "kelp.csv: is an old binary workbook (.xls): save it as .xlsx or CSV"},
		{name: "a workbook behind a password", file: "kelp.xlsx", text: "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + strings.Repeat("\x00", 70_000) + utf16Bytes("EncryptedPackage", false), want: "kelp.xlsx: is protected by a password: save it without one"},
		{name: "a binary workbook", file: "kelp.xlsx", text: zipOf("xl/workbook.bin", "x"), want: "kelp.xlsx: is a binary workbook (.xlsb): save it as .xlsx or CSV"},
		{name: "text by the name of a workbook", file: "kelp.XLSX", text: lines("a,b", "x,1"), want: "kelp.XLSX: is text, though its name ends in .XLSX: rename it to end in .csv, or save it as a workbook"},
		{name: "a workbook by the name of text", file: "kelp.csv", text: sheetBook(`<row><c t="inlineStr"><is><t>a</t></is></c></row>`), want: "kelp.csv: is a workbook, though its name ends in .csv: rename it to end in .xlsx"},
	} {
		t.Run(c.name, func(t *testing.T) {
			file := c.file
			if file == "" {
				file = "kelp.csv"
			}
			if got := refused(t, file, c.text, c.opt).Error(); got != c.want {
				t.Errorf("got:\n%s\nwant:\n%s", got, c.want)
			}
		})
	}
}

func TestLimits(t *testing.T) {
	text := lines("a,b,c", "x,1,2", "y,3,4")
	for _, c := range []struct {
		name, text string
		limits     readers.Limits
		want       string // empty when it is read
	}{
		{"the defaults", text, readers.Limits{}, ""},
		{"file", text, readers.Limits{File: 10}, "kelp.csv: has more than 10 bytes, and more isn't read: raise it with --limit file=40"},
		{"file, just enough", text, readers.Limits{File: int64(len(text))}, ""},
		{"line", "a,b\n" + strings.Repeat("x", 3000) + ",1\ny,2\n", readers.Limits{Line: 2 << 10}, "kelp.csv: line 2 is longer than 2 KiB: raise the limit with --limit line=8KiB, or check the line ends"},
		{"line, the only one", "a,b;" + strings.Repeat("x", 3000), readers.Limits{Line: 2 << 10}, "kelp.csv: line 1 is longer than 2 KiB: raise the limit with --limit line=8KiB, or check the line ends"},
		{"line, in quotes", "a,b\n\"" + strings.Repeat("x\n", 2000) + "\",1\ny,2\n", readers.Limits{Line: 2 << 10}, "kelp.csv: line 2 is longer than 2 KiB: raise the limit with --limit line=8KiB, or check the line ends"},
		{"columns", text, readers.Limits{Columns: 2}, "kelp.csv:1: has more than 2 columns: raise the limit with --limit columns=3"},
		{"columns, just enough", text, readers.Limits{Columns: 3}, ""},
		{"cells", text, readers.Limits{Cells: 5}, "kelp.csv:2: has more than 5 filled cells: raise the limit with --limit cells=20"},
		{"cells, just enough", text, readers.Limits{Cells: 9}, ""},
		{"cells, of which blank ones are none", "a,b,c\nx,1,\ny,,2\n", readers.Limits{Cells: 7}, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := readers.Read("kelp.csv", strings.NewReader(c.text), readers.Options{Limits: c.limits})
			switch {
			case c.want == "" && err != nil:
				t.Error(err)
			case c.want != "" && (err == nil || err.Error() != c.want):
				t.Errorf("got %v\nwant %s", err, c.want)
			}
		})
	}
}

// endless is a stream without an end.
type endless struct{ read int }

func (e *endless) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = "1,2\n"[i%4]
	}
	e.read += len(p)
	return len(p), nil
}

// A stream is read no further than the limit, and a little for the last block.
func TestStreamsStopAtTheLimit(t *testing.T) {
	var e endless
	_, err := readers.Read("-", &e, readers.Options{Limits: readers.Limits{File: 1 << 20}})
	if want := "-: has more than 1 MiB, and more isn't read: raise it with --limit file=4MiB"; err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	if e.read > 3<<20 {
		t.Errorf("%d bytes were read", e.read)
	}
}

func TestLimitsAreSetByName(t *testing.T) {
	var l readers.Limits
	for _, c := range [][2]string{{"file", "300MiB"}, {"unpacked", "1 GiB"}, {"line", "8KiB"}, {"columns", "20"}, {"cells", "1,000"}} {
		if err := l.Set(c[0], c[1]); err != nil {
			t.Errorf("%v: %v", c, err)
		}
	}
	if want := (readers.Limits{File: 300 << 20, Unpacked: 1 << 30, Line: 8 << 10, Columns: 20, Cells: 1000}); l != want {
		t.Errorf("got %+v, want %+v", l, want)
	}
	for _, c := range [][3]string{
		{"file", "much", `limit file is "much"; give a whole number, for bytes also as 300MiB`},
		{"file", "0", `limit file is "0"; give a whole number, for bytes also as 300MiB`},
		{"file", "9999999999GiB", `limit file is "9999999999GiB"; give a whole number, for bytes also as 300MiB`},
		{"rows", "5", `there is no limit "rows"; the limits are file, unpacked, line, columns, cells`},
	} {
		if err := l.Set(c[0], c[1]); err == nil || err.Error() != c[2] {
			t.Errorf("%v: %v", c, err)
		}
	}
}

// What is not a regular file is told from its entry, before it is opened: opening
// a pipe would wait for a writer.
func TestOpenLooksBeforeItOpens(t *testing.T) {
	dir := t.TempDir()
	pipe := filepath.Join(dir, "pipe.csv")
	if err := syscall.Mkfifo(pipe, 0o600); err != nil {
		t.Skip(err)
	}
	large := filepath.Join(dir, "large.csv")
	if err := os.WriteFile(large, make([]byte, 3<<10), 0o600); err != nil {
		t.Fatal(err)
	}
	for path, want := range map[string]string{
		dir:                             "is a folder: give a file in it",
		pipe:                            "is a pipe: give the data on standard input with -",
		"/dev/null":                     "is a device, not a file",
		filepath.Join(dir, "none.csv"):  "does not exist",
		filepath.Join(pipe, "none.csv"): "not a directory",
	} {
		_, err := readers.Open(path, readers.Options{})
		if err == nil || err.Error() != path+": "+want {
			t.Errorf("%s: %v, want %s", path, err, want)
		}
	}
	_, err := readers.Open(large, readers.Options{Limits: readers.Limits{File: 2 << 10}})
	if want := large + ": has 3 KiB; more than 2 KiB isn't read: raise it with --limit file=3KiB"; err == nil || err.Error() != want {
		t.Errorf("%v, want %s", err, want)
	}
}

func TestOpenReadsFilesAndStreams(t *testing.T) {
	text := lines("a,b", "x,1", "y,2")
	path := filepath.Join(t.TempDir(), "kelp.csv")
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	table, err := readers.Open(path, readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	stream, err := readers.Read("-", strings.NewReader(text), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	same(t, show(table), show(stream))
	// printf 'a,b\\nx,1\\ny,2\\n' | sha256sum
	const want = "266a28f2fd9abb719b6ae563f355eff8fc81bace8ffdfeba53def9d9bf681149"
	if table.SHA256 != want || stream.SHA256 != want {
		t.Errorf("digests %s and %s", table.SHA256, stream.SHA256)
	}
	if table.File != path || stream.File != "-" || table.Format != readers.TextFile {
		t.Errorf("files %q and %q, format %s", table.File, stream.File, table.Format)
	}
	if runtime.GOOS != "linux" {
		return
	}
	// A pipe under a name that the system gives to open streams is read.
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	go func() {
		w.WriteString(text)
		w.Close()
	}()
	piped, err := readers.Open("/proc/self/fd/"+itoa(int(r.Fd())), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	same(t, show(piped), show(table))
}
