// Command make writes files that footing must refuse, each named for its
// defect. testdata/script/broken.txtar holds the sentence for each.
//
//	go run ./testdata/broken/make.go testdata/broken
package main

import (
	"archive/zip"
	"bytes"
	"io"
	"log"
	"os"
	"path/filepath"
	"strings"

	"github.com/xuri/excelize/v2"
)

// texts are files that are no workbooks.
var texts = map[string]string{
	"nothing.csv":                  "",
	"blank-lines.csv":              "\n \n\t\n",
	"nul-bytes.csv":                "site,growth\nx,1\ny\x00,2\n",
	"two-encodings.csv":            "site,growth\né,1\n\xe9,2\n",
	"no-encoding.csv":              "site,growth\nx,1\n\x81,2\n",
	"open-quote.csv":               "site,growth\n\"x,1\ny,2\n",
	"two-delimiters.csv":           "site;depth,growth\n1;2,3\n",
	"either-decimal.csv":           "site;growth\na;12\nb;2,517\nc;3,125\n",
	"as-many-commas-as-points.csv": "site;growth\na;7,5\nb;7.5\n",
	"no-header.csv":                "a,8.1,7.2\nb,9.4,6.8\na,10.2,6.1\nb,11.5,5.9\n",
	"header-only.csv":              "site,growth\n",
	"names-twice.csv":              "site,growth,growth\na,1,2\nb,2,3\na,3,5\nb,4,4\n",
	"fields-everywhere.csv":        "site,depth,growth\na,1,2\nb,2,3,4\na,3\nb,4,5,6\na,5,7\n",
	"web-page.csv":                 "<!DOCTYPE html><p>1</p>",
	"gzip.csv":                     "\x1f\x8b\x08\x00",
	"document.csv":                 "%PDF-1.7",
	"picture.csv":                  "\x89PNG\r\n\x1a\n",
	"old-workbook.xlsx":            "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + strings.Repeat("\x00", 600) + wide("Workbook"),
	"password.xlsx":                "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + strings.Repeat("\x00", 600) + wide("EncryptedPackage"),
	"text.xlsx":                    "site,growth\na,1\n",
}

// wide writes a name as old workbooks write theirs: two bytes a letter.
func wide(s string) string {
	var b strings.Builder
	for _, r := range s {
		b.WriteByte(byte(r))
		b.WriteByte(0)
	}
	return b.String()
}

// changes are what is done to the sheet of a sound workbook.
var changes = map[string]func(sheet string) string{
	"cut-sheet.xlsx":            func(s string) string { return s[:strings.Index(s, `<row r="6"`)] },
	"badly-nested.xlsx":         func(s string) string { return strings.Replace(s, "</row>", "</c>", 1) },
	"doctype.xlsx":              func(s string) string { return strings.Replace(s, "<worksheet", "<!DOCTYPE worksheet><worksheet", 1) },
	"address-outside.xlsx":      func(s string) string { return strings.Replace(s, `r="B3"`, `r="ZZZ3"`, 1) },
	"address-in-other-row.xlsx": func(s string) string { return strings.Replace(s, `r="B3"`, `r="B4"`, 1) },
	"rows-out-of-order.xlsx":    func(s string) string { return strings.Replace(s, `<row r="4"`, `<row r="2"`, 1) },
	"string-index.xlsx":         func(s string) string { return strings.Replace(s, `t="s"><v>0</v>`, `t="s"><v>9999</v>`, 1) },
}

// book is a sound workbook; with second it has two sheets that hold tables.
func book(second bool) []byte {
	f := excelize.NewFile()
	defer f.Close()
	fill := func(sheet string) {
		rows := [][]any{{"site", "growth"}, {"a", 7.2}, {"b", 6.8}, {"a", 6.1}, {"b", 5.9}, {"a", 5.5}}
		for i, row := range rows {
			cell, err := excelize.CoordinatesToCellName(1, i+1)
			check(err)
			check(f.SetSheetRow(sheet, cell, &row))
		}
	}
	fill("Sheet1")
	if second {
		_, err := f.NewSheet("Sheet2")
		check(err)
		fill("Sheet2")
	}
	var b bytes.Buffer
	check(f.Write(&b))
	return b.Bytes()
}

// rezip copies a workbook with its first sheet changed; twice writes that part
// a second time.
func rezip(raw []byte, change func(string) string, twice bool) []byte {
	in, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	check(err)
	var b bytes.Buffer
	out := zip.NewWriter(&b)
	for _, part := range in.File {
		r, err := part.Open()
		check(err)
		text, err := io.ReadAll(r)
		check(err)
		if part.Name == "xl/worksheets/sheet1.xml" {
			text = []byte(change(string(text)))
		}
		for range 1 + count(twice && part.Name == "xl/worksheets/sheet1.xml") {
			w, err := out.Create(part.Name)
			check(err)
			_, err = w.Write(text)
			check(err)
		}
	}
	check(out.Close())
	return b.Bytes()
}

func count(b bool) int {
	if b {
		return 1
	}
	return 0
}

func check(err error) {
	if err != nil {
		log.Fatal(err)
	}
}

func main() {
	if len(os.Args) != 2 {
		log.Fatal("usage: make FOLDER")
	}
	write := func(name string, raw []byte) {
		check(os.WriteFile(filepath.Join(os.Args[1], name), raw, 0o644))
	}
	for name, text := range texts {
		write(name, []byte(text))
	}
	sound := book(false)
	for name, change := range changes {
		write(name, rezip(sound, change, false))
	}
	write("part-twice.xlsx", rezip(sound, func(s string) string { return s }, true))
	write("two-tables.xlsx", book(true))
	write("workbook.csv", sound)
	write("cut-off.xlsx", sound[:len(sound)*6/10])
}
