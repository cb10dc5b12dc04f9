package readers

import (
	"encoding/xml"
	"path"
	"strings"
)

// relation is a link from one part to another.
type relation struct {
	id, kind, target string
}

// relations reads the links of a part; a part without any has none.
func (a *archive) relations(part string) ([]relation, error) {
	dir, base := path.Split(part)
	name := path.Join(dir, "_rels", base+".rels")
	if !a.has(name) {
		return nil, nil
	}
	p, err := a.openPart(name, nil)
	if err != nil {
		return nil, err
	}
	defer p.close()
	var out []relation
	for {
		t, err := p.next()
		if err != nil || t == nil {
			return out, err
		}
		e, ok := t.(xml.StartElement)
		if !ok || e.Name.Local != "Relationship" || attr(e, "TargetMode") == "External" {
			continue
		}
		target := strings.ReplaceAll(attr(e, "Target"), `\`, "/")
		if !strings.HasPrefix(target, "/") {
			target = path.Join(dir, target)
		}
		kind := attr(e, "Type")
		out = append(out, relation{id: attr(e, "Id"), kind: kind[strings.LastIndexByte(kind, '/')+1:], target: path.Clean("/" + target)})
	}
}

func one(rels []relation, kind string) string {
	for _, r := range rels {
		if r.kind == kind {
			return r.target
		}
	}
	return ""
}

// book is what a workbook says of itself.
type book struct {
	*archive
	part     string // the workbook part
	sheets   []bookSheet
	date1904 bool
	texts    *sharedTexts // nil until a sheet asks for them
	textPart string
	styles   *styles
}

type bookSheet struct {
	name   string
	part   string
	hidden bool
	filter string // range of a filter, from the workbook's names
}

// workbookPart finds the part that lists the sheets; "" when the archive is no
// workbook.
func (a *archive) workbookPart() (string, error) {
	rels, err := a.relations("/")
	if err != nil {
		return "", err
	}
	if part := one(rels, "officeDocument"); part != "" && a.has(part) && isWorkbookName(part) {
		return part, nil
	}
	if a.has("/xl/workbook.xml") {
		return "/xl/workbook.xml", nil
	}
	return "", nil
}

// isWorkbookName tells a workbook from the other documents of the same family.
func isWorkbookName(part string) bool {
	base := strings.ToLower(path.Base(part))
	return strings.HasSuffix(base, ".xml") && !strings.HasPrefix(base, "document") && !strings.HasPrefix(base, "presentation")
}

// identifyZip tells a workbook from other zip archives.
func identifyZip(src *source) (identity, error) {
	limits := Limits{}.Default()
	limits.Unpacked = 1 << 40 // sizes are a later question
	a, err := openArchive(src, limits)
	if err != nil {
		return identity{}, err
	}
	if a.has("/xl/workbook.bin") {
		return identity{refusal: "is a binary workbook (.xlsb): save it as .xlsx or CSV"}, nil
	}
	part, err := a.workbookPart()
	if err != nil {
		return identity{}, err
	}
	if part == "" {
		return identity{refusal: "is a zip archive without a workbook in it: unpack it first, or save the table as .xlsx or CSV"}, nil
	}
	return identity{workbook: true}, nil
}

// openBook reads the list of sheets.
func openBook(src *source, limits Limits) (*book, error) {
	a, err := openArchive(src, limits)
	if err != nil {
		return nil, err
	}
	b := &book{archive: a}
	if b.part, err = a.workbookPart(); err != nil {
		return nil, err
	}
	rels, err := a.relations(b.part)
	if err != nil {
		return nil, err
	}
	b.textPart = one(rels, "sharedStrings")
	p, err := a.openPart(b.part, nil)
	if err != nil {
		return nil, err
	}
	defer p.close()
	filterOf := -1
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
			filterOf = -1
			switch e.Name.Local {
			case "workbookPr":
				b.date1904 = truth(attr(e, "date1904"))
			case "sheet":
				b.addSheet(e, rels)
			case "definedName":
				if attr(e, "name") == "_xlnm._FilterDatabase" {
					filterOf = small(attr(e, "localSheetId"))
				}
			}
		case xml.CharData:
			if filterOf >= 0 && filterOf < len(b.sheets) {
				text := string(e)
				b.sheets[filterOf].filter = strings.ReplaceAll(text[strings.LastIndexByte(text, '!')+1:], "$", "")
			}
		case xml.EndElement:
			filterOf = -1
		}
	}
	b.styles = &styles{part: one(rels, "styles"), theme: one(rels, "theme")}
	return b, nil
}

// addSheet takes one sheet of the list; sheets that hold charts or macros have an
// empty part, which keeps the numbering of the workbook's names.
func (b *book) addSheet(e xml.StartElement, rels []relation) {
	s := bookSheet{name: attr(e, "name")}
	state := attr(e, "state")
	s.hidden = state == "hidden" || state == "veryHidden"
	id := ""
	for _, at := range e.Attr {
		if at.Name.Local == "id" {
			id = at.Value
		}
	}
	for _, r := range rels {
		if r.id == id && r.kind == "worksheet" {
			s.part = r.target
		}
	}
	b.sheets = append(b.sheets, s)
}
