package report

import (
	"archive/zip"
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/xml"
	"fmt"
	"io"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"footing/audit"
	"footing/readers"
	"footing/rules/wording"
)

// What a marked workbook takes at most; whatever is left out is counted on its
// first sheet.
const (
	mostNotes   = 1000
	mostFills   = 20000
	mostHatched = 20000
	mostLinks   = 200 // of one finding
	mostInCell  = 32000
	mostInNote  = 1000
)

// findingsSheet is the name of the first sheet of a marked workbook.
const findingsSheet = "Findings"

// maker is the program that a workbook names as its own; another program that
// saves it puts its own name there, so that what was edited by hand is not taken
// for footing's.
const maker = "footing"

// MarkedHere reports whether a workbook is a marked one as footing wrote it.
func MarkedHere(archive *zip.Reader) bool {
	part, err := archive.Open("docProps/app.xml")
	if err != nil {
		return false
	}
	defer part.Close()
	var app struct {
		Application string `xml:"Application"`
	}
	return xml.NewDecoder(io.LimitReader(part, 1<<20)).Decode(&app) == nil && app.Application == maker
}

// Marked writes a workbook in which the cells that findings name are filled and
// have a note, rows set aside are hatched, and a first sheet lists the findings
// with links to the cells. For a workbook it is a copy of input, the bytes that
// were audited; for a text file it is made from the table, each cell at the
// address that the findings give.
func Marked(w io.Writer, r *audit.Result, t *readers.Table, input []byte) error {
	sum := sha256.Sum256(input)
	if hex.EncodeToString(sum[:]) != r.Input.SHA256 {
		return fmt.Errorf("%s changed while it was audited: run again", r.Input.File)
	}
	m := &marked{r: r, table: t, styles: map[styleKey]int{}}
	defer func() {
		if m.file != nil {
			m.file.Close()
		}
	}()
	steps := []func() error{m.build, m.hatch, m.mark, m.list, m.finish}
	if t.Format == readers.Workbook {
		steps[0] = func() error { return m.copy(input) }
	}
	for _, step := range steps {
		if err := step(); err != nil {
			return fmt.Errorf("marked workbook: %w", err)
		}
	}
	return m.file.Write(w)
}

type marked struct {
	r      *audit.Result
	table  *readers.Table
	file   *excelize.File
	sheet  string // with the table
	first  string // with the findings
	styles map[styleKey]int
	remark []string // what was left out

	row int // last row written to the first sheet
}

// styleKey is a cell's own style with a fill of ours over it.
type styleKey struct {
	own  int
	fill string
}

// copy opens the input's bytes as a new workbook.
func (m *marked) copy(input []byte) error {
	f, err := excelize.OpenReader(bytes.NewReader(input))
	if err != nil {
		return err
	}
	m.file, m.sheet = f, m.table.Sheet
	f.Path = "marked.xlsx" // a workbook with macros becomes one without
	return nil
}

// build makes a workbook of a text file's table.
func (m *marked) build() error {
	const lastRow = 1 << 20
	t := m.table
	if n := t.Len(); n > 0 && t.Row(n-1) > lastRow {
		return fmt.Errorf("%s has more than %d lines, which no workbook holds", t.File, lastRow)
	}
	m.file, m.sheet = excelize.NewFile(), sheetName(t.File)
	if err := m.file.SetSheetName("Sheet1", m.sheet); err != nil {
		return err
	}
	font, err := m.file.GetDefaultFont()
	if err != nil {
		return err
	}
	bold, err := m.file.NewStyle(&excelize.Style{Font: &excelize.Font{Family: font, Size: 11, Bold: true}})
	if err != nil {
		return err
	}
	for _, col := range t.Columns {
		letter := col.Letter()
		if err := m.file.SetColWidth(m.sheet, letter, letter, float64(min(40, max(10, utf8.RuneCountInString(col.Header)+2)))); err != nil {
			return err
		}
		if t.HeaderRow > 0 {
			cell := readers.Address(col.Index, t.HeaderRow)
			if err := m.text(m.sheet, cell, col.Header); err != nil {
				return err
			}
			if err := m.file.SetCellStyle(m.sheet, cell, cell, bold); err != nil {
				return err
			}
		}
		for i := range t.Len() {
			if err := m.cell(t.Address(col, i), col.Cell(i)); err != nil {
				return err
			}
		}
	}
	for _, stray := range append(append([]readers.Stray{}, t.Reading.Titles...), t.Reading.Stray...) {
		if stray.Beside {
			continue // its cells speak of a header and have no address of their own
		}
		for k, text := range stray.Cells {
			if err := m.text(m.sheet, readers.Address(k, stray.Row), text); err != nil {
				return err
			}
		}
	}
	for _, uneven := range t.Reading.Uneven {
		if uneven.Fields > uneven.Want {
			m.remark = append(m.remark, fmt.Sprintf("Row %d has more fields than the header; those beyond it are not copied here.", uneven.Row))
			break
		}
	}
	if t.HeaderRow == 0 {
		return nil
	}
	below := readers.Address(0, t.HeaderRow+1)
	return m.file.SetPanes(m.sheet, &excelize.Panes{Freeze: true, YSplit: t.HeaderRow, TopLeftCell: below, ActivePane: "bottomLeft"})
}

// cell writes a number as a number and all else as text. A number that is a
// name, such as 007, or has a unit, stays as it was written.
func (m *marked) cell(at string, c readers.Cell) error {
	isNumber := (c.Kind == readers.Number || c.Kind == readers.Code) && c.Number == c.Number
	isName := len(c.Text) > 1 && c.Text[0] == '0' && c.Text[1] >= '0' && c.Text[1] <= '9'
	if isNumber && !isName && c.Unit == "" {
		return m.file.SetCellFloat(m.sheet, at, c.Number, -1, 64)
	}
	return m.text(m.sheet, at, c.Text)
}

// text writes text that can never become a formula: it is stored as text, and a
// sign that would begin one when the cell is typed again gets a quote before it.
func (m *marked) text(sheet, cell, text string) error {
	if text == "" {
		return nil
	}
	if strings.ContainsRune("=+-@\t\r", rune(text[0])) && !isPlainNumber(text) {
		text = "'" + text
	}
	return m.file.SetCellStr(sheet, cell, cut(wording.Printable(text), mostInCell))
}

// isPlainNumber tells numbers, with a point or a comma, from other text that
// begins with a sign.
func isPlainNumber(text string) bool {
	_, err := strconv.ParseFloat(strings.Replace(text, ",", ".", 1), 64)
	return err == nil && strings.Trim(text, "+-0123456789.,eE") == ""
}

// sheetName makes a name for a sheet of a file's: at most 31 characters, without
// those that a name may not hold.
func sheetName(file string) string {
	name := file[strings.LastIndexAny(file, `/\`)+1:]
	if dot := strings.LastIndexByte(name, '.'); dot > 0 {
		name = name[:dot]
	}
	name = strings.Map(func(r rune) rune {
		if strings.ContainsRune(`[]:*?/\'`, r) {
			return '_'
		}
		return r
	}, wording.Printable(name))
	if runes := []rune(name); len(runes) > 31 {
		name = string(runes[:31])
	}
	if name == "" || name == "-" || strings.EqualFold(name, findingsSheet) || strings.EqualFold(name, "history") {
		return "Table"
	}
	return name
}

// The fills. The state's word stands in the note and on the first sheet, so that
// nothing hangs on colour.
var fills = map[string]excelize.Fill{
	"stop":    {Type: "pattern", Pattern: 1, Color: []string{"F4A6A0"}},
	"warn":    {Type: "pattern", Pattern: 1, Color: []string{"FFE699"}},
	"thin":    {Type: "pattern", Pattern: 1, Color: []string{"CDE6F5"}},
	"hatched": {Type: "pattern", Pattern: 14, Color: []string{"8C8C8C"}},
}

// fill gives a cell a fill and keeps the rest of its format.
func (m *marked) fill(sheet, cell, fill string) error {
	own, err := m.file.GetCellStyle(sheet, cell)
	if err != nil {
		return err
	}
	key := styleKey{own, fill}
	id, known := m.styles[key]
	if !known {
		painted := fills[fill]
		model, err := m.file.NewStyle(&excelize.Style{Fill: painted})
		if err != nil {
			return err
		}
		// Styles are copied as they are stored: taken apart and made again, colours
		// of the theme would be lost.
		all := m.file.Styles.CellXfs
		xf, yes := all.Xf[own], true
		xf.FillID, xf.ApplyFill = all.Xf[model].FillID, &yes
		all.Xf = append(all.Xf, xf)
		all.Count = len(all.Xf)
		id = len(all.Xf) - 1
		m.styles[key] = id
	}
	return m.file.SetCellStyle(sheet, cell, cell, id)
}

// hatch hatches the rows that were set aside, over the columns of the table.
func (m *marked) hatch() error {
	if m.r.Model == nil {
		return nil
	}
	for k, row := range m.r.Model.RowsSetAside {
		if k == mostHatched {
			m.remark = append(m.remark, fmt.Sprintf("Only the first %d rows that were set aside are hatched.", mostHatched))
			break
		}
		for _, col := range m.table.Columns {
			if err := m.fill(m.sheet, readers.Address(col.Index, row.Row), "hatched"); err != nil {
				return err
			}
		}
	}
	return nil
}

// cellNote is what is said of one cell.
type cellNote struct {
	state audit.State // the worst of the findings; "" for none, in a row set aside
	text  []string
}

// cellNotes gathers what is said of each cell, in the order of the report.
func (m *marked) cellNotes() (order []string, notes map[string]*cellNote) {
	notes = map[string]*cellNote{}
	for k := range m.r.Findings {
		f := &m.r.Findings[k]
		if !f.IsOpen() {
			continue
		}
		text := m.noteText(f)
		for _, place := range f.Where {
			for i, cell := range m.cells(place) {
				n := notes[cell]
				if n == nil {
					n = &cellNote{state: f.State}
					notes[cell] = n
					order = append(order, cell)
				}
				if severity(f.State) < severity(n.state) {
					n.state = f.State
				}
				if i == 0 {
					n.text = append(n.text, text)
				}
			}
		}
	}
	if m.r.Model == nil {
		return order, notes
	}
	// Some programs show a hatched cell as a grey one; the note says what it means.
	for _, row := range m.r.Model.RowsSetAside {
		cell := m.rowCell(row)
		if notes[cell] == nil {
			notes[cell] = &cellNote{}
			order = append(order, cell)
		}
		notes[cell].text = append(notes[cell].text, "SET ASIDE: "+wording.Printable(wording.Stop(row.Reason)))
	}
	return order, notes
}

// rowCell is where a row that was set aside is told.
func (m *marked) rowCell(row audit.RowSetAside) string {
	if row.Cell != nil {
		return *row.Cell
	}
	return readers.Address(m.table.Columns[0].Index, row.Row)
}

// mark fills the cells that findings name and notes what is said of them.
func (m *marked) mark() error {
	order, notes := m.cellNotes()
	theirs, err := m.notesThere()
	if err != nil {
		return err
	}
	written := 0
	for k, cell := range order {
		if k == mostFills {
			m.remark = append(m.remark, fmt.Sprintf("Only the first %d named cells are filled.", mostFills))
			break
		}
		n := notes[cell]
		if n.state != "" {
			if err := m.fill(m.sheet, cell, string(n.state)); err != nil {
				return err
			}
		}
		if len(n.text) == 0 {
			continue
		}
		if written++; written > mostNotes {
			continue
		}
		if err := m.note(cell, strings.Join(n.text, "\n\n"), theirs[cell]); err != nil {
			return err
		}
	}
	if written > mostNotes {
		m.remark = append(m.remark, fmt.Sprintf("Only the first %d named cells have a note.", mostNotes))
	}
	return nil
}

func severity(s audit.State) int {
	return map[audit.State]int{audit.Stop: 0, audit.Warn: 1, audit.Thin: 2}[s]
}

// cells lists the cells that a place stands for; a whole column is told at its
// header, or its first cell where there is none.
func (m *marked) cells(place audit.Place) []string {
	switch {
	case place.Cell != nil:
		return []string{*place.Cell}
	case place.Row != nil:
		var all []string
		for _, col := range m.table.Columns {
			all = append(all, readers.Address(col.Index, *place.Row))
		}
		return all
	case place.Column == nil:
		return nil
	}
	for _, col := range m.table.Columns {
		if col.Title() != *place.Column {
			continue
		}
		if m.table.HeaderRow > 0 {
			return []string{readers.Address(col.Index, m.table.HeaderRow)}
		}
		return []string{m.table.Address(col, 0)}
	}
	return nil
}

func (m *marked) noteText(f *audit.Finding) string {
	text := strings.ToUpper(string(f.State)) + " " + f.Rule + ": " + message(f)
	if f.Waived != nil {
		text += " Waived: " + wording.Stop(*f.Waived)
	}
	if len(f.Remedies) > 0 {
		text += " To do: " + wording.Stop(f.Remedies[0].Text)
	}
	return cut(wording.Printable(text), mostInNote)
}

// notesThere are the notes that the workbook has already.
func (m *marked) notesThere() (map[string]string, error) {
	all, err := m.file.GetComments(m.sheet)
	if err != nil {
		return nil, err
	}
	texts := map[string]string{}
	for _, c := range all {
		text := c.Text
		for _, run := range c.Paragraph {
			text += run.Text
		}
		texts[c.Cell] = text
	}
	return texts, nil
}

// note puts a note on a cell, behind what its owner noted there.
func (m *marked) note(cell, text, theirs string) error {
	if theirs != "" {
		if err := m.file.DeleteComment(m.sheet, cell); err != nil {
			return err
		}
		text = theirs + "\n\n" + text
	}
	lines := utf8.RuneCountInString(text)/45 + strings.Count(text, "\n") + 2
	return m.file.AddComment(m.sheet, excelize.Comment{
		Cell: cell, Author: maker, Paragraph: []excelize.RichTextRun{{Text: text}}, Width: 320, Height: uint(min(600, 20*lines)),
	})
}

// finish puts the first sheet first and names footing as the maker.
func (m *marked) finish() error {
	f := m.file
	if err := f.MoveSheet(m.first, f.GetSheetName(0)); err != nil {
		return err
	}
	// Names of one sheet, such as its print area, tell the sheet by its place, and
	// every sheet has moved by one.
	if names := f.WorkBook.DefinedNames; names != nil {
		for i := range names.DefinedName {
			if id := names.DefinedName[i].LocalSheetID; id != nil {
				moved := *id + 1
				names.DefinedName[i].LocalSheetID = &moved
			}
		}
	}
	f.SetActiveSheet(0)
	if views := f.WorkBook.BookViews; views != nil {
		for i := range views.WorkBookView {
			views.WorkBookView[i].FirstSheet = 0
		}
	}
	props, err := f.GetAppProps()
	if err != nil {
		return err
	}
	props.Application = maker
	props.AppVersion = "1.0"
	return f.SetAppProps(props)
}
