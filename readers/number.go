package readers

import (
	"math"
	"strconv"
	"unicode/utf8"
)

// plainNumber reads the form in which nearly all numbers come: a minus or none,
// digits without leading zeros, at most one decimal sign with digits on both
// sides, at most 15 digits. Such a number equals an integer divided by a power of
// ten that are both exact in a double, so one division rounds it correctly
// (Clinger 1990, How to read floating point numbers accurately, section 4), and
// its text can be written again from value and decimals.
func plainNumber(b []byte, decimal byte) (value float64, decimals int, whole int, ok bool) {
	i := 0
	negative := len(b) > 0 && b[0] == '-'
	if negative {
		i = 1
	}
	start, point := i, -1
	var m uint64
	for ; i < len(b); i++ {
		if c := b[i] - '0'; c <= 9 {
			m = m*10 + uint64(c)
		} else if b[i] == decimal && point < 0 {
			point = i
		} else {
			return 0, 0, 0, false
		}
	}
	digits := i - start
	if point >= 0 {
		digits--
		whole, decimals = point-start, i-point-1
		if decimals == 0 {
			return 0, 0, 0, false
		}
	} else {
		whole = digits
	}
	if whole == 0 || digits > 15 || (whole > 1 && b[start] == '0') {
		return 0, 0, 0, false
	}
	value = float64(m)
	if decimals > 0 {
		value /= powersOfTen(decimals)
	}
	if negative {
		value = -value
	}
	return value, decimals, whole, true
}

// longNumber reads a plain number of more than 15 digits whose text is the shortest
// one that reads back as its value, as programs write them: its text need not be
// kept.
func longNumber(b []byte, decimal byte) (value float64, ok bool) {
	if len(b) < 16 || len(b) > 26 || b[0] != '-' && (b[0] < '0' || b[0] > '9') {
		return 0, false
	}
	var in, out [32]byte
	text := append(in[:0], b...)
	for i, c := range text {
		switch {
		case c == decimal:
			text[i] = '.'
		case c == '-' && i == 0, c >= '0' && c <= '9':
		default:
			return 0, false
		}
	}
	v, err := strconv.ParseFloat(string(text), 64)
	if err != nil || string(appendShortest(out[:0], v)) != string(text) {
		return 0, false
	}
	return v, true
}

// powersOfTen gives 10^n for n from 0 to 15, all exact.
func powersOfTen(n int) float64 {
	switch n {
	case 1:
		return 1e1
	case 2:
		return 1e2
	case 3:
		return 1e3
	case 4:
		return 1e4
	case 5:
		return 1e5
	case 6:
		return 1e6
	}
	p := 1e7
	for ; n > 7; n-- {
		p *= 10
	}
	return p
}

// written is how a number is written, as far as its text alone tells.
type written struct {
	value     float64
	decimals  int // -1 with an exponent
	thousands bool
	look      Look // set when the form is that of a number, but it can't be used
}

// readNumber applies the grammar: an optional sign (-, +, U+2212), digits with at
// most one decimal sign, groups of three digits after the first when signs stand
// between thousands, an optional exponent. ok is false when the text is no such
// thing; when it is, but lies outside the doubles, ok is true and look says so.
// decimal is '.' or ','; the other of the two, a space and an apostrophe may
// stand between thousands.
func readNumber(text string, decimal byte) (w written, ok bool) {
	var buf [64]byte
	out := buf[:0]
	s := text
	if sign, n := leadingSign(s); n > 0 {
		s = s[n:]
		if sign == '-' {
			out = append(out, '-')
		}
	}
	// The whole part: digits, in groups when a sign stands between them.
	group, groups, between := 0, 0, ""
	for len(s) > 0 {
		if s[0] >= '0' && s[0] <= '9' {
			out = append(out, s[0])
			group++
			s = s[1:]
			continue
		}
		n := groupSign(s, decimal)
		if n == 0 || group == 0 {
			break
		}
		if groups == 0 && (group > 3 || out[len(out)-group] == '0') || groups > 0 && (group != 3 || s[:n] != between) {
			return w, false // 0,125 and 1234,567 have no thousands
		}
		between = s[:n]
		groups++
		group = 0
		s = s[n:]
	}
	if groups > 0 && group != 3 {
		return w, false
	}
	w.thousands = groups > 0
	digits := groups > 0 || group > 0
	if len(s) > 0 && s[0] == decimal {
		s = s[1:]
		out = append(out, '.')
		for len(s) > 0 && s[0] >= '0' && s[0] <= '9' {
			out = append(out, s[0])
			w.decimals++
			digits = true
			s = s[1:]
		}
	}
	if !digits {
		return w, false
	}
	if len(s) > 1 && (s[0] == 'e' || s[0] == 'E') {
		if groups > 0 {
			return w, false // nobody writes 2,517e3 for 2517000
		}
		s = s[1:]
		out = append(out, 'e')
		if sign, n := leadingSign(s); n > 0 {
			s = s[n:]
			out = append(out, sign)
		}
		if len(s) == 0 {
			return w, false
		}
		for len(s) > 0 && s[0] >= '0' && s[0] <= '9' {
			out = append(out, s[0])
			s = s[1:]
		}
		w.decimals = -1
	}
	if len(s) > 0 {
		return w, false
	}
	v, err := strconv.ParseFloat(string(out), 64)
	switch {
	case err != nil || math.IsInf(v, 0):
		w.look = OutOfRange
	case v == 0 && hasDigitAboveZero(out):
		w.look = OutOfRange
	}
	w.value = v
	return w, true
}

// leadingSign gives the sign that s begins with as '-' or '+', and its length.
func leadingSign(s string) (sign byte, n int) {
	switch {
	case s == "":
		return 0, 0
	case s[0] == '-' || s[0] == '+':
		return s[0], 1
	case len(s) >= 3 && s[:3] == "\u2212":
		return '-', 3
	}
	return 0, 0
}

// groupSign gives the length of a sign between thousands at the start of s.
func groupSign(s string, decimal byte) int {
	switch s[0] {
	case ' ', '\'':
		return 1
	case '.', ',':
		if s[0] != decimal {
			return 1
		}
	}
	if s[0] >= utf8.RuneSelf {
		switch r, n := utf8.DecodeRuneInString(s); r {
		case '\u00a0', '\u2007', '\u2009', '\u202f', '\u2019':
			return n
		}
	}
	return 0
}

// hasDigitAboveZero tells whether the digits before an exponent are not all 0: a
// value of 0 has then lost them.
func hasDigitAboveZero(s []byte) bool {
	for _, c := range s {
		if c == 'e' {
			return false
		}
		if c >= '1' && c <= '9' {
			return true
		}
	}
	return false
}

// ParseNumber reads a text as footing reads a cell: decimal is '.' or ','. ok is
// false for everything that the grammar of numbers does not know (hexadecimal,
// 1_000, Inf, NaN), and for values outside the doubles.
func ParseNumber(text string, decimal byte) (value float64, ok bool) {
	w, ok := readNumber(text, decimal)
	return w.value, ok && w.look == Wording
}

// ParseMeasure splits a number from the unit that follows it, as in "4.1 °C" or
// "35%". The unit is at most 16 bytes: one word that starts with a letter or a sign
// of measure, or several that are all known units. ok is false when the text is a
// number alone or no number at all.
func ParseMeasure(text string, decimal byte) (value float64, unit string, ok bool) {
	w, unit, ok := readMeasure(text, decimal)
	return w.value, unit, ok
}

func readMeasure(text string, decimal byte) (w written, unit string, ok bool) {
	end := 0
	_, n := leadingSign(text)
	end += n
	for i := end; i < len(text); {
		if c := text[i]; c >= '0' && c <= '9' || c == decimal {
			i++
			end = i
			continue
		}
		n := groupSign(text[i:], decimal)
		if n == 0 || i+n >= len(text) || text[i+n] < '0' || text[i+n] > '9' {
			break
		}
		i += n
		end = i
	}
	// An exponent belongs to the number when digits follow it: 1e5 m, but 5 e.
	if rest := text[end:]; len(rest) > 1 && (rest[0] == 'e' || rest[0] == 'E') {
		i := 1
		if _, n := leadingSign(rest[i:]); n > 0 {
			i += n
		}
		j := i
		for j < len(rest) && rest[j] >= '0' && rest[j] <= '9' {
			j++
		}
		if j > i {
			end += j
		}
	}
	number, unit := text[:end], trimPadding(text[end:])
	if len(unit) > 16 || !mayBeUnit(unit) {
		return w, "", false
	}
	w, ok = readNumber(number, decimal)
	return w, unit, ok && w.look == Wording
}

// lookOf says what a text that is no number resembles.
func lookOf(text string, decimal byte) Look {
	if text == "" {
		return Wording
	}
	if w, ok := readNumber(text, decimal); ok {
		return w.look
	}
	other := byte(',')
	if decimal == ',' {
		other = '.'
	}
	if w, ok := readNumber(text, other); ok && w.look == Wording {
		return OtherSign
	}
	s := text
	if _, n := leadingSign(s); n > 0 {
		s = s[n:]
	}
	switch {
	case equalFold(s, "inf"), equalFold(s, "infinity"), s == "∞":
		return Infinite
	case foreignNumber(s, decimal):
		return Foreign
	}
	if _, _, ok := readMeasure(text, decimal); ok {
		return Measure
	}
	return Wording
}

// foreignNumber knows the ways to write numbers that other programs accept and
// footing does not.
func foreignNumber(s string, decimal byte) bool {
	if len(s) > 2 && s[0] == '0' && (s[1] == 'x' || s[1] == 'X') {
		for i := 2; i < len(s); i++ {
			c := s[i] | 0x20
			if !(c >= '0' && c <= '9' || c >= 'a' && c <= 'f' || c == 'p' || c == '.' || s[i] == '-' || s[i] == '+') {
				return false
			}
		}
		return true
	}
	changed := false
	var buf [64]byte
	out := buf[:0]
	for i, r := range s {
		switch {
		case r == '_' && i > 0 && len(out) > 0 && out[len(out)-1] >= '0' && out[len(out)-1] <= '9':
			changed = true
		case (r == 'd' || r == 'D') && i > 0:
			out = append(out, 'e')
			changed = true
		case r >= utf8.RuneSelf:
			d := digitOf(r)
			if d < 0 {
				return false
			}
			out = append(out, byte('0'+d))
			changed = true
		default:
			out = append(out, byte(r))
		}
		if len(out) == cap(out) {
			return false
		}
	}
	if !changed {
		return false
	}
	_, ok := readNumber(string(out), decimal)
	return ok
}

// numberText writes a stored number as it was read: with its decimals when they
// are known, else in the shortest form that reads back exactly.
func numberText(value float64, form uint8, decimal byte) string {
	var buf [32]byte
	out := buf[:0]
	if d := form & decimalsMask; d != decimalsOpen {
		out = strconv.AppendFloat(out, value, 'f', int(d), 64)
	} else {
		out = appendShortest(out, value)
	}
	if decimal == ',' {
		for i, c := range out {
			if c == '.' {
				out[i] = ','
			}
		}
	}
	return string(out)
}

// appendShortest writes the shortest text that reads back as the same double,
// without an exponent where people would not use one.
func appendShortest(out []byte, v float64) []byte {
	if a := math.Abs(v); a != 0 && (a < 1e-5 || a >= 1e15) {
		return strconv.AppendFloat(out, v, 'g', -1, 64)
	}
	return strconv.AppendFloat(out, v, 'f', -1, 64)
}

func nan() float64 { return math.NaN() }
