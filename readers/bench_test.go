package readers_test

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"footing/readers"
)

// writeSurvey writes a table of six columns and about 48 bytes a row: a number, a
// site, three measurements, a note of which one in twenty is quoted.
func writeSurvey(b *testing.B, rows int) (path string, size int64) {
	b.Helper()
	rng := rand.New(rand.NewPCG(1, uint64(rows)))
	notes := [...]string{"", "", "", "ok", "blade torn", "second reading", "checked by diver"}
	var text strings.Builder
	text.WriteString("id,group,x,y,z,note\n")
	for i := range rows {
		note := notes[rng.IntN(len(notes))]
		if rng.IntN(20) == 0 {
			note = `"tag lost, re-tagged"`
		}
		fmt.Fprintf(&text, "%d,%s,%.5f,%.5f,%.5f,%s\n", i+1, [...]string{"sheltered", "exposed"}[rng.IntN(2)],
			8+10*rng.Float64(), 3+5*rng.Float64(), rng.Float64(), note)
	}
	path = filepath.Join(b.TempDir(), "survey.csv")
	if err := os.WriteFile(path, []byte(text.String()), 0o600); err != nil {
		b.Fatal(err)
	}
	return path, int64(text.Len())
}

func benchmarkText(b *testing.B, rows int) {
	path, size := writeSurvey(b, rows)
	b.SetBytes(size)
	b.ReportAllocs()
	for b.Loop() {
		table, err := readers.Open(path, readers.Options{})
		if err != nil {
			b.Fatal(err)
		}
		if table.Len() != rows {
			b.Fatalf("%d records of %d", table.Len(), rows)
		}
	}
}

func BenchmarkText50(b *testing.B)      { benchmarkText(b, 50) }
func BenchmarkText100000(b *testing.B)  { benchmarkText(b, 100_000) }
func BenchmarkText1000000(b *testing.B) { benchmarkText(b, 1_000_000) }

func BenchmarkSheet(b *testing.B) {
	var rows strings.Builder
	rows.WriteString(sheetRow(1, "site", "x", "y", "z"))
	const n = 20_000
	for i := range n {
		rows.WriteString(sheetRow(i+2, "a", fmt.Sprint(i), fmt.Sprint(float64(i)/7), "2.5"))
	}
	packed := sheetBook(rows.String())
	b.SetBytes(int64(rows.Len()))
	b.ReportAllocs()
	for b.Loop() {
		table, err := readers.Read("kelp.xlsx", strings.NewReader(packed), readers.Options{})
		if err != nil {
			b.Fatal(err)
		}
		if table.Len() != n {
			b.Fatalf("%d records of %d", table.Len(), n)
		}
	}
}

// Asking for every number of a column, as each rule does.
func BenchmarkNumbers(b *testing.B) {
	path, _ := writeSurvey(b, 100_000)
	table, err := readers.Open(path, readers.Options{})
	if err != nil {
		b.Fatal(err)
	}
	x := table.Columns[2]
	sum := 0.0
	for b.Loop() {
		for i := range x.Len() {
			if v, ok := x.Number(i); ok {
				sum += v
			}
		}
	}
	if sum <= 0 {
		b.Fatal("no numbers")
	}
}
