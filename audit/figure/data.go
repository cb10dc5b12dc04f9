package figure

import (
	"fmt"
	"math"
	"slices"

	"footing/audit"
	"footing/rules/wording"
)

func figureWords(v float64) string { return wording.Number(v) }

// drawData draws the rows with each group's line and its interval band.
func drawData(s *sheet) bool {
	d := s.drawing
	s.markAll()
	means := d.Predictor.Name == ""
	l := layout{right: 12, xTitle: title(d.Predictor), yTitle: title(d.Response)}
	if means {
		l.xTitle = "group"
		if g := s.result.Model.Group; g != nil {
			l.xTitle = *g
		}
		l.x = span{-0.6, float64(len(d.Groups)) - 0.4}
		for g := range d.Groups {
			l.xTicks, l.xWords = append(l.xTicks, float64(g)), append(l.xWords, short(s.group(g), 14))
		}
		s.title = "Every row, with the mean of each group"
	} else {
		s.title = "Every row, with the line of each group"
		if len(d.Groups) < 2 {
			s.title = "Every row, with the fitted line"
		}
		x := newSpan()
		for _, p := range d.Points {
			x.take(p.X)
		}
		l.x = x.room()
	}
	l.y = s.heights()
	labelled := len(d.Groups) > 1 && !means && !s.plain()
	if labelled {
		for g := range d.Groups {
			l.right = max(l.right, 14+textWidth(short(s.group(g), 11)+" ↓"))
		}
	}
	l.top = s.keysUnlessMeans(means)
	l.height = 330
	s.height = l.top + l.height
	f := s.frame(l)
	s.clipped(f, func() {
		for _, line := range d.Lines {
			s.drawLine(f, line, means)
		}
	})
	if labelled {
		s.nameLines(f)
	}
	spread := jitter(means)
	marked := s.scatter(f, func(p audit.DrawnRow) (float64, float64) {
		if means {
			return f.x.at(float64(p.Group) + spread(p.Row)), f.y.at(p.Y)
		}
		return f.x.at(p.X), f.y.at(p.Y)
	})
	aside := s.drawAside(f)
	s.sayData(f, marked, aside, means)
	return true
}

// nameLines writes the groups beside the ends of their lines, with an arrow
// where a line ends outside of the frame.
func (s *sheet) nameLines(f frame) {
	var labels []margin
	for _, line := range s.drawing.Lines {
		end := f.y.at(line.Y[len(line.Y)-1])
		text := short(s.group(line.Group), 13)
		switch {
		case end > f.bottom:
			text = short(s.group(line.Group), 11) + " ↓"
		case end < f.top:
			text = short(s.group(line.Group), 11) + " ↑"
		}
		labels = append(labels, margin{y: min(f.bottom, max(f.top, end)), class: fmt.Sprintf("f%d b", line.Group), text: text})
	}
	s.labelRight(f, labels)
}

func (s *sheet) keysUnlessMeans(means bool) float64 {
	if means {
		return 0
	}
	return s.keys(0)
}

// markAll marks the rows of every open finding.
func (s *sheet) markAll() {
	for _, f := range s.result.Findings {
		if isOpen(f) && len(f.Where) <= mostLabels {
			s.mark(f)
		}
	}
}

// jitter spreads rows of a group of means sideways, each by its row number.
func jitter(means bool) func(row int) float64 {
	return func(row int) float64 {
		if !means {
			return 0
		}
		return float64(row*7%13-6) / 13 * 0.45
	}
}

// heights is the range of the responses. Rows further from the others than
// three times the width of their middle nine tenths stand at the edge, with
// their value, since nothing else could be seen beside them.
func (s *sheet) heights() span {
	var values []float64
	for _, p := range s.drawing.Points {
		values = append(values, p.Y)
	}
	slices.Sort(values)
	low, high := values[len(values)/20], values[len(values)-1-len(values)/20]
	reach := 3 * (high - low)
	y := newSpan()
	for _, v := range values {
		if reach == 0 || (v >= low-reach && v <= high+reach) {
			y.take(v)
		}
	}
	for _, a := range s.drawing.Aside {
		if a.Y >= y.least-0.2*(y.most-y.least) && a.Y <= y.most+0.2*(y.most-y.least) {
			y.take(a.Y)
		}
	}
	return y.room()
}

func (s *sheet) drawLine(f frame, line audit.DrawnLine, means bool) {
	ink := s.ink(line.Group)
	if means {
		x := f.x.at(line.X[0])
		if line.HasBand {
			s.line("k l", x, f.y.at(line.Low[0]), x, f.y.at(line.High[0]))
		}
		s.line("k l", x-16, f.y.at(line.Y[0]), x+16, f.y.at(line.Y[0]))
		return
	}
	x := f.x.all(line.X)
	if line.HasBand && !s.plain() {
		s.path(fmt.Sprintf("f%d s", ink), ribbon(x, f.y.all(line.Low), f.y.all(line.High)))
	}
	dash := ""
	if dashes[ink] != "" && !s.plain() {
		dash = fmt.Sprintf(` stroke-dasharray="%s"`, dashes[ink])
	}
	last := len(x) - 1
	thin := "l"
	if s.plain() {
		thin = "t"
	}
	fmt.Fprintf(&s.body, `<path class="g%d %s"%s d="M%s %sL%s %s"/>`, ink, thin, dash, num(x[0]), num(f.y.at(line.Y[0])), num(x[last]), num(f.y.at(line.Y[last])))
}

// drawAside draws crosses for rows that were not used: in their place where
// both values are there, else on the axis of the one that is.
func (s *sheet) drawAside(f frame) (drawn []audit.DrawnAside) {
	for k, a := range s.drawing.Aside {
		if k >= 200 {
			break
		}
		x, y := f.x.at(a.X), f.y.at(a.Y)
		switch {
		case s.drawing.Predictor.Name == "" || math.IsNaN(a.X) && math.IsNaN(a.Y):
			continue
		case math.IsNaN(a.Y):
			y = f.bottom - 5
		case math.IsNaN(a.X):
			x = f.left + 5
		}
		if x < f.left || x > f.right || y < f.top || y > f.bottom {
			continue
		}
		drawn = append(drawn, a)
		s.path("k t", fmt.Sprintf("M%s %sl8 8m0-8l-8 8", num(x-4), num(y-4)))
		if k < 3 {
			s.labelAt(f, x, y, "", fmt.Sprintf("row %d, set aside", a.Row))
		}
	}
	return drawn
}

func (s *sheet) sayData(f frame, marked []int, aside []audit.DrawnAside, means bool) {
	d := s.drawing
	what := title(d.Response) + " over " + title(d.Predictor)
	if means {
		what = title(d.Response)
	}
	groups := ""
	if len(d.Groups) > 1 {
		groups = " in " + wording.Count(len(d.Groups), "group")
	}
	s.say("%s%s: %s", wording.Count(d.Rows, "row"), groups, what)
	confidence := wording.Percent(float64(s.result.Model.Confidence))
	banded := false
	for k, line := range d.Lines {
		banded = banded || line.HasBand
		if k >= inks {
			s.say("the other %d lines are drawn and not told here", len(d.Lines)-k)
			break
		}
		if means {
			s.say("%s lies at %s (%s to %s)", s.groupName(line.Group), figure3(line.Y[0]), figure3(line.Low[0]), figure3(line.High[0]))
			continue
		}
		how := "rises"
		if line.Slope < 0 {
			how = "falls"
		}
		a, b := figure3(line.Y[0]), figure3(line.Y[len(line.Y)-1])
		text := fmt.Sprintf("the line%s %s from %s at %s to %s at %s", s.ofGroup(line.Group), how, a, figureWords(line.FromX), b, figureWords(line.ToX))
		if a == b {
			text = fmt.Sprintf("the line%s stays at %s from %s to %s", s.ofGroup(line.Group), a, figureWords(line.FromX), figureWords(line.ToX))
		}
		if line.HasBand && !line.Clear {
			text += ", with a slope whose interval holds zero"
		}
		if all(line.Y, func(v float64) bool { return v > f.y.most }) || all(line.Y, func(v float64) bool { return v < f.y.least }) {
			text += "; it runs outside of the frame"
		}
		s.say("%s", text)
	}
	switch {
	case banded && means:
		s.say("bars are %s intervals of the means", confidence)
	case banded && len(d.Lines) == 1:
		s.say("the band is the %s interval of the line", confidence)
	case banded && !s.plain():
		s.say("each band is the %s interval of its line", confidence)
	}
	s.sayMarked(marked)
	if len(s.beyond) > 0 {
		s.say("arrows at the edge stand for rows beyond the frame: %s", wording.Some(s.beyond, 4))
	}
	if len(aside) > 0 {
		noun := "rows were"
		if len(aside) == 1 {
			noun = "row was"
		}
		s.say("a cross stands for a row set aside; %d such %s: %s", len(aside), noun, asideWords(aside))
	}
	s.sayThinned()
}

func all(values []float64, is func(float64) bool) bool {
	return !slices.ContainsFunc(values, func(v float64) bool { return !is(v) })
}

func asideWords(aside []audit.DrawnAside) string {
	var rows []string
	for _, a := range aside {
		rows = append(rows, fmt.Sprintf("row %d (%s)", a.Row, a.Reason))
	}
	return wording.Some(rows, 3)
}

func figure3(v float64) string { return wording.Figure(v, 3) }

func (s *sheet) groupName(g int) string {
	if label := s.group(g); label != "" {
		return label
	}
	return "the mean"
}

func (s *sheet) ofGroup(g int) string {
	if label := s.group(g); label != "" {
		return " of " + label
	}
	return ""
}
