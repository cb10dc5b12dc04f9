// Package wording turns figures into words: rounded numbers, counts with
// their nouns, lists. It is used wherever a sentence is made, so that a figure
// reads the same in every report.
package wording

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Figure writes v to the given number of significant digits, without
// exponent from 1e-5 to 1e7. NaN is "undefined".
func Figure(v float64, digits int) string {
	switch {
	case math.IsNaN(v):
		return "undefined"
	case math.IsInf(v, 0):
		return "unbounded"
	case v == 0:
		return "0"
	}
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', digits-1, 64), 64)
	if err != nil {
		return strconv.FormatFloat(v, 'g', digits, 64)
	}
	size := math.Abs(rounded)
	if size < 1e-5 || size >= 1e7 {
		return strconv.FormatFloat(rounded, 'e', digits-1, 64)
	}
	places := max(0, digits-1-int(math.Floor(math.Log10(size))))
	return strconv.FormatFloat(rounded, 'f', places, 64)
}

// Number writes v with as many digits as it needs, at most six.
func Number(v float64) string {
	s := Figure(v, 6)
	if strings.Contains(s, ".") && !strings.Contains(s, "e") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}

// Places is how many decimals show two significant digits of a standard
// error: estimate and interval are written to these. It may be negative.
func Places(se float64) int {
	if !(se > 0) || math.IsInf(se, 0) {
		return 4
	}
	return 1 - int(math.Floor(math.Log10(se)))
}

// To writes v with the given number of decimals; negative ones round to tens,
// hundreds and so on. Very small or large figures keep an exponent.
func To(v float64, places int) string {
	switch {
	case math.IsNaN(v):
		return "undefined"
	case places > 9:
		return Figure(v, 3)
	case places < 0:
		unit := math.Pow(10, float64(-places))
		v = math.Round(v/unit) * unit
		places = 0
	}
	if math.Abs(v) >= 1e15 {
		return Figure(v, 6)
	}
	s := strconv.FormatFloat(v, 'f', places, 64)
	if strings.Trim(s, "-0.") == "" {
		return strings.TrimPrefix(s, "-")
	}
	return s
}

// P writes a p-value to two significant digits and four decimals at most.
func P(p float64) string {
	switch {
	case math.IsNaN(p):
		return "p undefined"
	case p < 0.0001:
		return "p < 0.0001"
	case p > 0.9999:
		return "p = 1"
	}
	places := min(4, Places(p))
	return "p = " + strconv.FormatFloat(p, 'f', max(2, places), 64)
}

// Percent writes a share as a whole percentage, or with one decimal below
// ten percent; without a space, so that lines do not break there.
func Percent(share float64) string {
	v := 100 * share
	if v > 0 && v < 9.95 {
		return strings.TrimSuffix(strconv.FormatFloat(v, 'f', 1, 64), ".0") + "%"
	}
	return strconv.FormatFloat(v, 'f', 0, 64) + "%"
}

// Count writes a number with its noun, which takes an s beyond one.
func Count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// List joins words with commas and a final "and".
func List(words []string) string {
	switch len(words) {
	case 0:
		return ""
	case 1:
		return words[0]
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

// Some lists at most the first most words and says how many more there are.
func Some(words []string, most int) string {
	if len(words) <= most {
		return List(words)
	}
	return fmt.Sprintf("%s and %d more", strings.Join(words[:most], ", "), len(words)-most)
}

// Stop ends s with a full stop, unless it has an end mark.
func Stop(s string) string {
	if s == "" || strings.HasSuffix(s, ".") || strings.HasSuffix(s, "?") || strings.HasSuffix(s, "!") {
		return s
	}
	return s + "."
}

// Sentence makes s begin with a capital, where it begins with a plain small
// letter, and end with a full stop.
func Sentence(s string) string {
	if s != "" && 'a' <= s[0] && s[0] <= 'z' {
		s = strings.ToUpper(s[:1]) + s[1:]
	}
	return Stop(s)
}
