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
	var named []string
	lost := make([]bool, p.Table.Len())
	rows := 0
	for _, col := range p.Table.Columns {
		if !p.Uses(col) || col.Count(readers.Blank) == 0 || p.Design == nil && mostlyBlankText(col) {
			continue
		}
		before := len(where)
		for i := range col.Len() {
			if col.CellKind(i) != readers.Blank || p.Table.RowFault(i) != "" {
				continue
			}
			where = append(where, Place{Row: i, Column: col})
			if !lost[i] {
				lost[i] = true
				rows++
			}
		}
		if n := len(where) - before; n > 0 {
			named = append(named, fmt.Sprintf("%s %d", col.Title(), n))
		}
	}
	if len(where) == 0 {
		return sound("no cell of the used columns is empty"), nil
	}
	share := float64(rows) / float64(p.Table.Len())
	message := fmt.Sprintf("%s empty in the used columns (%s), in %s of the rows",
		wording.Count(len(where), "cell")+isAre(len(where)), wording.List(named), wording.Percent(share))
	o := sound(message)
	if share > 0.05 {
		o = breach(message + "; the rows that are left may not stand for all")
	}
	if below, label := blankBelowLabel(p.Columns.Group); below > 0 {
		o.Message += fmt.Sprintf("; %s below a filled one in %s: was its label (first %q) meant for them too?",
			wording.Count(below, "blank cell")+standOrStands(below), p.Columns.Group.Title(), label)
		o.Advice = "if a label was meant for the blank cells below it too, write it into each; footing never fills it in"
	}
	o.Where = where
	o.Evidence = map[string]any{"cells": len(where), "rows": rows, "share": share}
	return o, nil
}

func standOrStands(n int) string {
	if n == 1 {
		return " stands"
	}
	return " stand"
}

// mostlyBlankText tells a column of remarks, whose blanks mean nothing.
func mostlyBlankText(col *readers.Column) bool {
	return 2*col.Count(readers.Blank) > col.Len() && col.Kind() != readers.NumberColumn
}

// blankBelowLabel counts blank group cells below a first filled one, with the
// label above the first of them: people write a label once per block.
func blankBelowLabel(group *readers.Column) (below int, label string) {
	if group == nil || group.Count(readers.Blank) == 0 {
		return 0, ""
	}
	names, codes := group.Levels()
	above := int32(-1)
	for i, c := range codes {
		switch {
		case c >= 0:
			above = c
		case above >= 0 && group.CellKind(i) == readers.Blank:
			if below == 0 {
				label = names[above]
			}
			below++
		}
	}
	return below, label
}

func isAre(n int) string {
	if n == 1 {
		return " is"
	}
	return " are"
}
