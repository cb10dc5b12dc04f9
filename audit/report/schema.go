package report

import (
	_ "embed" // the schemas
	"io"
)

//go:embed audit.schema.json
var auditSchema []byte

// AuditSchema writes the JSON Schema (draft 2020-12) of what JSON writes, which
// says what each field means and in which unit it is.
func AuditSchema(w io.Writer) error {
	_, err := w.Write(auditSchema)
	return err
}
