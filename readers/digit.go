package readers

import "unicode"

// digitOf gives the value of a decimal digit of any script, -1 for anything else.
// Unicode keeps the ten digits of a script together, zero first, at the start of
// a range of the category Nd or at a multiple of ten from it.
func digitOf(r rune) int {
	if r >= '0' && r <= '9' {
		return int(r - '0')
	}
	if !unicode.Is(unicode.Nd, r) {
		return -1
	}
	first := r
	for first > 0 && unicode.Is(unicode.Nd, first-1) {
		first--
	}
	return int(r-first) % 10
}

// equalFold compares with an ASCII text in lower case, without allocation.
func equalFold(s, lower string) bool {
	if len(s) != len(lower) {
		return false
	}
	for i := range len(s) {
		c := s[i]
		if c >= 'A' && c <= 'Z' {
			c |= 0x20
		}
		if c != lower[i] {
			return false
		}
	}
	return true
}
