package figure

import (
	"fmt"
	"math"

	"footing/audit"
	"footing/rules/wording"
)

// residualTitle is what residual axes are called.
func (s *sheet) residualTitle() string {
	return "residual, leverage allowed for" + in(s.drawing.Response.Unit)
}

func in(unit string) string {
	if unit == "" {
		return ""
	}
	return " (" + unit + ")"
}

// residualSpan is the range of the residuals with the limit that none of a
// sound table passes.
func (s *sheet) residualSpan(b *audit.DrawnBand) span {
	y := newSpan()
	for _, p := range s.drawing.Points {
		y.take(p.Residual)
	}
	y.take(s.drawing.Limit, -s.drawing.Limit)
	if b != nil {
		y.take(b.Low...)
		y.take(b.High...)
	}
	return y.room()
}

// drawResiduals draws residuals against fitted values with what sound tables
// stay inside.
func drawResiduals(s *sheet) bool {
	d := s.drawing
	if math.IsNaN(d.Limit) {
		return false
	}
	s.title = "What the lines leave over, along their height"
	if d.Predictor.Name == "" {
		s.title = "What the means leave over, along their height"
	}
	x := newSpan()
	for _, p := range d.Points {
		x.take(p.Fitted)
	}
	top := s.keys(0)
	s.height = top + 330
	f := s.frame(layout{top: top, height: 330, x: x.room(), y: s.residualSpan(d.Trend), xTitle: "fitted " + title(d.Response), yTitle: s.residualTitle()})
	s.limits(f)
	s.band(f, d.Trend)
	marked := s.scatter(f, func(p audit.DrawnRow) (float64, float64) { return f.x.at(p.Fitted), f.y.at(p.Residual) })
	s.seen(f, d.Trend)
	s.limitWords(f)
	s.sayLimit()
	s.sayBand(d.Trend, "fitted")
	s.sayMarked(marked)
	s.sayThinned()
	return true
}

// limits draws the zero line and the two lines that no residual of a sound
// table passes.
func (s *sheet) limits(f frame) {
	s.placed = append(s.placed, box{f.right - 32*letter, f.y.at(s.drawing.Limit) - 18, f.right, f.y.at(s.drawing.Limit)})
	s.line("k", f.left, f.y.at(0), f.right, f.y.at(0))
	for _, v := range []float64{s.drawing.Limit, -s.drawing.Limit} {
		s.line("h", f.left, f.y.at(v), f.right, f.y.at(v))
	}
}

// limitWords says beside the upper line what it is; drawn last, above the rows.
func (s *sheet) limitWords(f frame) {
	y := f.y.at(s.drawing.Limit)
	text := s.inside() + " sound tables keep within"
	s.text(f.right-2, y-5, "end", "q v", text)
}

func (s *sheet) sayLimit() {
	d := s.drawing
	y := newSpan()
	for _, p := range d.Points {
		y.take(p.Residual)
	}
	s.say("residuals reach from %s to %s%s", figure3(y.least), figure3(y.most), s.unit())
	passes := "none does here"
	switch {
	case d.Beyond == 1:
		passes = "one does here"
	case d.Beyond > 1:
		passes = fmt.Sprintf("%d do here", d.Beyond)
	}
	s.say("in %s sound tables of this design none passes %s%s (broken lines); %s", s.inside(), figure3(d.Limit), s.unit(), passes)
}

// sayBand tells of the means of successive rows and of their band.
func (s *sheet) sayBand(b *audit.DrawnBand, along string) {
	if b == nil {
		return
	}
	s.say("squares are means of up to %s that follow each other; the grey band holds all of them in %s sound tables", wording.Count(b.Rows, "row"), s.inside())
	var out []string
	for k, v := range b.Seen {
		if v < b.Low[k] || v > b.High[k] {
			side := "above"
			if v < b.Low[k] {
				side = "below"
			}
			out = append(out, fmt.Sprintf("%s it at %s %s", side, along, figure3(b.At[k])))
		}
	}
	if len(out) == 0 {
		s.say("here all %d lie inside", len(b.Seen))
		return
	}
	verb := "lie"
	if len(out) == 1 {
		verb = "lies"
	}
	s.say("here %d of %d %s outside: %s", len(out), len(b.Seen), verb, wording.Some(out, 4))
}
