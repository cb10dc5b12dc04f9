package report

import (
	"fmt"
	"math"
	"strings"

	"github.com/rivo/uniseg"

	"footing/audit"
	"footing/rules/wording"
)

const (
	sketchHeight = 15 // lines; odd, so that one of them is the middle
	sketchWidest = 76 // columns between the axis and the right edge
)

// writeSketch draws residuals against fitted values in characters.
func writeSketch(p *page, r *audit.Result) {
	p.blank()
	if r.Model == nil || len(r.Rows) == 0 {
		p.say("", plain, "Sketch: there is no fit to draw residuals from.")
		return
	}
	p.say("Residuals over fitted values of "+wording.Printable(withUnit(r, r.Model.Response)), strong, "")
	for _, line := range sketch(r, min(p.width-2, sketchWidest+12)) {
		p.verbatim(line)
	}
	p.say("  ", faint, ". one row, 2 to 9 so many, # ten or more, o a row that a finding names; - is residual 0.")
}

// sketch lays the points out; each line is at most width columns.
func sketch(r *audit.Result, width int) []string {
	low, high, most := math.Inf(1), math.Inf(-1), 0.0
	for _, row := range r.Rows {
		low, high = min(low, float64(row.Fitted)), max(high, float64(row.Fitted))
		most = max(most, math.Abs(float64(row.Residual)))
	}
	top, bottom := wording.Figure(most, 2), wording.Figure(-most, 2)
	margin := max(uniseg.StringWidth(top), uniseg.StringWidth(bottom), 1)
	columns := width - margin - 3
	count := make([][]int, sketchHeight)
	named := make([][]bool, sketchHeight)
	for i := range count {
		count[i], named[i] = make([]int, columns), make([]bool, columns)
	}
	told := rowsNamed(r)
	for _, row := range r.Rows {
		y := slot(-float64(row.Residual), -most, most, sketchHeight)
		x := slot(float64(row.Fitted), low, high, columns)
		count[y][x]++
		named[y][x] = named[y][x] || told[row.Row]
	}
	var lines []string
	for y := range count {
		label := ""
		switch y {
		case 0:
			label = top
		case sketchHeight / 2:
			label = "0"
		case sketchHeight - 1:
			label = bottom
		}
		var b strings.Builder
		for x := range columns {
			b.WriteByte(sketchSign(count[y][x], named[y][x], y == sketchHeight/2))
		}
		lines = append(lines, strings.TrimRight(fmt.Sprintf("  %*s|%s", margin, label, b.String()), " "))
	}
	from, to := wording.Figure(low, 3), wording.Figure(high, 3)
	gap := max(1, columns-len(from)-len(to))
	return append(lines, strings.Repeat(" ", margin+3)+from+strings.Repeat(" ", gap)+to)
}

// slot puts v into one of n slots from low to high; all in the middle when the
// two are the same.
func slot(v, low, high float64, n int) int {
	if !(high > low) {
		return n / 2
	}
	return min(n-1, max(0, int(math.Round((v-low)/(high-low)*float64(n-1)))))
}

func sketchSign(rows int, named, middle bool) byte {
	switch {
	case named:
		return 'o'
	case rows >= 10:
		return '#'
	case rows > 1:
		return byte('0' + rows)
	case rows == 1:
		return '.'
	case middle:
		return '-'
	}
	return ' '
}

// rowsNamed are the rows at which an open finding points.
func rowsNamed(r *audit.Result) map[int]bool {
	named := map[int]bool{}
	for k := range r.Findings {
		if f := &r.Findings[k]; f.IsOpen() {
			for _, w := range f.Where {
				if w.Row != nil {
					named[*w.Row] = true
				}
			}
		}
	}
	return named
}
