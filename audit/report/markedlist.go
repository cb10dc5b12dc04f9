package report

import (
	"fmt"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"

	"footing/audit"
	"footing/readers"
	"footing/rules/wording"
)

// sheetStyles are the formats of the first sheet.
type sheetStyles struct{ title, head, wrap, link int }

// list writes the first sheet: verdict, answers, findings with links to their
// cells, rows set aside, passes.
func (m *marked) list() error {
	m.first = m.freeName()
	if _, err := m.file.NewSheet(m.first); err != nil {
		return err
	}
	for column, width := range map[string]float64{"A": 9, "B": 20, "C": 70, "D": 12, "E": 16, "F": 70} {
		if err := m.file.SetColWidth(m.first, column, column, width); err != nil {
			return err
		}
	}
	s, err := m.sheetStyles()
	if err != nil {
		return err
	}
	steps := []func(sheetStyles) error{m.listVerdict, m.listOpen, m.listSetAside, m.listPasses, m.listKey}
	for _, step := range steps {
		if err := step(s); err != nil {
			return err
		}
	}
	landscape, page, zero := "landscape", 1, 0
	fit := true
	if err := m.file.SetSheetProps(m.first, &excelize.SheetPropsOptions{FitToPage: &fit}); err != nil {
		return err
	}
	return m.file.SetPageLayout(m.first, &excelize.PageLayoutOptions{Orientation: &landscape, FitToWidth: &page, FitToHeight: &zero})
}

// freeName is a name that no sheet has.
func (m *marked) freeName() string {
	taken := map[string]bool{}
	for _, name := range m.file.GetSheetList() {
		taken[strings.ToLower(name)] = true
	}
	name := findingsSheet
	for k := 2; taken[strings.ToLower(name)]; k++ {
		name = findingsSheet + " " + strconv.Itoa(k)
	}
	return name
}

func (m *marked) sheetStyles() (s sheetStyles, err error) {
	// A font is always named: without a name programs take one of their own.
	font, err := m.file.GetDefaultFont()
	if err != nil {
		return s, err
	}
	top := &excelize.Alignment{Vertical: "top", WrapText: true}
	for _, style := range []struct {
		to    *int
		style excelize.Style
	}{
		{&s.title, excelize.Style{Font: &excelize.Font{Family: font, Bold: true, Size: 14}}},
		{&s.head, excelize.Style{Font: &excelize.Font{Family: font, Size: 11, Bold: true}, Border: []excelize.Border{{Type: "bottom", Style: 1, Color: "000000"}}}},
		{&s.wrap, excelize.Style{Alignment: top}},
		{&s.link, excelize.Style{Alignment: top, Font: &excelize.Font{Family: font, Size: 11, Underline: "single", Color: "0563C1"}}},
	} {
		if *style.to, err = m.file.NewStyle(&style.style); err != nil {
			return s, err
		}
	}
	return s, nil
}

// put writes cells from column A of the next row; empty ones are left out.
func (m *marked) put(style int, cells ...string) error {
	m.row++
	for k, text := range cells {
		if text == "" {
			continue
		}
		at := readers.Address(k, m.row)
		if err := m.text(m.first, at, text); err != nil {
			return err
		}
		if err := m.file.SetCellStyle(m.first, at, at, style); err != nil {
			return err
		}
	}
	return nil
}

// wide writes text over all columns, in a row as high as its lines.
func (m *marked) wide(style int, text string) error {
	if err := m.put(style, text); err != nil {
		return err
	}
	if err := m.file.MergeCell(m.first, readers.Address(0, m.row), readers.Address(5, m.row)); err != nil {
		return err
	}
	return m.file.SetRowHeight(m.first, m.row, height(text, 180))
}

// height is what so many characters need when a line takes perLine of them, in
// points; programs that write a sheet must say it for merged cells.
func height(text string, perLine int) float64 {
	return min(400, 15*float64(1+len([]rune(text))/perLine))
}

func (m *marked) listVerdict(s sheetStyles) error {
	r := m.r
	if err := m.wide(s.title, "footing: "+grade(r)); err != nil {
		return err
	}
	if err := m.file.SetRowHeight(m.first, m.row, 20); err != nil {
		return err
	}
	file, read := readWords(r)
	lines := []string{wording.Sentence(r.Verdict.Summary), file + ": " + read + " SHA-256 " + r.Input.SHA256 + "."}
	if r.Model != nil {
		lines = append(lines, wording.Sentence(modelWords(r)), scope)
	}
	for _, line := range lines {
		if err := m.wide(s.wrap, line); err != nil {
			return err
		}
	}
	for _, part := range []struct {
		title     string
		sentences []string
	}{{"You may quote", r.Verdict.Quote}, {"Do not quote", denied(r)}} {
		if len(part.sentences) == 0 {
			continue
		}
		m.row++
		if err := m.wide(s.head, part.title); err != nil {
			return err
		}
		for _, sentence := range part.sentences {
			if err := m.wide(s.wrap, sentence); err != nil {
				return err
			}
		}
	}
	return nil
}

// listOpen lists what asks for a decision, a row for each place.
func (m *marked) listOpen(s sheetStyles) error {
	m.row++
	if err := m.put(s.head, "State", "Check", "Finding, worst first", "Cell", "Value", "What to do"); err != nil {
		return err
	}
	begun := m.row
	for k := range m.r.Findings {
		f := &m.r.Findings[k]
		if !f.IsOpen() {
			continue
		}
		if err := m.listFinding(s, f); err != nil {
			return err
		}
	}
	if m.row == begun {
		return m.put(s.wrap, "", "", "Nothing asks for a decision.")
	}
	return nil
}

func (m *marked) listFinding(s sheetStyles, f *audit.Finding) error {
	state := string(f.State)
	said := message(f)
	if f.Waived != nil {
		said += " Waived: " + wording.Stop(*f.Waived)
	}
	todo := strings.Join(remedyWords(f), " ")
	if err := m.put(s.wrap, state, f.Rule, said, "", "", todo); err != nil {
		return err
	}
	if err := m.fill(m.first, readers.Address(0, m.row), state); err != nil {
		return err
	}
	if err := m.file.SetRowHeight(m.first, m.row, max(height(said, 80), height(todo, 80))); err != nil {
		return err
	}
	for k, place := range f.Where {
		if k == mostLinks {
			return m.put(s.wrap, state, f.Rule, fmt.Sprintf("and %d more places", len(f.Where)-mostLinks))
		}
		cells := m.cells(place)
		if len(cells) == 0 {
			continue
		}
		if k > 0 {
			if err := m.put(s.wrap, state, f.Rule); err != nil {
				return err
			}
		}
		value := ""
		if place.Value != nil {
			value = cut(*place.Value, 200)
		}
		if err := m.text(m.first, readers.Address(4, m.row), value); err != nil {
			return err
		}
		if err := m.file.SetCellStyle(m.first, readers.Address(4, m.row), readers.Address(4, m.row), s.wrap); err != nil {
			return err
		}
		if err := m.link(s, readers.Address(3, m.row), cells[0], cells[0]); err != nil {
			return err
		}
	}
	return nil
}

// link makes a cell of the first sheet jump to one of the table.
func (m *marked) link(s sheetStyles, from, to, shown string) error {
	if err := m.text(m.first, from, shown); err != nil {
		return err
	}
	if err := m.file.SetCellStyle(m.first, from, from, s.link); err != nil {
		return err
	}
	// A sheet's name is always quoted here: one such as A1 would be taken for a cell.
	target := "'" + strings.ReplaceAll(m.sheet, "'", "''") + "'!" + to
	return m.file.SetCellHyperLink(m.first, from, target, "Location")
}

func (m *marked) listSetAside(s sheetStyles) error {
	if m.r.Model == nil || len(m.r.Model.RowsSetAside) == 0 {
		return nil
	}
	m.row++
	if err := m.put(s.head, "Row", "", "Set aside since"); err != nil {
		return err
	}
	for k, row := range m.r.Model.RowsSetAside {
		if k == mostNotes {
			return m.put(s.wrap, "", "", fmt.Sprintf("and %d more rows", len(m.r.Model.RowsSetAside)-k))
		}
		if err := m.put(s.wrap, "", "", row.Reason); err != nil {
			return err
		}
		if err := m.link(s, readers.Address(0, m.row), m.rowCell(row), fmt.Sprintf("row %d", row.Row)); err != nil {
			return err
		}
	}
	return nil
}

func (m *marked) listPasses(s sheetStyles) error {
	m.row++
	if err := m.put(s.head, "State", "Check", strings.TrimSuffix(countWords(m.r), ".")); err != nil {
		return err
	}
	for k := range m.r.Findings {
		f := &m.r.Findings[k]
		if f.IsOpen() {
			continue
		}
		if err := m.put(s.wrap, string(f.State), f.Rule, message(f)); err != nil {
			return err
		}
		if err := m.file.SetRowHeight(m.first, m.row, height(message(f), 80)); err != nil {
			return err
		}
	}
	return nil
}

// listKey says what the fills mean, and what was left out.
func (m *marked) listKey(s sheetStyles) error {
	m.row++
	if err := m.put(s.head, "Fill", "", "Meaning"); err != nil {
		return err
	}
	for _, key := range []struct{ fill, word, meaning string }{
		{"stop", "stop", "a breach that changes an answer, or no answer is possible"},
		{"warn", "warn", "a breach; the answers hold"},
		{"thin", "thin", "these rows could hardly have shown it"},
		{"hatched", "hatched", "a row that was set aside"},
	} {
		if err := m.put(s.wrap, key.word, "", key.meaning); err != nil {
			return err
		}
		if err := m.fill(m.first, readers.Address(0, m.row), key.fill); err != nil {
			return err
		}
	}
	m.row++
	for _, line := range m.remark {
		if err := m.wide(s.wrap, line); err != nil {
			return err
		}
	}
	return nil
}
