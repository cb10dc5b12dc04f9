package readers

import (
	"bytes"
	"io"
	"unicode/utf8"
)

// Span is where a field stands in a text file, as an editor counts: lines and
// characters from 1, the end being the character after the last. The quotes
// around a field are not part of it.
type Span struct {
	Line, Column       int
	EndLine, EndColumn int
}

// Spans finds the fields of a text file at the given positions by reading the
// file once more, as t was read. A position of a field that is not there has no
// span; a workbook has none at all.
func Spans(r io.Reader, t *Table, places []Pos) (map[Pos]Span, error) {
	found := map[Pos]Span{}
	if t.Format != TextFile || len(places) == 0 {
		return found, nil
	}
	wanted := map[int][]Pos{}
	for _, p := range places {
		wanted[p.Row] = append(wanted[p.Row], p)
	}
	limits := Limits{}.Default()
	src, err := hold(t.File, r, limits)
	if err != nil {
		return nil, err
	}
	survey, err := surveyText(src, Options{Encoding: t.Reading.Encoding}, limits)
	if err != nil {
		return nil, err
	}
	text, err := src.text(survey)
	if err != nil {
		return nil, err
	}
	delimiter := byte(0)
	if t.Reading.Delimiter != "" {
		delimiter = t.Reading.Delimiter[0]
	}
	s := newScanner(text, delimiter, limits.Line, src.size)
	for len(wanted) > 0 {
		if err := s.scan(); err == io.EOF {
			break
		} else if err != nil {
			return nil, scanError(t.File, s, err, limits)
		}
		for _, p := range wanted[s.line] {
			if p.Column >= 1 && p.Column <= len(s.field) {
				found[p] = s.span(s.field[p.Column-1])
			}
		}
		delete(wanted, s.line)
	}
	return found, nil
}

// span counts lines and characters from the start of the record to a field.
func (s *scanner) span(f field) Span {
	// A field is a part of buf that keeps its capacity, which therefore tells
	// where it starts.
	start := cap(s.buf) - cap(f.text)
	line, column := step(s.line, 1, s.buf[s.from:start])
	endLine, endColumn := step(line, column, f.text)
	return Span{Line: line, Column: column, EndLine: endLine, EndColumn: endColumn}
}

// step moves a line and a column over text.
func step(line, column int, text []byte) (int, int) {
	for {
		at, length, _ := lineEnd(text, true)
		column += utf8.RuneCount(text[:at])
		if length == 0 || at+length > len(text) {
			return line, column
		}
		text = text[at+length:]
		line, column = line+1, 1
	}
}

// LogicalName writes a cell or a column of a sheet as formulas do, such as
// Sheet1!C17 or 'north shore'!C.
func LogicalName(sheet, address string) string { return quoteSheet(sheet) + "!" + address }

// LetterIndex reads a column's letter as Letter writes it, and ignores digits
// behind it; -1 when there is none.
func LetterIndex(address string) int {
	letters := bytes.TrimRight([]byte(address), "0123456789")
	if i, ok := columnIndex(string(letters)); ok {
		return i
	}
	return -1
}
