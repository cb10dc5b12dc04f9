package readers

import (
	"math"
	"strings"
	"time"
)

// dayZero is the day from which serial dates of the 1900 system count, chosen so
// that serials from March 1900 on agree with what spreadsheets store.
func dayZero() time.Time { return time.Date(1899, time.December, 30, 0, 0, 0, 0, time.UTC) }

// days1904 is what lies between the two systems of counting days.
const days1904 = 1462

// serialOf gives the day number of a date; ok is false when there is no such day.
func serialOf(year, month, day int) (float64, bool) {
	t := time.Date(year, time.Month(month), day, 0, 0, 0, 0, time.UTC)
	if t.Day() != day || int(t.Month()) != month {
		return 0, false
	}
	return math.Round(t.Sub(dayZero()).Hours() / 24), true
}

// dateText writes a day number as 2024-06-04, with the time of day when there is
// one; a number below 1 is a time alone.
func dateText(serial float64) string {
	const year9999 = 2958466
	if !(serial >= 0 && serial < year9999) {
		return ""
	}
	t := dayZero().Add(time.Duration(math.Round(math.Mod(serial, 1)*86400))*time.Second).AddDate(0, 0, int(serial))
	switch {
	case serial < 1:
		return t.Format("15:04:05")
	case t.Hour()+t.Minute()+t.Second() == 0:
		return t.Format("2006-01-02")
	}
	return t.Format("2006-01-02 15:04:05")
}

// readDate tells whether a text is a date or a time of day, and its day number
// where the text leaves no doubt; NaN where it does, as 6/4 and 4. Jun do.
func readDate(s string) (serial float64, ok bool) {
	if len(s) < 3 || len(s) > 40 {
		return 0, false
	}
	if day, rest, found := cutDay(s); found {
		rest = strings.TrimLeft(rest, " T,")
		if rest == "" {
			return day, true
		}
		if clock, ok := readClock(rest); ok {
			return day + clock, true
		}
		return 0, false
	}
	return readClock(s)
}

// cutDay takes a date off the start of s.
func cutDay(s string) (serial float64, rest string, ok bool) {
	var fields [3]string
	var signs [3]byte
	n := 0
	i := 0
	for n < 3 && i < len(s) {
		j := i
		if isLetter(s[i]) {
			for j < len(s) && isLetter(s[j]) {
				j++
			}
		} else {
			for j < len(s) && s[j] >= '0' && s[j] <= '9' {
				j++
			}
		}
		if j == i || j-i > 9 {
			return 0, "", false
		}
		fields[n] = s[i:j]
		i = j
		// Between the parts stands one sign, with a space after it or none: 4. Jun.
		if i < len(s) && n < 2 {
			c := s[i]
			switch c {
			case '-', '/', '.', ' ', ',':
				signs[n] = c
				i++
				if c != ' ' && i < len(s) && s[i] == ' ' {
					i++
				}
			default:
				n++
				goto done
			}
		}
		n++
		if n == 2 && i < len(s) && !isLetter(s[i]) && (s[i] < '0' || s[i] > '9') {
			break
		}
		// After a day and a month a clock may follow instead of a year.
		if n == 2 && looksLikeClock(s[i:]) {
			break
		}
	}
done:
	rest = s[i:]
	switch n {
	case 3:
		serial, ok = dateOfThree(fields, signs)
	case 2:
		serial, ok = dateOfTwo(fields, signs[0])
	}
	return serial, rest, ok
}

func isLetter(c byte) bool { return c|0x20 >= 'a' && c|0x20 <= 'z' || c >= 0x80 }

func looksLikeClock(s string) bool {
	_, ok := readClock(s)
	return ok
}

// small reads one to four digits, -1 for anything else.
func small(s string) int {
	if s == "" || len(s) > 4 {
		return -1
	}
	n := 0
	for i := range len(s) {
		if s[i] < '0' || s[i] > '9' {
			return -1
		}
		n = n*10 + int(s[i]-'0')
	}
	return n
}

// dateOfThree reads year-month-day, day.month.year, and month/day/year where the
// numbers allow only one of the last two; else the day stays open.
func dateOfThree(f [3]string, signs [3]byte) (serial float64, ok bool) {
	a, b, c := small(f[0]), small(f[1]), small(f[2])
	if m := monthOf(f[1]); m > 0 && a >= 1 && (len(f[2]) == 4 || len(f[2]) == 2) {
		return serialOf(fullYear(c, f[2]), m, a) // 4 Jun 2024
	}
	if m := monthOf(f[0]); m > 0 && b >= 1 && len(f[2]) == 4 {
		return serialOf(c, m, b) // Jun 4, 2024
	}
	if a < 0 || b < 0 || c < 0 || signs[0] != signs[1] || signs[0] == ' ' || signs[0] == ',' {
		return 0, false
	}
	if len(f[0]) == 4 && a >= 1000 {
		return serialOf(a, b, c)
	}
	if len(f[0]) > 2 || len(f[1]) > 2 || len(f[2]) != 4 && len(f[2]) != 2 {
		return 0, false
	}
	if len(f[2]) == 2 && signs[0] == '-' {
		return 0, false // 1-2-03 is a label as often as a date
	}
	year := fullYear(c, f[2])
	dayFirst, ok1 := serialOf(year, b, a)
	monthFirst, ok2 := serialOf(year, a, b)
	switch {
	case ok1 && (signs[0] == '.' || !ok2 || a == b):
		return dayFirst, true
	case ok2 && !ok1:
		return monthFirst, true
	case ok1 && ok2:
		return math.NaN(), true
	}
	return 0, false
}

// dateOfTwo reads a day and a month without a year; the day number stays open.
func dateOfTwo(f [2 + 1]string, sign byte) (serial float64, ok bool) {
	a, b := small(f[0]), small(f[1])
	switch {
	case monthOf(f[1]) > 0 && a >= 1 && a <= 31 && len(f[0]) <= 2: // 4. Jun
	case monthOf(f[0]) > 0 && sign != '.' && (b >= 1 && b <= 31 && len(f[1]) <= 2 || b >= 1900 && b < 2200): // Jun 4, Jun-2024
	case sign == '/' && len(f[0]) <= 2 && len(f[1]) <= 2 && (isDayMonth(a, b) || isDayMonth(b, a)): // 6/4
	default:
		return 0, false
	}
	return math.NaN(), true
}

func isDayMonth(day, month int) bool { return day >= 1 && day <= 31 && month >= 1 && month <= 12 }

// fullYear completes a year of two digits as spreadsheets do: 30 to 99 are 1930
// to 1999.
func fullYear(y int, text string) int {
	if len(text) == 2 {
		if y >= 30 {
			return 1900 + y
		}
		return 2000 + y
	}
	return y
}

// readClock reads 9:05, 09:05:30, 9:05 pm as a fraction of a day.
func readClock(s string) (day float64, ok bool) {
	half := -1
	if n := len(s); n > 2 && s[n-1]|0x20 == 'm' && (s[n-2]|0x20 == 'a' || s[n-2]|0x20 == 'p') {
		if half = 0; s[n-2]|0x20 == 'p' {
			half = 12
		}
		s = strings.TrimRight(s[:n-2], " ")
	}
	s = strings.TrimSuffix(s, "Z")
	h, rest, found := strings.Cut(s, ":")
	if !found || len(h) > 2 {
		return 0, false
	}
	m, sec, _ := strings.Cut(rest, ":")
	sec, fraction, hasFraction := strings.Cut(sec, ".")
	hour, minute, second := small(h), small(m), 0
	if sec != "" {
		second = small(sec)
		if len(sec) != 2 {
			return 0, false
		}
	}
	if hasFraction && (sec == "" || fraction == "" || strings.Trim(fraction, "0123456789") != "") {
		return 0, false
	}
	if len(m) != 2 || hour < 0 || hour > 24 || minute < 0 || minute > 59 || second < 0 || second > 60 {
		return 0, false
	}
	if half >= 0 {
		if hour < 1 || hour > 12 {
			return 0, false
		}
		hour = hour%12 + half
	}
	return (float64(hour)*3600 + float64(minute)*60 + float64(second)) / 86400, true
}

// monthOf knows the names of the months and their usual short forms in English,
// German, French and Spanish; 0 for anything else.
func monthOf(s string) int {
	if len(s) < 3 || len(s) > 10 {
		return 0
	}
	switch strings.ToLower(s) {
	case "jan", "january", "januar", "janv", "janvier", "ene", "enero":
		return 1
	case "feb", "february", "februar", "fév", "févr", "février", "febrero":
		return 2
	case "mar", "march", "mär", "mrz", "märz", "mars", "marzo":
		return 3
	case "apr", "april", "avr", "avril", "abr", "abril":
		return 4
	case "may", "mai", "mayo":
		return 5
	case "jun", "june", "juni", "juin", "junio":
		return 6
	case "jul", "july", "juli", "juil", "juillet", "julio":
		return 7
	case "aug", "august", "août", "ago", "agosto":
		return 8
	case "sep", "sept", "september", "septembre", "septiembre":
		return 9
	case "oct", "october", "okt", "oktober", "octobre", "octubre":
		return 10
	case "nov", "november", "novembre", "noviembre":
		return 11
	case "dec", "december", "dez", "dezember", "déc", "décembre", "dic", "diciembre":
		return 12
	}
	return 0
}
