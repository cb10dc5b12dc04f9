package readers

import "strings"

// signUse is what one number tells of the file's decimal sign.
type signUse uint8

const (
	noSign     signUse = iota
	surePoint          // 7.5, 0.125, 1,042.7, 1,042,700, 2.5e3
	sureComma          // the same with the signs exchanged
	maybePoint         // 2.517: a decimal sign or thousands
	maybeComma         // 2,517
)

// evidence counts what the numbers of a file tell of its decimal sign.
type evidence struct {
	count [5]int
	first [5]int // record of the first of each kind
}

func (e *evidence) add(u signUse, record int) {
	if u == noSign {
		return
	}
	if e.count[u] == 0 {
		e.first[u] = record
	}
	e.count[u]++
}

// signsOf tells what a text that is a number under either sign says of it.
func signsOf(s string) signUse {
	if _, n := leadingSign(s); n > 0 {
		s = s[n:]
	}
	mantissa := s
	exponent := false
	if i := strings.IndexAny(s, "eE"); i >= 0 {
		mantissa, exponent = s[:i], true
	}
	points, commas := strings.Count(mantissa, "."), strings.Count(mantissa, ",")
	switch {
	case points == 0 && commas == 0:
		return noSign
	case points > 0 && commas > 0:
		if strings.LastIndexByte(mantissa, '.') > strings.LastIndexByte(mantissa, ',') {
			return surePoint
		}
		return sureComma
	case points > 1:
		return sureComma // the point stands between thousands
	case commas > 1:
		return surePoint
	}
	sign, sure, maybe := ".", surePoint, maybePoint
	if commas > 0 {
		sign, sure, maybe = ",", sureComma, maybeComma
	}
	whole, decimals, _ := strings.Cut(mantissa, sign)
	if exponent || len(decimals) != 3 || len(whole) == 0 || len(whole) > 3 || whole[0] == '0' {
		return sure
	}
	return maybe
}

// plainSigns is signsOf for a plain number, by its counts: digits before the sign
// and after it, and whether the first is a zero.
func plainSigns(decimal byte, whole, decimals int, zero bool) signUse {
	if decimals == 0 {
		return noSign
	}
	sure := decimals != 3 || whole > 3 || zero
	switch {
	case decimal == '.' && sure:
		return surePoint
	case decimal == '.':
		return maybePoint
	case sure:
		return sureComma
	}
	return maybeComma
}

// verdict on the decimal sign of a file.
type signVerdict uint8

const (
	signPoint signVerdict = iota
	signComma
	signOpen // 2,517 could be either
	signTied // both signs are used, equally often
)

// decide weighs the evidence. Where the delimiter is no semicolon a point needs no
// evidence: a comma would have been the doubtful one.
func (e *evidence) decide(delimiter byte) signVerdict {
	point, comma := e.count[surePoint], e.count[sureComma]
	if delimiter != ';' && comma == 0 {
		point += e.count[maybePoint]
	}
	switch {
	case point > comma:
		return signPoint
	case comma > point:
		return signComma
	case point > 0:
		return signTied
	case e.count[maybePoint]+e.count[maybeComma] > 0:
		return signOpen
	}
	return signPoint
}

// numberUnderEither tells whether a text is a number, with a unit or without, under
// a point or a comma as decimal sign, and what it says of the sign.
func numberUnderEither(s string) (signUse, bool) {
	if c := s[0]; c >= 'A' && c <= 'Z' || c >= 'a' && c <= 'z' {
		return noSign, false
	}
	for _, decimal := range [...]byte{'.', ','} {
		if w, ok := readNumber(s, decimal); ok && w.look == Wording {
			return signsOf(s), true
		}
		if _, unit, ok := readMeasure(s, decimal); ok {
			return signsOf(trimPadding(s[:len(s)-len(unit)])), true
		}
	}
	return noSign, false
}
