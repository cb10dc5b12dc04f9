package readers

import (
	"archive/zip"
	"bytes"
	"fmt"
	"strings"

	"github.com/xuri/excelize/v2"
)

// styles answers what the number of a cell's style means. The library that knows
// this sees a workbook of our own with the file's styles in it and no sheet: it
// would read the sheets whole, and spill large ones to the disk.
type styles struct {
	part, theme string
	file        *excelize.File
	known       map[int]cellStyle
}

// cellStyle is what matters of a style.
type cellStyle struct {
	Style
	date bool
}

// of gives a style by number.
func (s *styles) of(a *archive, number int) (cellStyle, error) {
	if st, ok := s.known[number]; ok {
		return st, nil
	}
	if s.known == nil {
		s.known = map[int]cellStyle{}
		if s.part != "" && a.has(s.part) {
			if err := s.open(a); err != nil {
				return cellStyle{}, err
			}
		}
	}
	var out cellStyle
	if s.file != nil {
		st, err := s.ask(number)
		if err != nil {
			// Readers take a style that is not in the list for the plain one.
			st = &excelize.Style{}
		}
		out = simplified(st)
	}
	s.known[number] = out
	return out, nil
}

// open makes the small workbook and lets the library open it.
func (s *styles) open(a *archive) error {
	sheet, err := a.whole(s.part)
	if err != nil {
		return err
	}
	// Without a theme the library knows no colours at all.
	theme := []byte(`<a:theme xmlns:a="http://schemas.openxmlformats.org/drawingml/2006/main"/>`)
	if s.theme != "" && a.has(s.theme) {
		if theme, err = a.whole(s.theme); err != nil {
			return err
		}
	}
	var buf bytes.Buffer
	z := zip.NewWriter(&buf)
	const (
		office = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
		types  = "http://schemas.openxmlformats.org/package/2006/content-types"
		rels   = "http://schemas.openxmlformats.org/package/2006/relationships"
		main   = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
		kind   = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"
	)
	for _, part := range [...]struct {
		name string
		body []byte
	}{
		{"[Content_Types].xml", fmt.Appendf(nil, `<Types xmlns=%q><Override PartName="/xl/workbook.xml" ContentType=%q/></Types>`, types, kind)},
		{"_rels/.rels", fmt.Appendf(nil, `<Relationships xmlns=%q><Relationship Id="r1" Type="%s/officeDocument" Target="xl/workbook.xml"/></Relationships>`, rels, office)},
		{"xl/workbook.xml", fmt.Appendf(nil, `<workbook xmlns=%q><sheets/></workbook>`, main)},
		{"xl/_rels/workbook.xml.rels", fmt.Appendf(nil, `<Relationships xmlns=%q/>`, rels)},
		{"xl/styles.xml", sheet},
		{"xl/theme/theme1.xml", theme},
	} {
		w, err := z.CreateHeader(&zip.FileHeader{Name: part.name, Method: zip.Store})
		if err == nil {
			_, err = w.Write(part.body)
		}
		if err != nil {
			return fmt.Errorf("styles of %s: %w", a.file, err)
		}
	}
	if err := z.Close(); err != nil {
		return fmt.Errorf("styles of %s: %w", a.file, err)
	}
	n := int64(buf.Len()) + 1<<20
	s.file, err = excelize.OpenReader(&buf, excelize.Options{UnzipSizeLimit: n, UnzipXMLSizeLimit: n})
	if err != nil {
		return &Error{Pos: Pos{File: a.file}, Msg: strings.TrimPrefix(s.part, "/") + " can't be read: save the workbook again", Err: err}
	}
	return nil
}

// ask looks a style up. A list of styles that refers to a font or fill it does not
// have makes the library panic; such a style is as good as none.
func (s *styles) ask(number int) (st *excelize.Style, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("style %d: %v", number, r)
		}
	}()
	return s.file.GetStyle(number)
}

func simplified(st *excelize.Style) cellStyle {
	var out cellStyle
	if st.Font != nil {
		out.Struck = st.Font.Strike
		out.Ink = ink(st.Font)
	}
	if len(st.Fill.Color) > 0 && !(st.Fill.Type == "pattern" && st.Fill.Pattern == 0) {
		out.Fill = strings.ToUpper(strings.TrimPrefix(st.Fill.Color[0], "#"))
		if out.Fill == "" {
			out.Fill = "unknown"
		}
	}
	format := ""
	if st.CustomNumFmt != nil {
		format = *st.CustomNumFmt
	}
	out.date = isDateFormat(st.NumFmt, format)
	out.Percent = st.NumFmt == 9 || st.NumFmt == 10 || strings.Contains(bareFormat(format), "%")
	return out
}

// ink gives the colour of letters, "" for the standard one.
func ink(f *excelize.Font) string {
	switch {
	case f.Color != "":
		c := strings.ToUpper(strings.TrimPrefix(f.Color, "#"))
		if len(c) == 8 {
			c = c[2:] // the first two are the opacity
		}
		if c == "000000" {
			return ""
		}
		return c
	case f.ColorTheme != nil && *f.ColorTheme != 1:
		return fmt.Sprintf("theme %d", *f.ColorTheme)
	case f.ColorIndexed > 0 && f.ColorIndexed != 8 && f.ColorIndexed != 64:
		return fmt.Sprintf("index %d", f.ColorIndexed)
	}
	return ""
}

// isDateFormat tells whether a number format shows a date or a time: by its
// number where it is one of the built-in, else by the letters in it.
func isDateFormat(number int, format string) bool {
	switch {
	case number >= 14 && number <= 22, number >= 27 && number <= 36, number >= 45 && number <= 47, number >= 50 && number <= 58:
		return true
	}
	bare := strings.ToLower(bareFormat(format))
	if bare == "" || strings.Contains(bare, "general") {
		return false
	}
	return strings.ContainsAny(bare, "dmyhs")
}

// bareFormat leaves out of a number format what is shown as it stands: quoted
// texts, escaped letters, and brackets but for those of elapsed times.
func bareFormat(format string) string {
	var out strings.Builder
	for i := 0; i < len(format); i++ {
		switch c := format[i]; c {
		case '"':
			end := strings.IndexByte(format[i+1:], '"')
			if end < 0 {
				return out.String()
			}
			i += end + 1
		case '\\', '_', '*':
			i++
		case '[':
			end := strings.IndexByte(format[i:], ']')
			if end < 0 {
				return out.String()
			}
			if inner := strings.ToLower(format[i+1 : i+end]); strings.Trim(inner, "h") == "" || strings.Trim(inner, "m") == "" || strings.Trim(inner, "s") == "" {
				out.WriteString(inner)
			}
			i += end
		default:
			out.WriteByte(c)
		}
	}
	return out.String()
}
