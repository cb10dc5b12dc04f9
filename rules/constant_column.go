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
	Limit:    "the response, a predictor or a covariate has a single value; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.LeaveOut},
	Run:      constantColumn,
}

func constantColumn(p *Pass) (Outcome, error) {
	var inRole, elsewhere []string
	var where []Place
	for _, col := range p.Asked() {
		value, constant := onlyValue(p, col)
		if !constant {
			continue
		}
		where = append(where, Place{Row: -1, Column: col})
		said := fmt.Sprintf("%s is %s in every row", col.Title(), value)
		switch p.Columns.RoleOf(col) {
		case "response", "predictor", "covariate":
			inRole = append(inRole, said)
		default:
			elsewhere = append(elsewhere, said)
		}
	}
	o := sound("every column in use takes more than one value")
	switch {
	case len(inRole) > 0:
		o = breach(wording.List(inRole) + ": nothing can be learnt from it")
		o.Denies = p.everyQuestion()
	case len(elsewhere) > 0:
		o = sound(wording.List(elsewhere))
	}
	o.Where = where
	return o, nil
}

// onlyValue gives the single value of a column over the used rows, or over all
// rows when no role is given.
func onlyValue(p *Pass, col *readers.Column) (string, bool) {
	rows := allRows(p.Table)
	if p.Design != nil {
		rows = p.Design.Rows
	}
	value, seen := "", 0
	for _, i := range rows {
		label, ok := col.Label(i)
		if !ok {
			continue
		}
		if seen > 0 && label != value {
			return "", false
		}
		value = label
		seen++
	}
	return value, seen > 1
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
