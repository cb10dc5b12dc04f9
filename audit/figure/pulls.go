package figure

import (
	"fmt"
	"math"
	"slices"

	"footing/audit"
	"footing/rules/wording"
)

// mostPanels is how many slopes the influence of rows is drawn for.
const mostPanels = 4

// drawPulls draws how far each row moves each slope.
func drawPulls(s *sheet) bool {
	d := s.drawing
	if len(d.Pulled) == 0 || math.IsNaN(d.SD) || !(d.SD > 0) {
		return false
	}
	what := "slope"
	if d.Predictor.Name == "" {
		what = "mean"
	}
	s.title = "How far each row moves each " + what
	if len(d.Pulled) == 1 {
		s.title = "How far each row moves the " + what
	}
	order := s.strongestSlopes()
	panels := min(mostPanels, len(order))
	const height = 186.0
	s.height = 6 + height*float64(panels)
	x, y := newSpan(), newSpan()
	for _, p := range d.Points {
		x.take(float64(p.Row))
		for _, k := range order[:panels] {
			y.take(p.Pulls[k])
		}
	}
	y.take(d.Pull, -d.Pull)
	var marked []int
	for n, k := range order[:panels] {
		of := ""
		if d.Pulled[k] != "" {
			of = " of " + s.labelled(d.Pulled[k])
		}
		bottom := ""
		if n == panels-1 {
			bottom = "row of the table"
		}
		f := s.frame(layout{top: 6 + height*float64(n), height: height, x: x.room(), y: y.room(), xTitle: bottom, yTitle: short(what+of, 28) + ", moved by (SE)"})
		marked = append(marked, s.pullPanel(f, k)...)
		s.sayPull(k, what+of)
	}
	if !math.IsNaN(d.Pull) {
		s.say("broken lines: in %s sound tables of this design no row moves any %s by more than %s SE", s.inside(), what, wording.Figure(d.Pull, 2))
	}
	if len(order) > panels {
		s.say("drawn are the %d of %d %ss that a row moves furthest", panels, len(order), what)
	}
	slices.Sort(marked)
	s.sayMarked(slices.Compact(marked))
	s.sayThinned()
	return true
}

// strongestSlopes lists the slopes, those that a row moves furthest first when
// there are too many for all to be drawn.
func (s *sheet) strongestSlopes() []int {
	order := make([]int, len(s.drawing.Pulled))
	for k := range order {
		order[k] = k
	}
	if len(order) > mostPanels {
		slices.SortStableFunc(order, func(a, b int) int {
			_, va := s.strongest(a)
			_, vb := s.strongest(b)
			switch {
			case math.Abs(va) > math.Abs(vb):
				return -1
			case math.Abs(va) < math.Abs(vb):
				return 1
			}
			return 0
		})
	}
	return order
}

// strongest is the row that moves slope k furthest.
func (s *sheet) strongest(k int) (row int, by float64) {
	for _, p := range s.drawing.Points {
		if v := p.Pulls[k]; !math.IsNaN(v) && math.Abs(v) > math.Abs(by) {
			row, by = p.Row, v
		}
	}
	return row, by
}

func (s *sheet) sayPull(k int, what string) {
	row, by := s.strongest(k)
	if row == 0 {
		return
	}
	way := "up"
	if by < 0 {
		way = "down"
	}
	s.say("the %s is moved furthest by row %d: %s by %s standard errors", what, row, way, wording.Figure(math.Abs(by), 2))
}

func (s *sheet) pullPanel(f frame, k int) (marked []int) {
	zero := f.y.at(0)
	s.line("k", f.left, zero, f.right, zero)
	if limit := s.drawing.Pull; !math.IsNaN(limit) {
		s.line("h", f.left, f.y.at(limit), f.right, f.y.at(limit))
		s.line("h", f.left, f.y.at(-limit), f.right, f.y.at(-limit))
	}
	stems := map[int]string{}
	for _, p := range s.drawing.Points {
		y := f.y.at(p.Pulls[k])
		if math.IsNaN(y) || math.IsInf(y, 0) || math.Abs(y-zero) < 0.3 {
			continue
		}
		ink := s.ink(p.Group)
		stems[ink] += "M" + num(f.x.at(float64(p.Row))) + " " + num(zero) + "V" + num(y)
	}
	for ink := range inks {
		s.path(fmt.Sprintf("g%d t", ink), stems[ink])
	}
	top, by := s.strongest(k)
	if math.Abs(by) < 0.03*(f.y.most-f.y.least) {
		top = 0 // nothing to be seen at this scale
	}
	labels := 0
	for _, p := range s.drawing.Points {
		v := p.Pulls[k]
		named := s.named[p.Row] != "" && math.Abs(v) > 0.05
		if (!named && p.Row != top) || math.IsNaN(v) || math.IsInf(v, 0) {
			continue
		}
		x, y := f.x.at(float64(p.Row)), f.y.at(v)
		class := "q"
		if named {
			class = "a b"
			marked = append(marked, p.Row)
			s.path("m", fmt.Sprintf("M%s %sa5 5 0 1 0 10 0a5 5 0 1 0-10 0z", num(x-5), num(y)))
		}
		if labels < 4 && s.labelAt(f, x, y, class, fmt.Sprintf("row %d", p.Row)) {
			labels++
		}
	}
	return marked
}

// drawOrder draws the residuals in the order in which the rows were taken.
func drawOrder(s *sheet) bool {
	d := s.drawing
	if d.Order.Name == "" || math.IsNaN(d.Limit) || len(d.Sequence) < 3 {
		return false
	}
	s.title = "Residuals in the order in which the rows were taken"
	x := newSpan()
	var xs, ys []float64
	for _, k := range d.Sequence {
		x.take(d.Points[k].Place)
	}
	top := s.keys(0)
	s.height = top + 330
	f := s.frame(layout{top: top, height: 330, x: x.room(), y: s.residualSpan(d.Serial), xTitle: "place in sequence, by " + d.Order.Name, yTitle: s.residualTitle()})
	s.limits(f)
	s.band(f, d.Serial)
	for _, k := range d.Sequence {
		xs, ys = append(xs, f.x.at(d.Points[k].Place)), append(ys, f.y.at(d.Points[k].Residual))
	}
	if len(d.Points) == d.Rows {
		s.path("x", polyline(xs, ys))
	}
	marked := s.scatter(f, func(p audit.DrawnRow) (float64, float64) { return f.x.at(p.Place), f.y.at(p.Residual) })
	s.seen(f, d.Serial)
	s.limitWords(f)
	s.say("residuals of %s, one after the other by %s", wording.Count(len(d.Sequence), "row"), d.Order.Name)
	s.sayLimit()
	s.sayBand(d.Serial, "place")
	s.sayMarked(marked)
	s.sayThinned()
	return true
}
