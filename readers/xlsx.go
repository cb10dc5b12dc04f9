package readers

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/xml"
	"fmt"
	"io"
	"strings"
)

// readWorkbook chooses the sheet and reads the table in it.
func readWorkbook(src source, opt Options) (*Table, error) {
	limits := opt.Limits.Default()
	b, err := openBook(&src, limits)
	if err != nil {
		return nil, err
	}
	digest, err := digestOf(&src)
	if err != nil {
		return nil, err
	}
	var area *box
	if opt.Range != "" {
		r, ok := parseBox(opt.Range)
		if !ok {
			return nil, refuse(Pos{File: src.name}, "the range %q is not of the form A1:F60", opt.Range)
		}
		area = &r
	}
	var t *Table
	if opt.Sheet != "" {
		t, err = b.namedSheet(opt, limits, area)
	} else {
		t, err = b.onlySheet(opt, limits, area)
	}
	if err != nil {
		return nil, err
	}
	t.SHA256 = digest
	return t, nil
}

func digestOf(src *source) (string, error) {
	r, err := src.open()
	if err != nil {
		return "", err
	}
	h := sha256.New()
	if _, err := io.Copy(h, r); err != nil {
		return "", &Error{Pos: Pos{File: src.name}, Msg: "can't be read to its end: " + plainCause(err), Err: err}
	}
	return hex.EncodeToString(h.Sum(nil)), nil
}

// namedSheet reads the sheet that the user names; a hidden one too.
func (b *book) namedSheet(opt Options, limits Limits, area *box) (*Table, error) {
	var names []string
	for _, s := range b.sheets {
		if s.part == "" {
			continue
		}
		if strings.EqualFold(s.name, strings.TrimSpace(opt.Sheet)) {
			t, none, err := b.sheetTable(s, opt, limits, area)
			if err == nil {
				err = none
			}
			if err == nil && s.hidden {
				t.Reading.Notes = append(t.Reading.Notes, fmt.Sprintf("the sheet %q is hidden", s.name))
			}
			return t, err
		}
		names = append(names, s.name)
	}
	msg := fmt.Sprintf("there is no sheet %q; the sheets are %s", opt.Sheet, list(quoted(short(names)), "and"))
	if len(names) == 0 {
		msg = "has no sheet of cells"
	} else if near := Nearest(opt.Sheet, names); len(near) > 0 && len(names) > 1 {
		msg += fmt.Sprintf(": did you mean %s?", list(quoted(near), "or"))
	}
	return nil, refuse(Pos{File: b.file}, "%s", msg)
}

// onlySheet reads the visible sheets and takes the one with a table.
func (b *book) onlySheet(opt Options, limits Limits, area *box) (*Table, error) {
	var table *Table
	var names, passed []string
	var first error
	for _, s := range b.sheets {
		switch {
		case s.part == "":
			continue
		case s.hidden:
			passed = append(passed, fmt.Sprintf("%q (hidden)", s.name))
			continue
		}
		t, none, err := b.sheetTable(s, opt, limits, area)
		if err != nil {
			return nil, err
		}
		if none == nil && !isCandidate(t) {
			none = refuse(Pos{File: b.file, Sheet: s.name}, "has no table: names, at least two rows, a column of numbers")
		}
		if none != nil {
			// The most telling refusal is that of a sheet with something in it.
			if first == nil || strings.HasSuffix(first.Error(), "is empty") {
				first = none
			}
			passed = append(passed, fmt.Sprintf("%q", s.name))
			continue
		}
		names = append(names, s.name)
		if table == nil {
			table = t
		}
	}
	switch {
	case len(names) > 1:
		return nil, refuse(Pos{File: b.file}, "has a table in each of the sheets %s: choose one with --sheet", list(quoted(short(names)), "and"))
	case table == nil && first != nil && len(passed) <= 1:
		return nil, first
	case table == nil && first != nil:
		return nil, refuse(Pos{File: b.file}, "has no visible sheet with a table (names, two rows, a column of numbers); the sheets are %s: choose one with --sheet", list(short(passed), "and"))
	case table == nil && len(passed) > 0:
		return nil, refuse(Pos{File: b.file}, "has only hidden sheets: %s: choose one with --sheet", list(short(passed), "and"))
	case table == nil:
		return nil, refuse(Pos{File: b.file}, "has no sheet of cells")
	}
	switch len(passed) {
	case 0:
	case 1:
		table.Reading.Notes = append(table.Reading.Notes, fmt.Sprintf("the sheet %s was passed over", passed[0]))
	default:
		table.Reading.Notes = append(table.Reading.Notes, fmt.Sprintf("the sheets %s were passed over", list(passed, "and")))
	}
	return table, nil
}

// isCandidate tells whether a sheet has what makes it a table when nobody named it.
func isCandidate(t *Table) bool {
	if t.Len() < 2 {
		return false
	}
	for _, c := range t.Columns {
		if c.Kind() == NumberColumn {
			return true
		}
	}
	return false
}

// sheetTable reads one sheet and finds its table. none is set when the sheet is
// sound and holds no table, or more than one.
func (b *book) sheetTable(s bookSheet, opt Options, limits Limits, area *box) (t *Table, none, err error) {
	g, err := b.readSheet(s, opt, limits, area)
	if err != nil {
		return nil, nil, err
	}
	notes := g.notes
	switch declared := g.facts.tables; {
	case area != nil || len(declared) == 0:
	case len(declared) > 1:
		var refs []string
		for _, d := range declared {
			refs = append(refs, d.ref.String())
		}
		return nil, refuse(Pos{File: b.file, Sheet: s.name}, "has %d declared tables, at %s: choose one with --range", len(refs), list(short(refs), "and")), nil
	default:
		d := declared[0]
		inner := d.ref
		inner.bottom -= d.totals
		if g, err = b.readSheet(s, opt, limits, &inner); err != nil {
			return nil, nil, err
		}
		notes = append(g.notes, fmt.Sprintf("the declared table %q at %s fixes the boundary", d.name, d.ref))
		if opt.HeaderRow == "" && d.headers > 0 && g.records > 0 {
			opt.HeaderRow = fmt.Sprint(d.ref.top)
		}
	}
	given := opt.given()
	t, none = findTable(g, opt, Reading{Decimal: string(g.decimal), Given: given, Notes: notes, Date1904: g.facts.date1904})
	return t, none, nil
}

// declaredTable is a table object of a sheet.
type declaredTable struct {
	name            string
	ref             box
	headers, totals int
}

// tables reads the table objects that a sheet declares.
func (b *book) tables(s bookSheet, g *grid) error {
	rels, err := b.relations(s.part)
	if err != nil {
		return err
	}
	for _, r := range rels {
		if r.kind != "table" {
			continue
		}
		p, err := b.openPart(r.target, nil)
		if err != nil {
			return err
		}
		err = b.takeTable(p, g)
		p.close()
		if err != nil {
			return err
		}
	}
	return nil
}

func (b *book) takeTable(p *pass, g *grid) error {
	for {
		t, err := p.next()
		if err != nil || t == nil {
			return err
		}
		e, ok := t.(xml.StartElement)
		if ok && e.Name.Local == "filterColumn" && g.facts.filter == "" && len(g.facts.tables) > 0 {
			g.facts.filter = g.facts.tables[len(g.facts.tables)-1].ref.String()
		}
		if !ok || e.Name.Local != "table" || len(p.open) != 1 {
			continue
		}
		ref, ok := parseBox(attr(e, "ref"))
		if !ok {
			return p.broken(fmt.Sprintf("has the range %q", attr(e, "ref")))
		}
		d := declaredTable{name: attr(e, "displayName"), ref: ref, headers: 1}
		if attr(e, "headerRowCount") == "0" {
			d.headers = 0
		}
		if n := small(attr(e, "totalsRowCount")); n > 0 {
			d.totals = n
		}
		g.facts.tables = append(g.facts.tables, d)
	}
}
