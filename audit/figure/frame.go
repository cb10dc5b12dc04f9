package figure

import (
	"fmt"
	"math"
	"slices"
	"strconv"
)

// scale carries values to places on the page.
type scale struct{ least, most, from, to float64 }

func (s scale) at(v float64) float64 {
	if s.most == s.least {
		return (s.from + s.to) / 2
	}
	return s.from + (v-s.least)/(s.most-s.least)*(s.to-s.from)
}

func (s scale) all(v []float64) []float64 {
	out := make([]float64, len(v))
	for k, x := range v {
		out[k] = s.at(x)
	}
	return out
}

// span is the range of values, NaN and infinities aside.
type span struct{ least, most float64 }

func newSpan() span { return span{math.Inf(1), math.Inf(-1)} }

func (s *span) take(values ...float64) {
	for _, v := range values {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			s.least, s.most = min(s.least, v), max(s.most, v)
		}
	}
}

// room widens the span a little, so that no mark sits on the frame; a span
// without width gets some.
func (s span) room() span {
	if s.least > s.most {
		return span{0, 1}
	}
	pad := 0.04 * (s.most - s.least)
	if pad == 0 {
		pad = max(0.5, math.Abs(s.least)/10)
	}
	return span{s.least - pad, s.most + pad}
}

// nice chooses a step of 1, 2 or 5 times a power of ten for about n ticks
// (Heckbert 1990, Nice numbers for graph labels, Graphics Gems).
func nice(s span, n int) (ticks []float64, decimals int) {
	raw := (s.most - s.least) / float64(max(1, n))
	if !(raw > 0) || math.IsInf(raw, 0) {
		return []float64{s.least}, 2
	}
	exponent := math.Floor(math.Log10(raw))
	fraction := raw / math.Pow(10, exponent)
	step := 10.0
	for _, f := range []float64{1, 2, 5} {
		if fraction < f*1.4142 {
			step = f
			break
		}
	}
	step *= math.Pow(10, exponent)
	for k := math.Ceil(s.least / step); k*step <= s.most+step*1e-9 && len(ticks) < 50; k++ {
		ticks = append(ticks, k*step)
	}
	return ticks, max(0, -int(math.Floor(math.Log10(step)+1e-9)))
}

// tickWords writes the ticks of an axis alike.
func tickWords(ticks []float64, decimals int) []string {
	var all []string
	for _, v := range ticks {
		switch {
		case v == 0:
			all = append(all, "0")
		case decimals > 6 || math.Abs(v) >= 1e7:
			all = append(all, strconv.FormatFloat(v, 'e', 1, 64))
		default:
			all = append(all, strconv.FormatFloat(v, 'f', decimals, 64))
		}
	}
	return all
}

// frame is a plot: a box with two scales.
type frame struct {
	x, y scale
	box
}

// layout says where a frame stands and what its axes are called.
type layout struct {
	top, height float64 // of the whole, with axes and titles
	right       float64 // margin for labels
	x, y        span
	xTitle      string
	yTitle      string
	xTicks      []float64 // nil for nice ones
	xWords      []string
}

// frame draws the axes: the title of the vertical one stands above it, where it
// is read without turning the head.
func (c *canvas) frame(l layout) frame {
	ticks, decimals := nice(l.y, 5)
	labels := tickWords(ticks, decimals)
	widest := 0.0
	for _, s := range labels {
		widest = max(widest, textWidth(s))
	}
	f := frame{box: box{left: 10 + widest + 8, top: l.top + 26, right: width - max(12, l.right), bottom: l.top + l.height - 42}}
	f.x = scale{l.x.least, l.x.most, f.left, f.right}
	f.y = scale{l.y.least, l.y.most, f.bottom, f.top}
	c.text(10, l.top+15, "start", "q", short(l.yTitle, wholeLine))
	for k, v := range ticks {
		y := f.y.at(v)
		c.line("r", f.left, y, f.right, y)
		c.text(f.left-7, y+4.5, "end", "q", labels[k])
	}
	xTicks, xWords := l.xTicks, l.xWords
	if xTicks == nil {
		xTicks, decimals = nice(l.x, 6)
		xWords = tickWords(xTicks, decimals)
	}
	last := math.Inf(-1)
	for k, v := range xTicks {
		x := f.x.at(v)
		c.line("x", x, f.bottom, x, f.bottom+5)
		if half := textWidth(xWords[k]) / 2; x-half > last {
			c.text(x, f.bottom+19, "middle", "q", xWords[k])
			last = x + half + 6
		}
	}
	c.line("x", f.left, f.bottom, f.right, f.bottom)
	c.text((f.left+f.right)/2, f.bottom+36, "middle", "q", short(l.xTitle, int((f.right-f.left)/letter)+6))
	return f
}

// clipped draws what may leave the frame so that it ends there.
func (c *canvas) clipped(f frame, draw func()) {
	c.clips++
	c.clip += fmt.Sprintf(`<clipPath id="CLIP%d"><rect x="%s" y="%s" width="%s" height="%s"/></clipPath>`, c.clips, num(f.left), num(f.top), num(f.right-f.left), num(f.bottom-f.top))
	fmt.Fprintf(&c.body, `<g clip-path="url(#CLIP%d)">`, c.clips)
	draw()
	c.body.WriteString("</g>")
}

// inks is how many colours, shapes and dashes there are; more groups than these
// are drawn alike.
const inks = 6

// dashes go with the inks.
var dashes = [inks]string{"", "7 4", "2 3.5", "11 4 2 4", "5 2.5", "1.5 5"}

// shape is the outline of a group's mark around a place, about 6 wide.
func shape(group int, x, y float64) string {
	switch group % inks {
	case 1:
		return "M" + num(x-2.8) + " " + num(y-2.8) + "h5.6v5.6h-5.6z"
	case 2:
		return "M" + num(x) + " " + num(y-3.8) + "l3.6 6.4h-7.2z"
	case 3:
		return "M" + num(x) + " " + num(y-4) + "l4 4l-4 4l-4-4z"
	case 4:
		return "M" + num(x) + " " + num(y+3.8) + "l3.6-6.4h-7.2z"
	case 5:
		return "M" + num(x-1.2) + " " + num(y-3.8) + "h2.4v2.6h2.6v2.4h-2.6v2.6h-2.4v-2.6h-2.6v-2.4h2.6z"
	}
	return "M" + num(x-3.1) + " " + num(y) + "a3.1 3.1 0 1 0 6.2 0a3.1 3.1 0 1 0-6.2 0z"
}

// labelAt writes a label by a marked place, where there is room, and reports
// whether there was.
func (c *canvas) labelAt(f frame, x, y float64, class, s string) bool {
	w := textWidth(s)
	for _, try := range []struct {
		dx, dy float64
		anchor string
	}{{11, 4.5, "start"}, {-11, 4.5, "end"}, {0, -12, "middle"}, {0, 21, "middle"}, {10, -9, "start"}, {-10, -9, "end"}, {10, 18, "start"}, {-10, 18, "end"}} {
		b := box{left: x + try.dx, top: y + try.dy - 11, bottom: y + try.dy + 3}
		switch try.anchor {
		case "end":
			b.left -= w
		case "middle":
			b.left -= w / 2
		}
		b.right = b.left + w
		if c.fits(b, box{f.left, f.top - 4, width - 2, f.bottom}) {
			c.text(x+try.dx, y+try.dy, try.anchor, class+" v", s)
			return true
		}
	}
	return false
}

// margin is a label that stands to the right of a frame, at a height.
type margin struct {
	y     float64
	class string
	text  string
}

// labelRight writes labels to the right of a frame, moved apart where they
// would overlap; ones that find no room are left out.
func (c *canvas) labelRight(f frame, labels []margin) {
	slices.SortStableFunc(labels, func(a, b margin) int {
		switch {
		case a.y < b.y:
			return -1
		case a.y > b.y:
			return 1
		}
		return 0
	})
	const apart = em + 1
	at := make([]float64, len(labels))
	last := f.top - apart
	for k, l := range labels {
		at[k] = max(l.y, last+apart)
		last = at[k]
	}
	last = f.bottom + apart
	for k := len(labels) - 1; k >= 0; k-- {
		at[k] = min(at[k], last-apart)
		last = at[k]
	}
	for k, l := range labels {
		if at[k] >= f.top-apart {
			c.text(f.right+7, at[k]+4.5, "start", l.class, l.text)
			c.placed = append(c.placed, box{f.right + 5, at[k] - 8, width, at[k] + 8})
		}
	}
}
