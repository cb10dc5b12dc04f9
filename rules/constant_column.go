package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// ConstantColumn asks whether a column holds one value only.
var ConstantColumn = &Rule{
	Name:     "constant-column",
	Family:   OfTable,
	Asks:     "Does a column in use hold one value only?",
	Why:      "A column that never changes cannot explain anything, and a response that never changes has nothing to be explained.",
	Method:   "compares the values of the used rows",
	Limit:    "a column with a role has a single value; a stop when that leaves an answer out. No chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.LeaveOut},
	Run:      constantColumn,
}

func constantColumn(p *Pass) (Outcome, error) {
	found := p.tally()
	var denied []Question
	for _, col := range p.Table.Columns {
		value, constant := onlyValue(p, col)
		if !constant {
			continue
		}
		found.set(col, []Place{{Row: -1, Column: col}}, fmt.Sprintf("%s is %s in every row", col.Title(), value))
		switch p.Columns.RoleOf(col) {
		case "response", "predictor", "covariate":
			denied = p.everyQuestion()
		case "group":
			if denied == nil {
				denied = []Question{{Difference: true}}
			}
		}
	}
	if p.Design == nil {
		// Without roles a constant column is no more than a fact of the table.
		o := sound("every column takes more than one value")
		if found.used.total > 0 {
			o.Message, o.Where = found.used.words(), found.used.where
		}
		return o, nil
	}
	o := found.outcome("every column in use takes more than one value", func(words string, _ int) string {
		return words + ": nothing can be learnt from it"
	})
	o.Denies = denied
	return o, nil
}

// onlyValue gives the single value of a column over the used rows, or over all
// rows when no role is given.
func onlyValue(p *Pass, col *readers.Column) (string, bool) {
	rows := allRows(p.Table)
	if p.Design != nil {
		rows = p.Design.Rows
	}
	if f := p.Profile(col); p.Design == nil && f.Distinct != 1 {
		return "", false
	} else if p.Design != nil && len(f.Values) > 0 {
		return onlyNumber(col, rows)
	}
	names, codes := col.Levels()
	only, seen := int32(-1), 0
	for _, i := range rows {
		switch c := codes[i]; {
		case c < 0:
			continue
		case seen > 0 && c != only:
			return "", false
		default:
			only = c
			seen++
		}
	}
	if seen < 2 {
		return "", false
	}
	return names[only], true
}

func onlyNumber(col *readers.Column, rows []int) (string, bool) {
	only, seen := 0.0, 0
	for _, i := range rows {
		v, ok := col.Number(i)
		if !ok {
			continue
		}
		if seen > 0 && v != only {
			return "", false
		}
		only = v
		seen++
	}
	return wording.Number(only), seen > 1
}

func allRows(t *readers.Table) []int {
	rows := make([]int, t.Len())
	for i := range rows {
		rows[i] = i
	}
	return rows
}

// everyQuestion lists all answers that the model is asked for.
func (p *Pass) everyQuestion() []Question {
	all := p.slopeQuestions()
	if len(all) == 0 && p.Design != nil {
		for _, g := range p.Design.Groups {
			all = append(all, Question{Group: g})
		}
	}
	return append(all, Question{Difference: true})
}
