package report

import (
	"encoding/json"
	"io"

	"footing/audit"
)

// JSON writes the result by the contract of its format, indented, with a line
// end. Figures keep full precision; what is not defined is null.
func JSON(w io.Writer, r *audit.Result) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(r)
}
