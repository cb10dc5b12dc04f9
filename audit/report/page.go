package report

import (
	"bytes"
	"strings"

	"github.com/fatih/color"
	"github.com/rivo/uniseg"

	"footing/rules/wording"
)

// page collects lines of text for a terminal: it wraps at a width, indents
// what follows, and paints whole words only after their width is known.
type page struct {
	buffer bytes.Buffer
	width  int
	paint  bool
	lines  int
}

// ink is a style; plain has none.
type ink []color.Attribute

var (
	plain  ink
	strong = ink{color.Bold}
	faint  = ink{color.Faint}
	green  = ink{color.FgGreen}
	cyan   = ink{color.FgCyan}
	yellow = ink{color.FgYellow}
	red    = ink{color.FgRed}
)

// styled paints s when the page is painted.
func (p *page) styled(s string, i ink) string {
	if !p.paint || len(i) == 0 {
		return s
	}
	c := color.New(i...)
	c.EnableColor()
	return c.Sprint(s)
}

// blank writes an empty line.
func (p *page) blank() {
	p.buffer.WriteByte('\n')
	p.lines++
}

// say wraps text after a lead, which is painted, and hangs what follows under
// the text. The lead's width counts as it is shown.
func (p *page) say(lead string, i ink, text string) {
	p.sayIndented(lead, i, uniseg.StringWidth(lead), text)
}

// sayIndented is say with the indent of the following lines given.
func (p *page) sayIndented(lead string, i ink, indent int, text string) {
	p.buffer.WriteString(p.styled(lead, i))
	at := uniseg.StringWidth(lead)
	first := true
	for _, word := range strings.Fields(wording.Printable(text)) {
		w := uniseg.StringWidth(word)
		switch {
		case first:
		case at+1+w > p.width:
			p.buffer.WriteByte('\n')
			p.lines++
			p.buffer.WriteString(strings.Repeat(" ", indent))
			at = indent
		default:
			p.buffer.WriteByte(' ')
			at++
		}
		p.buffer.WriteString(word)
		at += w
		first = false
	}
	p.buffer.WriteByte('\n')
	p.lines++
}

// verbatim writes a line as it is, for what is to be copied.
func (p *page) verbatim(line string) {
	p.buffer.WriteString(wording.Printable(line))
	p.buffer.WriteByte('\n')
	p.lines++
}
