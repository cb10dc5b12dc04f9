package figure

import (
	"math"

	"footing/audit"
	"footing/rules/wording"
)

// drawQuantiles draws sorted residuals over the quantiles of a normal sample.
func drawQuantiles(s *sheet) bool {
	d := s.drawing
	b := d.Scores
	if b == nil || len(b.At) < 3 {
		return false
	}
	s.title = "Sorted residuals beside those of a normal sample"
	x, y := newSpan(), newSpan()
	x.take(b.At...)
	y.take(b.Low...)
	y.take(b.High...)
	for _, p := range d.Points {
		y.take(p.Scaled)
	}
	top := s.keys(0)
	s.height = top + 330
	f := s.frame(layout{top: top, height: 330, x: x.room(), y: y.room(), xTitle: "quantile of the normal distribution (SD)", yTitle: "residual (SD)"})
	s.band(f, b)
	s.clipped(f, func() { s.line("k", f.x.at(-9), f.y.at(-9), f.x.at(9), f.y.at(9)) })
	marked := s.scatter(f, func(p audit.DrawnRow) (float64, float64) { return f.x.at(p.Score), f.y.at(p.Scaled) })
	s.say("residuals of a normal sample would lie along the line")
	s.say("the grey band holds every one of them in %s sound tables of this design", s.inside())
	first, last, out := math.NaN(), math.NaN(), 0
	for k, v := range b.Seen {
		if v < b.Low[k] || v > b.High[k] {
			if out == 0 {
				first = v
			}
			last = v
			out++
		}
	}
	least, most := b.Seen[0], b.Seen[len(b.Seen)-1]
	s.say("here the least lies at %s SD (band %s to %s), the greatest at %s SD (band %s to %s)", wording.Figure(least, 2), wording.Figure(b.Low[0], 2), wording.Figure(b.High[0], 2),
		wording.Figure(most, 2), wording.Figure(b.Low[len(b.Low)-1], 2), wording.Figure(b.High[len(b.High)-1], 2))
	switch {
	case out == 0:
		s.say("no residual leaves the band")
	case out == 1:
		s.say("one of the %d places shown leaves the band, at %s SD", len(b.Seen), wording.Figure(first, 2))
	default:
		s.say("%d of the %d places shown leave the band, from %s to %s SD", out, len(b.Seen), wording.Figure(first, 2), wording.Figure(last, 2))
	}
	s.sayMarked(marked)
	s.sayThinned()
	return true
}
