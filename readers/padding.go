package readers

import (
	"strings"
	"unicode/utf8"
)

// isPadding tells the spaces that are taken off both ends of a cell.
func isPadding(r rune) bool {
	switch r {
	case ' ', '\t', '\r', '\n', '\u00a0', '\u2007', '\u2009', '\u202f':
		return true
	}
	return isInvisible(r)
}

// isInvisible tells the two marks that show nothing and still make two texts
// unequal: the byte order mark and the zero width space.
func isInvisible(r rune) bool { return r == '\ufeff' || r == '\u200b' }

func trimPadding(s string) string { return strings.TrimFunc(s, isPadding) }

// trimmed takes the padding off a field and says whether there was any, and
// whether an invisible mark was among it. The common field, which starts and ends
// with a visible ASCII character, is known by two looks.
func trimmed(b []byte) (core []byte, padded, invisible bool) {
	n := len(b)
	if n == 0 || b[0] > ' ' && b[0] < utf8.RuneSelf && b[n-1] > ' ' && b[n-1] < utf8.RuneSelf {
		return b, false, false
	}
	for len(b) > 0 {
		r, n := utf8.DecodeRune(b)
		if !isPadding(r) {
			break
		}
		invisible = invisible || isInvisible(r)
		b = b[n:]
	}
	for len(b) > 0 {
		r, n := utf8.DecodeLastRune(b)
		if !isPadding(r) {
			break
		}
		invisible = invisible || isInvisible(r)
		b = b[:len(b)-n]
	}
	return b, len(b) != n, invisible
}
