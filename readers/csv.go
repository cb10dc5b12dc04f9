package readers

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"
)

// dialect is how one text file is written.
type dialect struct {
	delimiter byte // 0 when each line is one field
	bars      bool
	sepLine   bool // the first line is sep=;
	decimal   byte
}

// sampleLen is how much of a file the delimiter is decided on. Anything up to this
// size is looked at whole.
const sampleLen = 1 << 20

// readText reads a text file: what it is written in, then all records, then the
// table among them. The decimal sign is taken from the sample first; when the
// whole file says otherwise, it is read once more.
func readText(src source, opt Options) (*Table, error) {
	limits := opt.Limits.Default()
	survey, err := surveyText(src, opt, limits)
	if err != nil {
		return nil, err
	}
	d, notes, err := chooseDialect(src, survey, opt, limits)
	if err != nil {
		return nil, err
	}
	g, more, err := loadText(src, survey, d, opt, limits)
	if err != nil {
		return nil, err
	}
	if opt.Decimal == "" {
		decimal, err := settleDecimal(g, d.delimiter)
		if err != nil {
			return nil, err
		}
		if decimal != d.decimal {
			d.decimal = decimal
			if g, more, err = loadText(src, survey, d, opt, limits); err != nil {
				return nil, err
			}
		}
	}
	r := Reading{Encoding: survey.encoding.title(), Decimal: string(d.decimal), Given: opt.given()}
	if d.delimiter != 0 {
		r.Delimiter = string(d.delimiter)
	}
	r.Notes = append(append(append(r.Notes, survey.notes...), notes...), more...)
	t, err := findTable(g, opt, r)
	if err != nil {
		return nil, err
	}
	t.SHA256 = survey.sha256
	return t, nil
}

// given names the steps that the user fixed.
func (o *Options) given() []string {
	var out []string
	for _, f := range [...]struct{ name, value string }{
		{"encoding", o.Encoding},
		{"delimiter", o.Delimiter},
		{"decimal", o.Decimal},
		{"header-row", o.HeaderRow},
		{"sheet", o.Sheet},
		{"range", o.Range},
	} {
		if f.value != "" {
			out = append(out, f.name)
		}
	}
	return out
}

// settleDecimal gives the file's decimal sign by all numbers of the file.
func settleDecimal(g *grid, delimiter byte) (byte, error) {
	switch g.signs.decide(delimiter) {
	case signComma:
		return ',', nil
	case signTied:
		e := &g.signs
		return 0, refuse(Pos{File: g.file},
			"has as many numbers with a decimal comma as with a decimal point, %d of each: give --decimal . or --decimal ,",
			e.count[surePoint])
	case signOpen:
		return 0, openDecimal(g)
	}
	return '.', nil
}

// openDecimal names the column and the first cell whose sign could be either.
func openDecimal(g *grid) error {
	sign := maybeComma
	if g.signs.count[maybeComma] == 0 {
		sign = maybePoint
	}
	record := g.signs.first[sign]
	for i := range g.columns {
		text := g.text(i, record)
		if text == "" || signsOf(text) != sign {
			continue
		}
		if _, ok := readNumber(text, g.decimal); !ok {
			continue
		}
		point := strings.NewReplacer(",", ".").Replace(text)
		whole := strings.NewReplacer(",", "", ".", "").Replace(text)
		return refuse(g.pos(i, record), "%q could be %s or %s, and no number of the file tells: give --decimal . or --decimal ,",
			text, point, whole)
	}
	return refuse(Pos{File: g.file}, "the decimal sign can't be told: give --decimal . or --decimal ,")
}

// loadText reads all records into a grid under one dialect.
func loadText(src source, survey *survey, d dialect, opt Options, limits Limits) (*grid, []string, error) {
	g := &grid{
		file: src.name, decimal: d.decimal, declared: newDeclared(opt.Missing, d.decimal),
		lines: runs{step: 1}, maxColumns: limits.Columns, maxCells: limits.Cells, oneColumn: d.delimiter == 0,
	}
	var area *box
	if opt.Range != "" {
		b, ok := parseBox(opt.Range)
		if !ok {
			return nil, nil, refuse(Pos{File: src.name}, "the range %q is not of the form A1:F60", opt.Range)
		}
		area = &b
	}
	r, err := src.text(survey)
	if err != nil {
		return nil, nil, err
	}
	l := textLoader{grid: g, area: area}
	s := newScanner(r, d.delimiter, limits.Line, src.size)
	s.bars = d.bars
	for first := true; ; first = false {
		if err := s.scan(); err == io.EOF {
			break
		} else if err != nil {
			return nil, nil, scanError(src.name, s, err, limits)
		}
		if first && d.sepLine {
			continue
		}
		if err := l.take(s); err != nil {
			return nil, nil, err
		}
	}
	if err := src.unchanged(survey); err != nil {
		return nil, nil, err
	}
	return g, l.notes(s), nil
}

// scanError turns what stops the scanner into a sentence.
func scanError(file string, s *scanner, err error, limits Limits) error {
	switch {
	case errors.Is(err, errUnclosed):
		return refuse(Pos{File: file, Row: s.opens}, "opens a quote that never closes: close it, or double it if it belongs to the text")
	case errors.Is(err, errLongLine):
		return refuse(Pos{File: file}, "line %d is longer than %s: raise the limit with --limit line=%s, or check the line ends",
			s.next, size(limits.Line), limitValue(4*limits.Line))
	}
	var e *Error
	if errors.As(err, &e) {
		if e.Pos.Row == 0 && e.Pos.File == file {
			return e
		}
		return err
	}
	return &Error{Pos: Pos{File: file}, Msg: "can't be read to its end: " + err.Error(), Err: err}
}

// textLoader puts records into a grid and counts what is worth a note.
type textLoader struct {
	grid      *grid
	area      *box
	gap       bool
	padded    int
	invisible int
	hidden1   Pos
}

// take stores one record.
func (l *textLoader) take(s *scanner) error {
	g := l.grid
	if l.area != nil && (s.line < l.area.top || s.line > l.area.bottom) {
		return nil
	}
	if !g.oneColumn && s.blank() {
		l.gap = true
		return nil
	}
	record := g.records
	if len(s.field) > g.maxColumns {
		return refuse(Pos{File: g.file, Row: s.line}, "has more than %s columns: raise the limit with --limit columns=%d", count(g.maxColumns), len(s.field))
	}
	filled := false
	for i := range s.field {
		f := &s.field[i]
		if len(f.text) == 0 || l.area != nil && (i < l.area.left || i > l.area.right) {
			continue
		}
		wrote, err := l.cell(i, record, f, s.line)
		if err != nil {
			return err
		}
		filled = filled || wrote
	}
	if !filled && !g.oneColumn {
		l.gap = true
		return nil
	}
	if l.gap {
		g.gaps = append(g.gaps, int32(record))
		l.gap = false
	}
	if len(s.field[0].text) > 0 && s.field[0].text[0] == '#' && !s.field[0].quoted {
		g.comments = append(g.comments, int32(record))
	}
	g.lines.put(record, s.line)
	g.fields.put(record, len(s.field))
	g.records++
	return nil
}

// cell stores one field; false means that there was nothing in it.
func (l *textLoader) cell(column, record int, f *field, line int) (bool, error) {
	g := l.grid
	if column < len(g.columns) && g.columns[column] != nil && !f.double {
		if v, decimals, whole, ok := plainNumber(f.text, g.decimal); ok {
			l.number(g.columns[column], record, v, decimals, whole, f.text)
			return true, l.count(column, line)
		}
	}
	text, padded, invisible := f.core()
	if len(text) == 0 {
		return false, nil
	}
	form := uint8(0)
	if padded {
		form = formPadded
		l.padded++
		if invisible {
			if l.invisible == 0 {
				l.hidden1 = Pos{File: g.file, Row: line, Column: column + 1}
			}
			l.invisible++
		}
	}
	s := g.column(column)
	if v, decimals, whole, ok := plainNumber(text, g.decimal); ok {
		l.number(s, record, v, decimals|int(form), whole, text)
	} else if v, ok := longNumber(text, g.decimal); ok {
		l.number(s, record, v, decimalsOpen|int(form), 16, text)
	} else {
		g.word(s, record, text, form, 0)
	}
	return true, l.count(column, line)
}

// number stores a plain number; its text follows from value and decimals.
func (l *textLoader) number(s *store, record int, v float64, form, whole int, text []byte) {
	g := l.grid
	kind := uint8(Number)
	if len(g.declared.numbers) > 0 && g.declared.number(v) {
		kind = uint8(declaredCode)
	}
	if decimals := form & decimalsMask; decimals > 0 && bytes.IndexByte(text, g.decimal) >= 0 {
		g.signs.add(plainSigns(g.decimal, whole, decimals, text[0] == '0' || text[0] == '-' && text[1] == '0'), record)
	}
	s.putNumber(record, kind, uint8(form), v, 0)
}

// count holds the cells against the limits.
func (l *textLoader) count(column, line int) error {
	g := l.grid
	g.cells++
	if g.memory > memoryCap {
		return refuse(Pos{File: g.file, Row: line}, "has its cells strewn so widely that they are no table: give --range")
	}
	if g.cells > g.maxCells {
		return refuse(Pos{File: g.file, Row: line}, "has more than %s filled cells: raise the limit with --limit cells=%d", count(g.maxCells), 4*g.maxCells)
	}
	return nil
}

// notes says what loading a file found.
func (l *textLoader) notes(s *scanner) []string {
	var out []string
	if l.padded > 0 {
		out = append(out, fmt.Sprintf("spaces around the text of %s were left out", cellCount(l.padded)))
	}
	if l.invisible > 0 {
		out = append(out, fmt.Sprintf("%s an invisible mark (U+FEFF or U+200B), the first in line %d; it was left out", cellsHold(l.invisible), l.hidden1.Row))
	}
	if r := l.grid.lost; r > 0 {
		out = append(out, fmt.Sprintf("line %d holds U+FFFD, which stands for a character that was lost before", l.grid.lines.at(r-1)))
	}
	if s.loose > 0 {
		out = append(out, fmt.Sprintf("line %d has a quote inside a quoted field that is not doubled; it was taken as a letter", s.loose))
	}
	if s.long > 0 {
		out = append(out, fmt.Sprintf("the quoted field that opens in line %d is more than %d lines long", s.long, longQuoteLines))
	}
	return out
}

func cellCount(n int) string {
	if n == 1 {
		return "1 cell"
	}
	return count(n) + " cells"
}

func cellsHold(n int) string {
	if n == 1 {
		return "1 cell holds"
	}
	return count(n) + " cells hold"
}

// limitValue writes bytes in the form that --limit reads.
func limitValue(n int64) string {
	return strings.ReplaceAll(strings.TrimSuffix(size(n), " bytes"), " ", "")
}

// delimiterByte reads --delimiter: one of the characters, or its name.
func delimiterByte(s string) (byte, error) {
	switch s {
	case "tab", "TAB", `\t`:
		return '\t', nil
	case "comma":
		return ',', nil
	case "semicolon":
		return ';', nil
	case "bar":
		return '|', nil
	case "space":
		return ' ', nil
	}
	if len(s) == 1 && s[0] < utf8.RuneSelf && s[0] != '"' && s[0] != '\n' && s[0] != '\r' && s[0] != 0 {
		return s[0], nil
	}
	return 0, fmt.Errorf("the delimiter %q is not one character: give , ; | or tab", s)
}
