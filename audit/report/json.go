package report

import (
	"bytes"
	"encoding/json"
	"io"

	"footing/audit"
	"footing/rules/wording"
)

var jsonForm = &Form{
	Name: "json", Extensions: []string{".json"}, Marks: []string{"{\n  \"format\": \"" + mark},
	Write: func(w io.Writer, r *audit.Result, o Options) error {
		if !o.PerRow && r.Rows != nil {
			// Another form of the same run may have asked for the rows.
			bare := *r
			bare.Rows = nil
			r = &bare
		}
		return JSON(w, r)
	},
}

// JSON writes the result by the contract of its format, indented, with a line
// end. Figures keep full precision; what is not defined is null. Characters that
// a display would obey are escaped.
func JSON(w io.Writer, r *audit.Result) error { return writeJSON(w, r) }

func writeJSON(w io.Writer, v any) error {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	if err := e.Encode(v); err != nil {
		return err
	}
	_, err := w.Write(wording.EscapeJSON(b.Bytes()))
	return err
}
