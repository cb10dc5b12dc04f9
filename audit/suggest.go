package audit

import (
	"fmt"
	"slices"
	"strings"

	"footing/readers"
	"footing/rules/wording"
)

// Suggest reads a model out of the columns of a table: the command to audit
// it, and the reason for each role. Command is how the audit was called so
// far ("footing audit kelp.csv"). A table without a number column, or with
// nothing to explain it by, gets no command but the reason.
func Suggest(t *readers.Table, command string) Suggestion {
	var numbers, labels []*readers.Column
	var s Suggestion
	for _, col := range t.Columns {
		switch {
		case runningNumber(t, col):
			s.Reasons = append(s.Reasons, fmt.Sprintf("%s only counts the rows: if it is the order in which they were taken, add --order %s", col.Title(), wording.Shell(nameIn(t, col))))
		case col.Kind() == readers.NumberColumn && distinctValues(col) > 1:
			numbers = append(numbers, col)
		case makesGroups(t, col):
			labels = append(labels, col)
		}
	}
	if len(numbers) == 0 || (len(numbers) == 1 && len(labels) == 0) {
		s.Reasons = append(s.Reasons, "no model is suggested: a line needs a response and a predictor that are numbers, or a response and groups")
		return s
	}
	response, predictor := chooseNumbers(t, numbers)
	parts := []string{command, "-y", wording.Shell(nameIn(t, response))}
	s.Reasons = append(s.Reasons, fmt.Sprintf("%s as response: %s", response.Name, whyResponse(response, numbers)))
	if predictor != nil {
		parts = append(parts, "-x", wording.Shell(nameIn(t, predictor)))
		s.Reasons = append(s.Reasons, fmt.Sprintf("%s as predictor: %s", predictor.Name, whyPredictor(t, predictor)))
	}
	if len(labels) > 0 {
		parts = append(parts, "-g", wording.Shell(nameIn(t, labels[0])))
		s.Reasons = append(s.Reasons, fmt.Sprintf("%s as group: %d labels, each in several rows", labels[0].Name, distinctValues(labels[0])))
	}
	s.Command = strings.Join(parts, " ")
	return s
}

// chooseNumbers takes as response the last column that was measured, and as
// predictor one that was set to levels, or else the first of the others.
func chooseNumbers(t *readers.Table, numbers []*readers.Column) (response, predictor *readers.Column) {
	for _, col := range slices.Backward(numbers) {
		if !set(t, col) {
			response = col
			break
		}
	}
	if response == nil {
		response = numbers[len(numbers)-1]
	}
	for _, col := range numbers {
		if col != response && set(t, col) {
			return response, col
		}
	}
	for _, col := range numbers {
		if col != response {
			return response, col
		}
	}
	return response, nil
}

func whyResponse(col *readers.Column, numbers []*readers.Column) string {
	if len(numbers) == 1 {
		return "the only column of numbers"
	}
	return "the last column of measured numbers, where responses are usually written"
}

func whyPredictor(t *readers.Table, col *readers.Column) string {
	if set(t, col) {
		return "few values, each in several rows, as if it had been set"
	}
	return "the first other column of numbers"
}

// set tells a column whose values were set rather than measured: at most a
// third as many values as rows.
func set(t *readers.Table, col *readers.Column) bool {
	return 3*distinctValues(col) <= t.Len()
}

// makesGroups tells a column of labels of which each stands in several rows.
func makesGroups(t *readers.Table, col *readers.Column) bool {
	k := distinctValues(col)
	return col.Kind() == readers.TextColumn && k >= 2 && 3*k <= t.Len()
}

func distinctValues(col *readers.Column) int {
	seen := map[string]bool{}
	for i := range col.Len() {
		if label, ok := col.Label(i); ok {
			seen[label] = true
		}
	}
	return len(seen)
}

// runningNumber tells whole numbers that rise by one from row to row.
func runningNumber(t *readers.Table, col *readers.Column) bool {
	if col.Kind() != readers.NumberColumn || t.Len() < 3 {
		return false
	}
	previous, have := 0.0, false
	for i := range col.Len() {
		v, ok := col.Number(i)
		if !ok {
			continue
		}
		if have && v != previous+1 {
			return false
		}
		previous, have = v, true
	}
	return have
}

// nameIn is how a column is named in a command: by its name, or by its letter
// when the name would be ambiguous.
func nameIn(t *readers.Table, col *readers.Column) string {
	for _, name := range []string{col.Title(), col.Header} {
		if found, err := t.Find(name); err == nil && found == col {
			return name
		}
	}
	return col.Letter()
}
