package readers

import "slices"

// isMissingCode tells whether a text is one of the usual ways to write that there
// is no value, in any case.
func isMissingCode(s string) bool {
	switch len(s) {
	case 1:
		return s == "-" || s == "." || s == "?"
	case 2:
		return s == ".." || equalFold(s, "na") || equalFold(s, "nd")
	case 3:
		return s == "–" || equalFold(s, "n/a") || equalFold(s, "nan")
	case 4:
		return equalFold(s, "null") || equalFold(s, "none") || equalFold(s, "n.d.")
	case 7:
		return equalFold(s, "missing")
	}
	return false
}

// isFault tells whether a text is an error value as spreadsheets write it when
// they save text, or the row of hashes of a column that was too narrow.
func isFault(s string) bool {
	if len(s) < 3 || s[0] != '#' {
		return false
	}
	switch s {
	case "#DIV/0!", "#N/A", "#NAME?", "#NULL!", "#NUM!", "#REF!", "#VALUE!", "#SPILL!",
		"#CALC!", "#FIELD!", "#BLOCKED!", "#UNKNOWN!", "#CONNECT!", "#GETTING_DATA", "#BUSY!":
		return true
	}
	for i := range len(s) {
		if s[i] != '#' {
			return false
		}
	}
	return true
}

// declared is what the owner said stands for a missing value: texts compared as
// they are written, and numbers compared by value, so that -99 covers -99.0.
type declared struct {
	words   []string
	numbers []float64
}

func newDeclared(codes []string, decimal byte) declared {
	var d declared
	for _, c := range codes {
		c = trimPadding(c)
		d.words = append(d.words, c)
		v, ok := ParseNumber(c, '.')
		if !ok {
			v, ok = ParseNumber(c, decimal)
		}
		if ok {
			d.numbers = append(d.numbers, v)
		}
	}
	return d
}

func (d *declared) word(s string) bool {
	return slices.Contains(d.words, s)
}

func (d *declared) number(v float64) bool {
	return slices.Contains(d.numbers, v)
}
