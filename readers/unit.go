package readers

import "strings"

// mayBeUnit tells whether a text may be the unit of the number before it.
func mayBeUnit(s string) bool {
	if s == "" || strings.ContainsAny(s, ";,?!=<>|\"\n") {
		return false
	}
	switch c := s[0]; c {
	case '%', '\'':
	default:
		if !isLetter(c) {
			return false
		}
	}
	return !strings.Contains(s, " ") || isUnit(s)
}

// trimBrackets takes one pair of brackets off a unit.
func trimBrackets(s string) string {
	if n := len(s); n > 2 && (s[0] == '(' && s[n-1] == ')' || s[0] == '[' && s[n-1] == ']') {
		return strings.TrimFunc(s[1:n-1], isPadding)
	}
	return s
}

func trimRunes(s, cut string) string { return strings.Trim(s, cut) }

// isUnit tells whether a text is written as a unit: symbols of measure with
// prefixes and exponents, joined by signs or spaces, or anything in brackets.
func isUnit(s string) bool {
	if t := trimBrackets(s); t != s {
		return true
	}
	if s == "" || len(s) > 40 {
		return false
	}
	parts := strings.FieldsFunc(s, func(r rune) bool {
		switch r {
		case ' ', '/', '*', '·', '×', '.', '⋅', '\u00a0', '\u202f', '(', ')':
			return true
		}
		return false
	})
	if len(parts) == 0 {
		return false
	}
	for _, p := range parts {
		if !isSymbol(p) {
			return false
		}
	}
	return true
}

// isSymbol knows one symbol of measure with its prefix and exponent.
func isSymbol(s string) bool {
	base := strings.TrimRight(s, "0123456789⁰¹²³⁴⁵⁶⁷⁸⁹^-−⁻+")
	if base == "" {
		return false
	}
	if isBaseUnit(base) {
		return true
	}
	for _, prefix := range [...]string{"da", "µ", "μ", "u", "m", "c", "d", "k", "M", "G", "n", "p", "h", "T"} {
		if rest, ok := strings.CutPrefix(base, prefix); ok && rest != "" && takesPrefix(rest) {
			return true
		}
	}
	return false
}

// takesPrefix knows the units that are used with prefixes.
func takesPrefix(s string) bool {
	switch s {
	case "m", "g", "s", "l", "L", "mol", "M", "A", "V", "W", "J", "N", "Pa", "bar", "Hz", "K", "cd", "lm", "lx",
		"Bq", "Sv", "Gy", "T", "Ω", "ohm", "S", "cal", "eV", "a", "yr", "U", "kat", "Wh", "mole", "F", "H", "C", "equiv", "eq", "psi", "Da":
		return true
	}
	return false
}

// isBaseUnit knows the units by themselves.
func isBaseUnit(s string) bool {
	if takesPrefix(s) {
		return true
	}
	switch s {
	case "%", "‰", "°", "°C", "°F", "℃", "℉", "C", "F", "h", "d", "min", "sec", "hr", "hrs", "day", "days", "week", "weeks",
		"month", "months", "year", "years", "yrs", "y", "hour", "hours", "minutes", "seconds", "ha", "ac", "ft", "in", "inch",
		"inches", "mi", "yd", "lb", "lbs", "oz", "gal", "mph", "kn", "knots", "deg", "degC", "degF", "degree", "degrees", "rad",
		"atm", "mmHg", "torr", "psu", "PSU", "ppt", "ppm", "ppb", "IU", "cfu", "CFU", "dB", "pH", "NTU", "FTU", "count", "counts",
		"n", "no", "ind", "cells", "DW", "FW", "dw", "fw", "t", "kat", "ml", "mL", "index", "ratio", "number", "percent",
		"meter", "meters", "metre", "metres", "gram", "grams", "litre", "liter", "litres", "liters", "score", "rpm", "bpm", "unitless", "1":
		return true
	}
	return false
}
