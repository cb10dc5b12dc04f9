package readers

import (
	"encoding/xml"
	"fmt"
	"math"
	"strconv"
)

// sheetPass reads the cells of one sheet into a grid.
type sheetPass struct {
	*pass
	book   *book
	g      *grid
	area   *box
	row    int // the row that is open, or the last one
	column int // of the last cell of the row
	record int // of the open row in the grid, -1 before it has a cell
	last   int // last row that has a record
	inRow  bool
	blank  int // formulas whose stored result is an empty text

	zeroHeight bool
	cell       sheetCell
	styleIDs   map[int]uint16 // style of the book -> style of the grid
}

// sheetCell is the cell that is open.
type sheetCell struct {
	column     int
	kind       string
	style      int
	value      []byte
	hasValue   bool
	hasFormula bool
	text       collector
}

// readSheet reads a sheet to its end tag. area, if any, bounds what is kept.
func (b *book) readSheet(s bookSheet, opt Options, limits Limits, area *box) (*grid, error) {
	if err := b.readTexts(); err != nil {
		return nil, err
	}
	g := &grid{
		file: b.file, sheet: s.name, decimal: '.', lines: runs{step: 1},
		maxColumns: limits.Columns, maxCells: limits.Cells, styles: []Style{{}},
	}
	if opt.Decimal == "," || opt.Decimal == "comma" {
		g.decimal = ','
	}
	g.declared = newDeclared(opt.Missing, g.decimal)
	g.facts.hiddenColumns = map[int]bool{}
	g.facts.date1904 = b.date1904
	p := &sheetPass{book: b, g: g, area: area, record: -1, styleIDs: map[int]uint16{0: 0}}
	part, err := b.openPart(s.part, p.progress)
	if err != nil {
		return nil, err
	}
	defer part.close()
	p.pass, part.sheet = part, s.name
	for {
		t, err := p.next()
		if err != nil {
			return nil, err
		}
		if t == nil {
			break
		}
		switch e := t.(type) {
		case xml.StartElement:
			err = p.start(e)
		case xml.CharData:
			p.chars(e)
		case xml.EndElement:
			err = p.end(e.Name.Local)
		}
		if err != nil {
			return nil, err
		}
	}
	if p.g.facts.filter == "" && len(g.facts.hiddenRows) > 0 {
		g.facts.filter = s.filter
	}
	if err := b.tables(s, g); err != nil {
		return nil, err
	}
	if p.blank > 0 {
		g.notes = append(g.notes, fmt.Sprintf("%s formulas whose stored result is an empty text; they count as blank", cellsAre(p.blank)))
	}
	return g, nil
}

// progress says how far the pass has come.
func (p *sheetPass) progress() string {
	if p.row == 0 {
		return ""
	}
	if p.inRow {
		return fmt.Sprintf(" in row %d", p.row)
	}
	return fmt.Sprintf(" after row %d", p.row)
}

func (p *sheetPass) start(e xml.StartElement) error {
	switch name := e.Name.Local; p.parent() {
	case "":
		if name != "worksheet" {
			return p.broken(fmt.Sprintf("starts with %q, so it is no sheet of cells", name))
		}
	case "worksheet":
		switch name {
		case "sheetFormatPr":
			p.zeroHeight = truth(attr(e, "zeroHeight"))
		case "autoFilter":
			p.g.facts.filter = attr(e, "ref")
		}
	case "cols":
		if name == "col" {
			p.hideColumns(e)
		}
	case "sheetData":
		if name == "row" {
			return p.startRow(e)
		}
	case "row":
		if name == "c" {
			return p.startCell(e)
		}
	case "c":
		switch name {
		case "v":
			p.cell.hasValue = true
		case "f":
			p.cell.hasFormula = true
		}
	case "is", "r", "rPh":
		p.cell.text.start(name)
	case "mergeCells":
		if b, ok := parseBox(attr(e, "ref")); ok && name == "mergeCell" {
			p.g.facts.merged = append(p.g.facts.merged, b)
		}
	}
	if p.in() == "rPh" {
		p.cell.text.start("rPh")
	}
	return nil
}

func (p *sheetPass) chars(b []byte) {
	switch p.in() {
	case "v":
		if p.parent() == "c" {
			p.cell.value = append(p.cell.value, b...)
		}
	case "t":
		p.cell.text.text(b)
	}
}

func (p *sheetPass) end(name string) error {
	switch name {
	case "c":
		if p.in() == "row" {
			return p.endCell()
		}
	case "row":
		if p.in() == "sheetData" {
			p.inRow = false
		}
	case "t", "rPh", "r":
		p.cell.text.end(name)
	}
	return nil
}

// hideColumns notes the columns that are hidden or have no width.
func (p *sheetPass) hideColumns(e xml.StartElement) {
	width := attr(e, "width")
	if !truth(attr(e, "hidden")) && width != "0" {
		return
	}
	from, err1 := strconv.Atoi(attr(e, "min"))
	to, err2 := strconv.Atoi(attr(e, "max"))
	if err1 != nil || err2 != nil {
		return
	}
	for c := max(from, 1); c <= min(to, lastSheetColumn); c++ {
		p.g.facts.hiddenColumns[c-1] = true
	}
}

// startRow checks that rows come in order and notes a hidden one.
func (p *sheetPass) startRow(e xml.StartElement) error {
	row := p.row + 1
	if r := attr(e, "r"); r != "" {
		n, err := strconv.Atoi(r)
		if err != nil || n < 1 || n > lastSheetRow {
			return p.broken(fmt.Sprintf("has a row numbered %q", r))
		}
		if n <= p.row {
			return p.broken(fmt.Sprintf("has row %d out of order", n))
		}
		row = n
	}
	if row > lastSheetRow {
		return p.broken("has more rows than a sheet can have")
	}
	p.row, p.column, p.record, p.inRow = row, -1, -1, true
	hidden := attr(e, "hidden")
	if truth(hidden) || p.zeroHeight && hidden == "" && attr(e, "ht") == "" || attr(e, "ht") == "0" {
		p.g.facts.hiddenRows = append(p.g.facts.hiddenRows, int32(row))
	}
	return nil
}

// startCell checks a cell's address against its row and the cell before it.
func (p *sheetPass) startCell(e xml.StartElement) error {
	c := &p.cell
	c.column, c.kind, c.style = p.column+1, "", 0
	c.value, c.hasValue, c.hasFormula = c.value[:0], false, false
	c.text.reset()
	for i := range e.Attr {
		v := e.Attr[i].Value
		switch e.Attr[i].Name.Local {
		case "r":
			column, row, ok := splitAddress([]byte(v))
			if !ok {
				return p.broken(fmt.Sprintf("has a cell with the address %q", v))
			}
			if row != p.row {
				return p.broken(fmt.Sprintf("has the cell %s out of its row", v))
			}
			if column <= p.column {
				return p.broken(fmt.Sprintf("has the cell %s out of order", v))
			}
			c.column = column
		case "t":
			c.kind = v
		case "s":
			n, err := strconv.Atoi(v)
			if err != nil || n < 0 {
				return p.broken(fmt.Sprintf("has a cell with the style %q", v))
			}
			c.style = n
		}
	}
	if c.column >= lastSheetColumn {
		return p.broken("has more cells in a row than a sheet can have")
	}
	p.column = c.column
	return nil
}

// address names the open cell.
func (p *sheetPass) address() string { return Address(p.cell.column, p.row) }

// endCell stores the open cell.
func (p *sheetPass) endCell() error {
	c := &p.cell
	if p.area != nil && (p.row < p.area.top || p.row > p.area.bottom || c.column < p.area.left || c.column > p.area.right) {
		return nil
	}
	text := c.value
	switch c.kind {
	case "s":
		if !c.hasValue {
			break
		}
		i, ok := index(c.value)
		if ok {
			if p.book.texts == nil {
				return p.broken(fmt.Sprintf("has in %s a reference to a list of texts that is not there", p.address()))
			}
			text, ok = p.book.texts.text(i)
		}
		if !ok {
			return p.broken(fmt.Sprintf("has in %s a reference to text %q, which the list of texts does not have", p.address(), c.value))
		}
	case "inlineStr":
		text = c.text.result()
	case "str":
		text = unescape(c.value)
	case "", "n", "b", "e", "d":
	default:
		return p.broken(fmt.Sprintf("has in %s a value of the unknown type %q", p.address(), c.kind))
	}
	core, padded, _ := trimmed(text)
	marks := uint8(0)
	if c.hasFormula {
		marks = markResult
	}
	if len(core) == 0 {
		return p.endBlank()
	}
	form := uint8(0)
	if padded {
		form = formPadded
	}
	st, err := p.style(c.style)
	if err != nil {
		return err
	}
	s, record, err := p.place()
	if err != nil {
		return err
	}
	switch c.kind {
	case "", "n":
		err = p.putNumber(s, record, core, st, marks)
	case "b":
		v := 0.0
		if truth(string(core)) {
			v = 1
		}
		s.putNumber(record, uint8(Bool)|marks, decimalsOpen, v, 0)
	case "e":
		p.g.putText(s, record, core, 0, Fault, marks)
	case "d":
		if v, ok := readDate(string(core)); ok && !math.IsNaN(v) {
			s.putNumber(record, uint8(Date)|marks, decimalsOpen, v, 0)
		} else {
			p.g.word(s, record, core, form, marks)
		}
	default:
		p.g.word(s, record, core, form, marks|markText)
	}
	if err != nil {
		return err
	}
	s.putStyle(record, p.styleIDs[c.style])
	return nil
}

// endBlank stores a formula without a value; any other cell without one is blank.
func (p *sheetPass) endBlank() error {
	c := &p.cell
	if !c.hasFormula {
		return nil
	}
	if c.kind == "str" && c.hasValue {
		p.blank++
		return nil
	}
	s, record, err := p.place()
	if err != nil {
		return err
	}
	s.putNumber(record, uint8(Uncached)|markResult, decimalsOpen, math.NaN(), 0)
	return nil
}

// putNumber stores a number, or a date when its format says so.
func (p *sheetPass) putNumber(s *store, record int, core []byte, st cellStyle, marks uint8) error {
	v, _, _, ok := plainNumber(core, '.')
	if !ok {
		w, isNumber := readNumber(string(core), '.')
		switch {
		case isNumber && w.look == OutOfRange:
			p.g.putText(s, record, core, 0, Text, marks)
			return nil
		case !isNumber && lookOf(string(core), '.') == Infinite, isMissingCode(string(core)):
			p.g.word(s, record, core, 0, marks)
			return nil
		case !isNumber || w.thousands:
			return p.broken(fmt.Sprintf("has in %s a number that reads %q", p.address(), core))
		}
		v = w.value
	}
	kind := uint8(Number)
	switch {
	case st.date:
		kind = uint8(Date)
		if p.g.facts.date1904 {
			v += days1904
		}
	case p.g.declared.number(v):
		kind = uint8(declaredCode)
	}
	s.putNumber(record, kind|marks, decimalsOpen, v, 0)
	return nil
}

// place gives the store and record of the open cell; a row gets its record with
// its first cell.
func (p *sheetPass) place() (*store, int, error) {
	g := p.g
	at := Pos{File: g.file, Sheet: g.sheet, Row: p.row, Column: p.cell.column + 1}
	if p.cell.column >= g.maxColumns {
		return nil, 0, refuse(at, "has more than %s columns: raise the limit with --limit columns=%d", count(g.maxColumns), lastSheetColumn)
	}
	if g.cells++; g.cells > g.maxCells {
		return nil, 0, refuse(at, "has more than %s filled cells: raise the limit with --limit cells=%d", count(g.maxCells), 4*g.maxCells)
	}
	if g.memory > memoryCap {
		return nil, 0, refuse(at, "has its cells strewn so widely that they are no table: give --range")
	}
	if p.record < 0 {
		p.record = g.records
		g.records++
		g.lines.put(p.record, p.row)
		if p.record > 0 && p.row > p.last+1 {
			g.gaps = append(g.gaps, int32(p.record))
		}
		p.last = p.row
	}
	return g.column(p.cell.column), p.record, nil
}

// style gives what a style says, and keeps it for the grid when a cell shows it.
func (p *sheetPass) style(number int) (cellStyle, error) {
	st, err := p.book.styles.of(p.book.archive, number)
	if err != nil {
		return st, err
	}
	if _, ok := p.styleIDs[number]; !ok {
		id := 0
		if st.Style != (Style{}) && len(p.g.styles) < math.MaxUint16 {
			id = len(p.g.styles)
			p.g.styles = append(p.g.styles, st.Style)
		}
		p.styleIDs[number] = uint16(id)
	}
	return st, nil
}

// index reads the number of a shared text.
func index(b []byte) (int, bool) {
	if len(b) == 0 || len(b) > 9 {
		return 0, false
	}
	n := 0
	for _, c := range b {
		if c < '0' || c > '9' {
			return 0, false
		}
		n = n*10 + int(c-'0')
	}
	return n, true
}
