package figure

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/rivo/uniseg"

	"footing/rules/wording"
)

// The page of a figure, in units that are pixels on a desk and a little less on
// a phone.
const (
	width  = 460.0
	em     = 13.0 // size of letters
	letter = 7.1  // width allowed for one
)

// wholeLine is how many letters a line across the page holds.
const wholeLine = 61

// look is the style of every figure: three inks for what is said, six for
// groups. The group colours are told apart in all common colour-vision
// deficiencies (after Okabe and Ito 2008, Color Universal Design), darkened on
// white and lightened on black; shape and dash tell the same.
const look = `.fg{font:13px system-ui,sans-serif;max-width:100%;height:auto}` +
	`.fg text{fill:var(--k)}.fg .q{fill:var(--m)}.fg .b{font-weight:600}` +
	`.fg{--p:#fff;--k:#1c2126;--m:#59636e;--r:#d5dade;--a:#b3261e;--c0:#0068a8;--c1:#c35200;--c2:#007d5c;--c3:#a8447f;--c4:#8a6a00;--c5:#5b4bb0}` +
	`@media screen and (prefers-color-scheme:dark){.fg{--p:#14181c;--k:#e8ebee;--m:#a3adb7;--r:#3a424a;--a:#ff8a80;--c0:#62b5f0;--c1:#f59a5b;--c2:#45cfa3;--c3:#e895c6;--c4:#e2c14a;--c5:#b3a7f7}}` +
	`.fg .p{fill:var(--p)}.fg .r{stroke:var(--r);fill:none}.fg .x{stroke:var(--m);fill:none}.fg .k{stroke:var(--k);fill:none}.fg .m{stroke:var(--a);fill:none;stroke-width:1.8}` +
	`.fg .z{fill:var(--r);opacity:.6}.fg .h{stroke:var(--m);fill:none;stroke-dasharray:5 4}.fg .d{fill:var(--k)}.fg .o{fill:var(--p);stroke:var(--k);stroke-width:1.5}.fg .v{stroke:var(--p);stroke-width:3;paint-order:stroke;stroke-linejoin:round}` +
	`.fg .l{fill:none;stroke-width:2.2}.fg .t{fill:none;stroke-width:1.6}.fg .s{opacity:.13}` +
	`.fg .a text,.fg text.a{fill:var(--a)}`

// canvas collects the marks of a figure.
type canvas struct {
	body   strings.Builder
	height float64
	clips  int
	clip   string // definitions
	placed []box  // of labels
}

// document makes the whole SVG. Text goes through an escape in one place,
// words.
func (c *canvas) document(name, title, desc string) []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" class="fg" viewBox="0 0 %s %s" width="%s" height="%s" role="img" aria-labelledby="fg-%s-t fg-%s-d">`,
		num(width), num(c.height), num(width), num(c.height), name, name)
	fmt.Fprintf(&b, `<title id="fg-%s-t">%s</title><desc id="fg-%s-d">%s</desc>`, name, words(title), name, words(desc))
	b.WriteString("<style>" + look + groupLook() + "</style>")
	if c.clip != "" {
		b.WriteString("<defs>" + strings.ReplaceAll(c.clip, "CLIP", "fg-"+name+"-c") + "</defs>")
	}
	fmt.Fprintf(&b, `<rect class="p" width="%s" height="%s"/>`, num(width), num(c.height))
	b.WriteString(strings.ReplaceAll(c.body.String(), "url(#CLIP", "url(#fg-"+name+"-c"))
	b.WriteString("</svg>\n")
	return b.Bytes()
}

// groupLook gives each group ink its fill and its stroke.
func groupLook() string {
	var b strings.Builder
	for k := range inks {
		fmt.Fprintf(&b, ".fg .f%d{fill:var(--c%d)}.fg .g%d{stroke:var(--c%d)}", k, k, k, k)
	}
	return b.String()
}

// words makes text safe for a place between tags: what would act on a display
// is shown, and what would act on a parser is escaped.
func words(s string) string {
	var b bytes.Buffer
	// A bytes.Buffer takes everything, so there is no error.
	_ = xml.EscapeText(&b, []byte(wording.Printable(s)))
	return b.String()
}

// num writes a coordinate to a tenth.
func num(v float64) string {
	s := strconv.FormatFloat(v, 'f', 1, 64)
	s = strings.TrimSuffix(s, ".0")
	if s == "-0" {
		return "0"
	}
	return s
}

// textWidth is how wide text will be, letters of double width counted so.
func textWidth(s string) float64 { return letter * float64(uniseg.StringWidth(wording.Printable(s))) }

// short cuts text to at most n letters.
func short(s string, n int) string {
	s = wording.Printable(s)
	if uniseg.StringWidth(s) <= n {
		return s
	}
	var b strings.Builder
	at := 0
	g := uniseg.NewGraphemes(s)
	for g.Next() {
		if at += g.Width(); at >= n {
			break
		}
		b.WriteString(g.Str())
	}
	return b.String() + "…"
}

// text writes words; anchor is start, middle or end.
func (c *canvas) text(x, y float64, anchor, class, s string) {
	fmt.Fprintf(&c.body, `<text x="%s" y="%s"`, num(x), num(y))
	if anchor != "start" {
		fmt.Fprintf(&c.body, ` text-anchor="%s"`, anchor)
	}
	if class != "" {
		fmt.Fprintf(&c.body, ` class="%s"`, class)
	}
	c.body.WriteString(">" + words(s) + "</text>")
}

func (c *canvas) path(class, d string) {
	if d != "" {
		fmt.Fprintf(&c.body, `<path class="%s" d="%s"/>`, class, d)
	}
}

func (c *canvas) line(class string, x1, y1, x2, y2 float64) {
	c.path(class, "M"+num(x1)+" "+num(y1)+"L"+num(x2)+" "+num(y2))
}

// polyline joins places; NaN breaks it.
func polyline(x, y []float64) string {
	var b strings.Builder
	pen := false
	for k := range x {
		if math.IsNaN(x[k]) || math.IsNaN(y[k]) {
			pen = false
			continue
		}
		if pen {
			b.WriteByte('L')
		} else {
			b.WriteByte('M')
		}
		pen = true
		b.WriteString(num(x[k]) + " " + num(y[k]))
	}
	return b.String()
}

// ribbon fills what lies between two lines.
func ribbon(x, low, high []float64) string {
	if len(x) < 2 {
		return ""
	}
	backX, back := make([]float64, len(x)), make([]float64, len(x))
	for k := range x {
		backX[len(x)-1-k], back[len(x)-1-k] = x[k], low[k]
	}
	return polyline(x, high) + "L" + strings.TrimPrefix(polyline(backX, back), "M") + "Z"
}

// box is a place on the page that is taken.
type box struct{ left, top, right, bottom float64 }

func (b box) meets(o box) bool {
	return b.left < o.right && o.left < b.right && b.top < o.bottom && o.top < b.bottom
}

// fits reports whether a label has room within the frame, and takes it.
func (c *canvas) fits(b, within box) bool {
	if b.left < within.left || b.right > within.right || b.top < within.top || b.bottom > within.bottom {
		return false
	}
	for _, o := range c.placed {
		if b.meets(o) {
			return false
		}
	}
	c.placed = append(c.placed, b)
	return true
}
