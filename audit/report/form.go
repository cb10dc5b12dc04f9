package report

import (
	"bytes"
	"io"
	"strings"

	"footing/audit"
	"footing/readers"
)

// Form is one way of writing a result down.
type Form struct {
	Name       string
	Extensions []string // of the files that are of this form when nothing else is said

	// Marks are how a file of this form begins when footing wrote it: only such a
	// file is replaced without being asked for.
	Marks []string

	// Draws marks a form with figures: the result needs its drawing.
	Draws bool

	Write func(w io.Writer, r *audit.Result, o Options) error
}

// Options say how a result is written; each form takes what concerns it.
type Options struct {
	Text    TextOptions
	PerRow  bool   // keep the row diagnostics in JSON
	FailOn  string // least state that fails: stop, warn, thin or never
	Version string // of footing
	File    bool   // the report goes to a file of its own and carries footing's mark

	// Spans finds where fields stand in the lines of a text file; nil when nobody
	// can tell, as with a workbook.
	Spans func(places []readers.Pos) map[readers.Pos]readers.Span
}

// Forms lists the forms of a report. A new one is a file, its test and a line
// here; an extension belongs to the first that names it.
var Forms = []*Form{
	textForm,
	jsonForm,
	markdownForm,
	htmlForm,
	sarifForm,
	junitForm,
	statementForm,
}

// mark is what footing's files begin with, behind what the form itself asks for.
const mark = "footing-audit/"

// FormNamed finds a form by its name; nil when there is none.
func FormNamed(name string) *Form {
	for _, f := range Forms {
		if f.Name == name {
			return f
		}
	}
	return nil
}

// FormNames lists the names of all forms.
func FormNames() []string {
	names := make([]string, len(Forms))
	for i, f := range Forms {
		names[i] = f.Name
	}
	return names
}

// FormOf finds the form that a file's extension names, the longest that fits; nil
// when it names none.
func FormOf(path string) *Form {
	lower := strings.ToLower(path)
	var found *Form
	longest := 0
	for _, f := range Forms {
		for _, ext := range f.Extensions {
			if len(ext) > longest && strings.HasSuffix(lower, ext) {
				found, longest = f, len(ext)
			}
		}
	}
	return found
}

// HeadLength is how much of a file WrittenHere wants to see.
const HeadLength = 4096

// WrittenHere reports whether a file that begins like this is a report or a
// figure that footing wrote. Any form will do: a report may be written again in
// another form.
func WrittenHere(head []byte) bool {
	for _, f := range Forms {
		for _, m := range f.Marks {
			if bytes.HasPrefix(head, []byte(m)) {
				return true
			}
		}
	}
	return bytes.HasPrefix(head, []byte(figureMark))
}

// figureMark begins each figure that is written to a file.
const figureMark = "<!-- " + mark

// Figure gives a drawing as it is written to a file: with footing's mark.
func Figure(svg []byte) []byte {
	return append([]byte("<!-- "+audit.Format+" figure -->\n"), svg...)
}
