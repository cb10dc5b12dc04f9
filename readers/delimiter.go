package readers

import (
	"bytes"
	"fmt"
	"io"
	"strings"
)

// chooseDialect decides how a file is written from its first part.
func chooseDialect(src source, sv *survey, opt Options, limits Limits) (dialect, []string, error) {
	d := dialect{decimal: '.'}
	r, err := src.text(sv)
	if err != nil {
		return d, nil, err
	}
	sample, err := io.ReadAll(io.LimitReader(r, sampleLen))
	if err != nil {
		return d, nil, scanError(src.name, &scanner{}, err, limits)
	}
	whole := len(sample) < sampleLen
	switch opt.Decimal {
	case "":
	case ".", "point":
		d.decimal = '.'
	case ",", "comma":
		d.decimal = ','
	default:
		return d, nil, refuse(Pos{File: src.name}, "the decimal sign %q is neither . nor ,", opt.Decimal)
	}
	var notes []string
	if sep, n, ok := sepLine(sample); ok {
		d.sepLine = true
		sample = sample[n:]
		if opt.Delimiter == "" {
			d.delimiter = sep
			notes = append(notes, fmt.Sprintf("the first line, sep=%s, sets the delimiter", delimiterName(sep)))
		}
	}
	if opt.Delimiter != "" {
		if d.delimiter, err = delimiterByte(opt.Delimiter); err != nil {
			return d, nil, refuse(Pos{File: src.name}, "%s", err)
		}
	} else if d.delimiter == 0 {
		var refusal string
		if d.delimiter, refusal = sniffDelimiter(sample, whole, limits); refusal != "" {
			return d, nil, refuse(Pos{File: src.name}, "%s", refusal)
		}
	}
	t := tally(sample, d.delimiter, whole, limits)
	d.bars = d.delimiter == '|' && t.records > 0 && t.barred == t.records
	if opt.Decimal == "" {
		switch t.signs.decide(d.delimiter) {
		case signComma:
			d.decimal = ','
		}
	}
	return d, notes, nil
}

// sepLine recognises the line by which some programs tell the delimiter.
func sepLine(b []byte) (sep byte, length int, ok bool) {
	at, end, ok := lineEnd(b, true)
	if !ok {
		return 0, 0, false
	}
	line := strings.Trim(string(b[:at]), "\" ")
	if len(line) != 5 || !equalFold(line[:4], "sep=") {
		return 0, 0, false
	}
	return line[4], at + end, true
}

func delimiterName(d byte) string {
	switch d {
	case '\t':
		return "TAB"
	case ' ':
		return "space"
	case 0:
		return "none"
	}
	return string(d)
}

// fieldTally is what a delimiter makes of a sample.
type fieldTally struct {
	records int
	width   int // the number of fields that most records have, of those with two or more
	alike   int // how many have it
	single  int // records of one field
	numbers float64
	barred  int
	signs   evidence
}

// tally cuts the sample at a delimiter. A record at the end of a sample that is
// not the whole file may be cut, so it does not count; after a quote that never
// closes the rest counts for nothing.
func tally(sample []byte, delimiter byte, whole bool, limits Limits) fieldTally {
	var t fieldTally
	widths := map[int]int{}
	numbers := map[int][2]int{} // column -> numbers, filled cells
	s := newScanner(bytes.NewReader(sample), delimiter, limits.Line, int64(len(sample)))
	for s.scan() == nil {
		if !whole && s.at == s.end && s.eof {
			break
		}
		if s.blank() || s.field[0].text != nil && bytes.HasPrefix(s.field[0].text, []byte{'#'}) {
			continue
		}
		t.records++
		n := len(s.field)
		if n == 1 {
			t.single++
		} else {
			widths[n]++
		}
		first, _, _ := trimmed(s.field[0].text)
		last, _, _ := trimmed(s.field[n-1].text)
		if n > 2 && len(first) == 0 && len(last) == 0 {
			t.barred++
		}
		for i := range s.field {
			text, _, _ := s.field[i].core()
			if len(text) == 0 {
				continue
			}
			c := numbers[i]
			c[1]++
			if use, ok := numberUnderEither(string(text)); ok {
				c[0]++
				t.signs.add(use, t.records)
			}
			numbers[i] = c
		}
	}
	for w, n := range widths {
		if n > t.alike || n == t.alike && w > t.width {
			t.width, t.alike = w, n
		}
	}
	for i := range t.width {
		if c := numbers[i]; 2*c[0] > c[1] {
			t.numbers++
		}
	}
	if t.width > 0 {
		t.numbers /= float64(t.width)
	}
	return t
}

// sniffDelimiter chooses among the four: the one under which the most records have
// the same number of fields, then the one whose columns read as numbers. 0 means
// that no line has two fields. refusal is set when it can't be told.
func sniffDelimiter(sample []byte, whole bool, limits Limits) (delimiter byte, refusal string) {
	var best fieldTally
	var tied []string
	for _, d := range [...]byte{',', ';', '\t', '|'} {
		if bytes.IndexByte(sample, d) < 0 {
			continue
		}
		t := tally(sample, d, whole, limits)
		if t.alike == 0 {
			continue
		}
		switch {
		case t.alike > best.alike, t.alike == best.alike && t.numbers > best.numbers:
			delimiter, best, tied = d, t, []string{delimiterName(d)}
		case t.alike == best.alike && t.numbers == best.numbers:
			tied = append(tied, delimiterName(d))
		}
	}
	switch {
	case delimiter == 0:
		return 0, ""
	case best.alike == 1 && best.records > 2:
		// One line with a comma among lines without: a remark, not a table.
		return 0, ""
	case len(tied) > 1:
		return 0, fmt.Sprintf("the fields could be delimited by %s: give --delimiter", list(tied, "or"))
	}
	return delimiter, ""
}
