package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// UnevenRows asks for rows whose fields do not match the header.
var UnevenRows = &Rule{
	Name:   "uneven-rows",
	Family: OfTable,
	Asks:   "Does every row have as many fields as the header?",
	Why:    "A delimiter inside a field moves all that follows one column on; read as it stands, numbers would land in columns that they do not belong to.",
	Method: "counts the fields of each record. A row with more is set aside, never shifted. A row with fewer is used when its fields are of their columns' kinds and no column in the fit lies beyond them",
	Limit:  "one row set aside for its fields, or cut short before a column in use; no chance is involved, so no false alarms",
	Needs:  NeedsTable, Remedies: []*remedy.Remedy{remedy.QuoteFields},
	Run: unevenRows,
}

func unevenRows(p *Pass) (Outcome, error) {
	uneven := p.Table.Reading.Uneven
	if len(uneven) == 0 {
		return sound("every row has as many fields as the header"), nil
	}
	var where []Place
	var bad, harmless []string
	for _, u := range uneven {
		where = append(where, Place{Row: u.Record})
		said := fmt.Sprintf("row %d has %d of %d fields", u.Row, u.Fields, u.Want)
		switch {
		case u.Kind == readers.TooMany:
			bad = append(bad, said+" (a delimiter in a field that is not quoted?)")
		case !u.Kind.Used(), u.Kind == readers.CutShort && p.fitBeyond(u.Fields):
			bad = append(bad, said)
		default:
			harmless = append(harmless, said)
		}
	}
	if len(bad) == 0 {
		o := sound(wording.Some(harmless, mostSaid) + ", without harm to a column in use")
		o.Where = where
		return o, nil
	}
	o := breach(wording.Some(bad, mostSaid) + "; what cannot be used is set aside, never shifted")
	if len(harmless) > 0 {
		o.Message += "; without harm: " + wording.Some(harmless, mostSaid)
	}
	o.Where = where
	return o, nil
}

// fitBeyond reports whether a column of the fit lies beyond so many fields.
func (p *Pass) fitBeyond(fields int) bool {
	for _, col := range p.Columns.Fitted() {
		if col.Index >= fields {
			return true
		}
	}
	return false
}
