package readers

import (
	"encoding/xml"
	"fmt"
)

// sharedTexts is the list of texts that the cells of a workbook refer to by number.
type sharedTexts struct {
	words dictionary
	code  []uint32 // by number
}

// text gives the bytes of a shared text; ok is false when there is none.
func (s *sharedTexts) text(i int) (b []byte, ok bool) {
	if i < 0 || i >= len(s.code) {
		return nil, false
	}
	return s.words.bytes(s.code[i]), true
}

// readTexts reads the shared texts, once for all sheets.
func (b *book) readTexts() error {
	if b.texts != nil || b.textPart == "" {
		return nil
	}
	texts := &sharedTexts{}
	p, err := b.openPart(b.textPart, func() string { return fmt.Sprintf(" after text %d", len(texts.code)) })
	if err != nil {
		return err
	}
	defer p.close()
	var c collector
	for {
		t, err := p.next()
		if err != nil {
			return err
		}
		if t == nil {
			break
		}
		switch e := t.(type) {
		case xml.StartElement:
			if e.Name.Local == "si" {
				c.reset()
			}
			c.start(e.Name.Local)
		case xml.CharData:
			c.text(e)
		case xml.EndElement:
			c.end(e.Name.Local)
			if e.Name.Local == "si" {
				texts.add(c.result())
			}
		}
	}
	b.texts = texts
	return nil
}

func (s *sharedTexts) add(text []byte) {
	code, slot, known := s.words.find(text)
	if !known {
		code = s.words.add(text, slot, Text)
	}
	s.code = append(s.code, code)
}

// collector joins the runs of a rich text and leaves out the phonetic ones, which
// repeat it in another script.
type collector struct {
	out      []byte
	inText   bool
	phonetic int
}

func (c *collector) reset() { *c = collector{out: c.out[:0]} }

func (c *collector) start(name string) {
	switch name {
	case "rPh":
		c.phonetic++
	case "t":
		c.inText = c.phonetic == 0
	default:
		c.inText = false
	}
}

func (c *collector) end(name string) {
	if name == "rPh" {
		c.phonetic--
	}
	c.inText = false
}

func (c *collector) text(b []byte) {
	if c.inText {
		c.out = append(c.out, b...)
	}
}

// result gives the text with the escapes for control characters resolved.
func (c *collector) result() []byte { return unescape(c.out) }

// unescape resolves _x001B_, the way in which workbooks write characters that XML
// can't hold; the bytes are changed in place.
func unescape(b []byte) []byte {
	const form = len("_x001B_")
	for i := 0; i+form <= len(b); i++ {
		if b[i] != '_' || b[i+1] != 'x' || b[i+6] != '_' {
			continue
		}
		r := rune(0)
		for _, d := range b[i+2 : i+6] {
			h := hexDigit(d)
			if h < 0 {
				r = -1
				break
			}
			r = r<<4 | rune(h)
		}
		if r <= 0 || r >= 0xd800 && r < 0xe000 || r > 0x7f && r < 0xa0 {
			continue
		}
		if r >= 0x80 {
			rest := string(b[i+form:])
			b = append(append(b[:i], string(r)...), rest...)
			continue
		}
		b[i] = byte(r)
		b = append(b[:i+1], b[i+form:]...)
	}
	return b
}

func hexDigit(c byte) int {
	switch {
	case c >= '0' && c <= '9':
		return int(c - '0')
	case c >= 'A' && c <= 'F':
		return int(c-'A') + 10
	case c >= 'a' && c <= 'f':
		return int(c-'a') + 10
	}
	return -1
}
