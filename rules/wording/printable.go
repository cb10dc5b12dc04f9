package wording

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// Printable makes visible what a terminal or a reader would not show or would
// obey: control characters, zero-width and bidirectional marks, and bytes that
// are no text become escapes such as \u202e. Line breaks are escaped too,
// since text from the data has its place within a line.
func Printable(s string) string {
	if !strings.ContainsFunc(s, hidden) && utf8.ValidString(s) {
		return s
	}
	var b strings.Builder
	for i, r := range s {
		switch {
		case r == utf8.RuneError && !strings.HasPrefix(s[i:], "\uFFFD"):
			fmt.Fprintf(&b, `\x%02x`, s[i])
		case hidden(r):
			fmt.Fprintf(&b, `\u%04x`, r)
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}

// EscapeJSON writes the characters that Printable makes visible as JSON escapes,
// in text that is JSON already: there they can only stand within strings, line
// ends apart.
func EscapeJSON(text []byte) []byte {
	var out []byte
	for len(text) > 0 {
		r, n := utf8.DecodeRune(text)
		if hidden(r) && r != '\n' && !(r == utf8.RuneError && n == 1) {
			out = fmt.Appendf(out, `\u%04x`, r)
		} else {
			out = append(out, text[:n]...)
		}
		text = text[n:]
	}
	return out
}

// hidden tells characters that act on a display instead of showing on it.
func hidden(r rune) bool {
	switch {
	case r < 0x20, r >= 0x7f && r <= 0x9f:
		return true
	case r == 0x200b, r == 0x200e, r == 0x200f, r == 0xfeff:
		return true
	case r >= 0x202a && r <= 0x202e, r >= 0x2066 && r <= 0x2069:
		return true
	}
	return false
}
