package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MissingValues asks for empty cells in the columns that are used.
var MissingValues = &Rule{
	Name:     "missing-values",
	Family:   OfTable,
	Asks:     "Are cells empty in the columns that are used?",
	Why:      "A row with an empty cell is not used; when many are lost, those that are left may not stand for all.",
	Method:   "counts blank cells in the used columns",
	Limit:    "more than 5 % of the rows lack a value; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.FillGaps},
	Run:      missingValues,
}

func missingValues(p *Pass) (Outcome, error) {
	var where []Place
	rows := map[int]bool{}
	var named []string
	for _, col := range p.Asked() {
		if p.Design == nil && mostlyBlankText(col) {
			continue
		}
		blanks := 0
		for i := range col.Len() {
			if col.Cell(i).Kind == readers.Blank && p.Table.RowFault(i) == "" {
				where = append(where, Place{Row: i, Column: col})
				rows[i] = true
				blanks++
			}
		}
		if blanks > 0 {
			named = append(named, fmt.Sprintf("%s %d", col.Title(), blanks))
		}
	}
	if len(where) == 0 {
		return sound("no cell of the used columns is empty"), nil
	}
	share := float64(len(rows)) / float64(p.Table.Len())
	message := fmt.Sprintf("%s empty in the used columns (%s), in %s of the rows",
		wording.Count(len(where), "cell")+isAre(len(where)), wording.List(named), wording.Percent(share))
	o := sound(message)
	if share > 0.05 {
		o = breach(message + "; the rows that are left may not stand for all")
	}
	if filled := blankBelowLabel(p); filled > 0 {
		o.Advice = fmt.Sprintf("%d blank group cells stand below a filled one: if the label was meant for them too, write it into each", filled)
	}
	o.Where = where
	o.Evidence = map[string]any{"cells": len(where), "rows": len(rows), "share": share}
	return o, nil
}

// mostlyBlankText tells a column of remarks, whose blanks mean nothing.
func mostlyBlankText(col *readers.Column) bool {
	blanks := 0
	for i := range col.Len() {
		if col.Cell(i).Kind == readers.Blank {
			blanks++
		}
	}
	return 2*blanks > col.Len() && col.Kind() != readers.NumberColumn
}

// blankBelowLabel counts blank group cells below a first filled one when they
// are most of the column: the habit of writing a label once per block.
func blankBelowLabel(p *Pass) int {
	col := p.Columns.Group
	if col == nil {
		return 0
	}
	filled, blank := 0, 0
	for i := range col.Len() {
		if _, ok := col.Label(i); ok {
			filled++
		} else if filled > 0 {
			blank++
		}
	}
	if blank < filled {
		return 0
	}
	return blank
}

func isAre(n int) string {
	if n == 1 {
		return " is"
	}
	return " are"
}
