package readers

import (
	"bytes"
	"slices"
	"sort"
)

// grid is everything a file or sheet holds, before anybody has said where the
// table is: cells by column and record. A record is a line of a text file or a
// row of a sheet that has at least one cell; rows without any are not kept, only
// the gaps they leave.
type grid struct {
	file, sheet string
	decimal     byte
	declared    declared
	oneColumn   bool // a text file without delimiter: a blank line is a blank cell
	columns     []*store
	records     int
	lines       runs       // record -> line or row of the file
	fields      runs       // record -> number of fields; text files only
	lost        int        // 1 + the first record with U+FFFD in it
	gaps        []int32    // records that follow a blank row
	comments    []int32    // records of lines that start with #
	signs       evidence   // of the decimal sign
	styles      []Style    // by style number; workbooks only
	facts       sheetFacts // what else a workbook says; zero for text
	maxColumns  int
	maxCells    int
	cells       int
	notes       []string
	memory      int // bytes held by pieces of columns
}

// memoryCap bounds the columns' memory: cells strewn over a sheet cost a piece
// each, so the count of cells alone bounds nothing.
const memoryCap = 400 << 20

// column gives the store of a column, made if need be.
func (g *grid) column(i int) *store {
	for i >= len(g.columns) {
		g.columns = append(g.columns, nil)
	}
	if g.columns[i] == nil {
		g.columns[i] = &store{memory: &g.memory}
	}
	return g.columns[i]
}

// seek gives the store of a column, nil when nothing is in it.
func (g *grid) seek(i int) *store {
	if i < 0 || i >= len(g.columns) {
		return nil
	}
	return g.columns[i]
}

func (g *grid) kind(column, record int) CellKind {
	if s := g.seek(column); s != nil {
		return CellKind(s.kind(record) & kindMask)
	}
	return Blank
}

func (g *grid) pos(column, record int) Pos {
	return Pos{File: g.file, Sheet: g.sheet, Row: g.lines.at(record), Column: column + 1}
}

func (g *grid) isGap(record int) bool {
	_, ok := slices.BinarySearch(g.gaps, int32(record))
	return ok
}

func (g *grid) isComment(record int) bool {
	_, ok := slices.BinarySearch(g.comments, int32(record))
	return ok
}

// word takes a text into a column: what it is is decided once for each distinct
// text. form carries formPadded, marks what the cell is beside its kind; markText
// stays with numbers alone.
func (g *grid) word(s *store, record int, text []byte, form, marks uint8) {
	code, slot, known := s.words.find(text)
	if !known {
		if g.lost == 0 && bytes.Contains(text, []byte("\ufffd")) {
			g.lost = record + 1
		}
		kind, value := g.classify(string(text))
		code = s.words.add(text, slot, kind)
		if value != (wordValue{}) {
			s.words.setValue(code, value)
		}
	}
	kind, v := s.words.kind(code), s.words.value(code)
	g.signs.add(v.signs, record)
	if kind == Number || kind == declaredCode {
		s.putNumber(record, uint8(kind)|markWord|marks, form|v.form, v.value, code)
	} else {
		s.putWord(record, uint8(kind)|marks&^markText, form, code)
	}
}

// putText takes a text into a column as a kind that is known already.
func (g *grid) putText(s *store, record int, text []byte, form uint8, kind CellKind, marks uint8) {
	code, slot, known := s.words.find(text)
	if !known {
		code = s.words.add(text, slot, kind)
	}
	s.putWord(record, uint8(kind)|marks, form, code)
}

// recordOf gives the record of a line or sheet row.
func (g *grid) recordOf(row int) (record int, ok bool) {
	return sort.Find(g.records, func(i int) int { return row - g.lines.at(i) })
}

// classify decides what a text is, apart from the column it stands in.
func (g *grid) classify(text string) (CellKind, wordValue) {
	var v wordValue
	w, ok := readNumber(text, g.decimal)
	if ok && w.look == Wording {
		v.value = w.value
		v.form = decimalsOpen
		if w.decimals >= 0 && w.decimals < decimalsOpen {
			v.form = uint8(w.decimals)
		}
		if w.thousands {
			v.form |= formThousands
		}
		v.signs = signsOf(text)
		if g.declared.number(w.value) || g.declared.word(text) {
			return declaredCode, v
		}
		return Number, v
	}
	switch {
	case g.declared.word(text):
		v.value, v.form = nan(), decimalsOpen
		return declaredCode, v
	case isMissingCode(text):
		return Code, v
	case isFault(text):
		return Fault, v
	case equalFold(text, "true"), equalFold(text, "false"):
		return Bool, v
	}
	if _, ok := readDate(text); ok {
		return Date, v
	}
	v.signs, _ = numberUnderEither(text)
	switch lookOf(text, g.decimal) {
	case Measure:
		return measureText, v
	case OtherSign:
		return otherSignText, v
	}
	return Text, v
}

// text gives what a cell holds, as Cell.Text does.
func (g *grid) text(column, record int) string {
	s := g.seek(column)
	if s == nil {
		return ""
	}
	kind := s.kind(record)
	switch {
	case kind&kindMask == uint8(Blank):
		return ""
	case kind&markWord != 0:
		return s.words.text(s.word(record))
	case CellKind(kind&kindMask) == Uncached:
		return ""
	}
	return numberText(s.value(record), s.form(record), g.decimal)
}
