package figure

import (
	"fmt"
	"math"

	"footing/audit"
	"footing/rules/wording"
)

// drawSizes draws the size of the residuals against the predictor.
func drawSizes(s *sheet) bool {
	d := s.drawing
	if math.IsNaN(d.Limit) {
		return false
	}
	means := d.Predictor.Name == ""
	s.title = "How far rows lie from their line, along the predictor"
	l := layout{xTitle: title(d.Predictor), yTitle: "distance from the line, in residual SD"}
	if means {
		s.title = "How far rows lie from their mean, group by group"
		l.x, l.xTitle, l.yTitle = span{-0.6, float64(len(d.Groups)) - 0.4}, "group", "distance from the mean, in residual SD"
		for g := range d.Groups {
			l.xTicks, l.xWords = append(l.xTicks, float64(g)), append(l.xWords, short(s.group(g), 14))
		}
	} else {
		x := newSpan()
		for _, p := range d.Points {
			x.take(p.X)
		}
		l.x = x.room()
	}
	y := newSpan()
	y.take(0)
	for _, p := range d.Points {
		y.take(math.Abs(p.Scaled))
	}
	if d.Size != nil {
		y.take(d.Size.High...)
	}
	l.y = y.room()
	l.y.least = 0
	l.top = s.keysUnlessMeans(means)
	l.height = 330
	s.height = l.top + l.height
	f := s.frame(l)
	s.band(f, d.Size)
	spread := jitter(means)
	marked := s.scatter(f, func(p audit.DrawnRow) (float64, float64) {
		if means {
			return f.x.at(float64(p.Group) + spread(p.Row)), f.y.at(math.Abs(p.Scaled))
		}
		return f.x.at(p.X), f.y.at(math.Abs(p.Scaled))
	})
	s.groupSizes(f, means)
	if means {
		s.say("rows of a sound table lie 0.8 SD from their mean on average, in every group; the grey band holds these averages, the squares, in %s of them", s.inside())
		s.squares(f, d.Size)
	} else {
		s.say("rows of a sound table lie 0.8 SD from their line on average, wherever the predictor stands")
		s.sayBand(d.Size, d.Predictor.Name)
		s.seen(f, d.Size)
	}
	s.sayGroups(means)
	s.sayMarked(marked)
	s.sayThinned()
	return true
}

// sayGroups tells the mean distance in each group, and which leave their band.
func (s *sheet) sayGroups(means bool) {
	b := s.drawing.Groupwise
	if b == nil || s.plain() {
		return
	}
	var all, out []string
	for g, v := range b.Seen {
		text := s.group(g) + " " + wording.Figure(v, 2)
		all = append(all, text)
		if v < b.Low[g] || v > b.High[g] {
			out = append(out, fmt.Sprintf("%s (%s to %s)", s.group(g), wording.Figure(b.Low[g], 2), wording.Figure(b.High[g], 2)))
		}
	}
	drawn := ", drawn as a line in its colour"
	if means {
		drawn = ""
	}
	s.say("mean distance in each group%s: %s SD", drawn, wording.List(all))
	if len(out) > 0 {
		s.say("outside of what %s sound tables keep within: %s", s.inside(), wording.List(out))
	}
}

// groupSizes draws the mean size in each group over its own range.
func (s *sheet) groupSizes(f frame, means bool) {
	if s.drawing.Groupwise == nil || s.plain() || means {
		return
	}
	for _, line := range s.drawing.Lines {
		v := s.drawing.Groupwise.Seen[line.Group]
		dash := ""
		if d := dashes[line.Group]; d != "" {
			dash = fmt.Sprintf(` stroke-dasharray="%s"`, d)
		}
		y := f.y.at(v)
		fmt.Fprintf(&s.body, `<path class="g%d l"%s d="M%s %sH%s"/>`, line.Group, dash, num(f.x.at(line.FromX)), num(y), num(f.x.at(line.ToX)))
	}
}
