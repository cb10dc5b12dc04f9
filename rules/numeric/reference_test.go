package numeric

import (
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// referenceRow is one line of a table of reference values: what was computed,
// from which numbers, and the result.
type referenceRow struct {
	function string
	args     []float64
	want     float64
}

func (r referenceRow) String() string { return fmt.Sprintf("%s%v", r.function, r.args) }

// readReference reads testdata/name, whose first lines say with # what made it
// and whose last column is the value.
func readReference(t *testing.T, name string) []referenceRow {
	t.Helper()
	var rows []referenceRow
	for i, cells := range readTable(t, filepath.Join("testdata", name), '\t') {
		if i == 0 {
			continue
		}
		row := referenceRow{function: cells[0]}
		for _, cell := range cells[1 : len(cells)-1] {
			row.args = append(row.args, number(t, cell))
		}
		row.want = number(t, cells[len(cells)-1])
		rows = append(rows, row)
	}
	if len(rows) == 0 {
		t.Fatalf("%s holds no values", name)
	}
	return rows
}

func readTable(t *testing.T, path string, comma rune) [][]string {
	t.Helper()
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	reader := csv.NewReader(file)
	reader.Comma = comma
	reader.Comment = '#'
	reader.FieldsPerRecord = -1
	rows, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

func number(t *testing.T, cell string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(strings.TrimSpace(cell), 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// off returns the relative distance of got from want, absolute where want is 0.
func off(got, want float64) float64 {
	switch {
	case got == want:
		return 0
	case math.IsNaN(got) && math.IsNaN(want):
		return 0
	case math.IsNaN(got) || math.IsNaN(want):
		return math.Inf(1)
	case want == 0:
		return math.Abs(got)
	}
	return math.Abs(got-want) / math.Abs(want)
}
