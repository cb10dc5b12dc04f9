package figure

import (
	"fmt"
	"math"
	"strings"

	"footing/audit"
)

// mostLabels is how many marked rows are labelled; the others are only ringed.
const mostLabels = 8

// plain reports whether there are too many groups for each to have its ink.
func (s *sheet) plain() bool { return len(s.drawing.Groups) > inks }

// ink is the number of a group's ink.
func (s *sheet) ink(group int) int {
	if s.plain() {
		return 0
	}
	return group
}

// scatter draws the rows at their places, one path for each group, and rings
// those that the findings name. It gives the rows that are marked.
func (s *sheet) scatter(f frame, place func(audit.DrawnRow) (x, y float64)) (marked []int) {
	paths := make([]strings.Builder, len(s.drawing.Groups))
	many := len(s.drawing.Points) > 1200
	for _, p := range s.drawing.Points {
		x, y := place(p)
		if math.IsNaN(x) || math.IsNaN(y) {
			continue
		}
		if y < f.top-1 || y > f.bottom+1 {
			s.atEdge(f, p, x, y)
			continue
		}
		if many {
			fmt.Fprintf(&paths[p.Group], "M%s %sh0", num(x), num(y))
			continue
		}
		paths[p.Group].WriteString(shape(s.ink(p.Group), x, y))
	}
	for g := range paths {
		if paths[g].Len() == 0 {
			continue
		}
		ink := s.ink(g)
		if many {
			fmt.Fprintf(&s.body, `<path class="g%d" fill="none" stroke-width="3.4" stroke-linecap="round" opacity=".55" d="%s"/>`, ink, paths[g].String())
			continue
		}
		fmt.Fprintf(&s.body, `<path class="f%d" opacity=".8" d="%s"/>`, ink, paths[g].String())
	}
	labels, most := 0, mostLabels
	if len(s.named) > 2*mostLabels {
		most = 0 // a crowd of labels would hide the rows
	}
	for _, p := range s.drawing.Points {
		if s.named[p.Row] == "" {
			continue
		}
		x, y := place(p)
		if math.IsNaN(x) || math.IsNaN(y) {
			continue
		}
		marked = append(marked, p.Row)
		arrow := ""
		if y < f.top-1 || y > f.bottom+1 {
			y, arrow = edge(f, y), ": "+figureWords(p.Y)
		}
		s.path("m", fmt.Sprintf("M%s %sa7 7 0 1 0 14 0a7 7 0 1 0-14 0z", num(x-7), num(y)))
		if labels < most && s.labelAt(f, x, y, "a b", fmt.Sprintf("row %d%s", p.Row, arrow)) {
			labels++
		}
	}
	return marked
}

// edge is where a row stands that lies above or below the frame.
func edge(f frame, y float64) float64 {
	if y > f.bottom {
		return f.bottom - 9
	}
	return f.top + 9
}

// atEdge draws a row that lies beyond the frame as an arrow at its edge.
func (s *sheet) atEdge(f frame, p audit.DrawnRow, x, y float64) {
	tip := -1.0
	if y > f.bottom {
		tip = 1
	}
	s.path("d", fmt.Sprintf("M%s %sl3.5 %sh-7z", num(x), num(edge(f, y)+tip*4), num(-tip*8)))
	s.beyond = append(s.beyond, fmt.Sprintf("row %d (%s)", p.Row, figureWords(p.Y)))
}

// keys writes the groups with their marks in one or more lines above a frame,
// and gives the height they take; nothing for one group, or for too many.
func (s *sheet) keys(top float64) float64 {
	if len(s.drawing.Groups) < 2 || s.plain() {
		return 0
	}
	x, y := 16.0, top+14
	for g := range s.drawing.Groups {
		label := short(s.group(g), 24)
		if x > 16 && x+14+textWidth(label) > width-8 {
			x, y = 16, y+19
		}
		s.path(fmt.Sprintf("f%d", g), shape(g, x, y-4.5))
		s.text(x+10, y, "start", "", label)
		x += 10 + textWidth(label) + 22
	}
	return y - top + 8
}

// band draws what sound tables stay inside.
func (s *sheet) band(f frame, b *audit.DrawnBand) {
	if b == nil {
		return
	}
	s.clipped(f, func() {
		x := f.x.all(b.At)
		s.path("z", ribbon(x, f.y.all(b.Low), f.y.all(b.High)))
	})
}

// seen joins the means that were seen.
func (s *sheet) seen(f frame, b *audit.DrawnBand) {
	if b == nil {
		return
	}
	s.clipped(f, func() {
		s.path("k l", polyline(f.x.all(b.At), f.y.all(b.Seen)))
	})
	s.squares(f, b)
}

// squares draws what was seen, filled where it leaves the band.
func (s *sheet) squares(f frame, b *audit.DrawnBand) {
	if b == nil {
		return
	}
	for k, v := range b.Seen {
		class := "o"
		if v < b.Low[k] || v > b.High[k] {
			class = "d"
		}
		x, y := f.x.at(b.At[k]), f.y.at(v)
		s.path(class, fmt.Sprintf("M%s %sh6v6h-6z", num(x-3), num(y-3)))
	}
}
