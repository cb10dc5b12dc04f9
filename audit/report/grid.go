package report

import (
	"strings"

	"github.com/rivo/uniseg"

	"footing/rules/wording"
)

// grid is a table of words: columns are as wide as their widest cell, numbers
// stand to the right.
type grid struct {
	right []bool // per column
	rows  [][]string
}

func (g *grid) add(cells ...string) { g.rows = append(g.rows, cells) }

// lines lays the grid out, without spaces at the ends of lines.
func (g *grid) lines() []string {
	widths := make([]int, len(g.right))
	for _, row := range g.rows {
		for k, cell := range row {
			widths[k] = max(widths[k], uniseg.StringWidth(wording.Printable(cell)))
		}
	}
	var lines []string
	for _, row := range g.rows {
		var b strings.Builder
		for k, cell := range row {
			cell = wording.Printable(cell)
			gap := strings.Repeat(" ", widths[k]-uniseg.StringWidth(cell))
			if k > 0 {
				b.WriteString("  ")
			}
			if g.right[k] {
				b.WriteString(gap + cell)
			} else {
				b.WriteString(cell + gap)
			}
		}
		lines = append(lines, strings.TrimRight(b.String(), " "))
	}
	return lines
}
