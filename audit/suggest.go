package audit

import (
	"fmt"
	"slices"
	"strings"

	"footing/readers"
	"footing/rules"
	"footing/rules/wording"
)

// Suggest reads a model out of the columns of a table: the command to audit
// it, and the reason for each role. Command is how the audit was called so
// far ("footing audit kelp.csv"). A table without a number column, or with
// nothing to explain it by, gets no command but the reason. Columns that
// identify rows, put them in order or repeat a subject are told with the flag
// that says so; whether they do, only the owner knows.
func Suggest(p *rules.Pass, command string) Suggestion {
	c := sortOut(p)
	s := Suggestion{Reasons: c.asides()}
	if len(c.numbers) == 0 || len(c.numbers) == 1 && len(c.groups) == 0 {
		s.Reasons = append(s.Reasons, "no model is suggested: a line needs a response and a predictor that are numbers, or a response and groups")
		return s
	}
	numbered := c.takeNumbered()
	response, predictor := c.chooseNumbers()
	parts := []string{command, "-y", c.shell(response)}
	s.Reasons = append(s.Reasons, fmt.Sprintf("%s as response: %s", inUnit(response), c.whyResponse(response)))
	if predictor != nil {
		parts = append(parts, "-x", c.shell(predictor))
		s.Reasons = append(s.Reasons, fmt.Sprintf("%s as predictor: %s", inUnit(predictor), c.whyPredictor(predictor)))
	}
	if len(c.groups) > 0 {
		group := c.groups[0]
		parts = append(parts, "-g", c.shell(group))
		what := "labels, each in several rows"
		if numbered {
			what = "whole numbers in sequence, each in several rows, as names are numbered; if they are amounts, give it with -x"
		}
		s.Reasons = append(s.Reasons, fmt.Sprintf("%s as group: %d %s", group.Title(), p.Profile(group).Distinct, what))
		for _, other := range c.groups[1:] {
			s.Reasons = append(s.Reasons, fmt.Sprintf("%s makes groups too (%d labels): take it with -g instead, or add --covariate %s", other.Title(), p.Profile(other).Distinct, c.shell(other)))
		}
	}
	if len(c.groups) == 0 {
		if few := c.groupInNumbers(response, predictor); few != nil {
			s.Reasons = append(s.Reasons, fmt.Sprintf("%s takes %d whole numbers only: if they are names and not amounts, add -g %s", few.Title(), p.Profile(few).Distinct, c.shell(few)))
		}
	}
	s.Command = strings.Join(parts, " ")
	return s
}

// parts of a table, as its columns look.
type columnSorts struct {
	pass     *rules.Pass
	numbers  []*readers.Column // that vary and do not count the rows
	groups   []*readers.Column // labels of which each stands in several rows, fewest first
	orders   []*readers.Column // that count the rows, and dates
	names    []*readers.Column // labels that are all different
	subjects []*readers.Column // many labels, each in a few rows
	constant []*readers.Column
}

func sortOut(p *rules.Pass) columnSorts {
	c := columnSorts{pass: p}
	for _, col := range p.Table.Columns {
		f := p.Profile(col)
		filled := col.Len() - col.Count(readers.Blank) - col.Count(readers.Code)
		switch {
		case runningNumber(f):
			c.orders = append(c.orders, col)
		case f.Distinct == 1 && filled > 1:
			c.constant = append(c.constant, col)
		case col.Kind() == readers.DateColumn:
			c.orders = append(c.orders, col)
		case col.Kind() == readers.NumberColumn && f.Distinct > 1:
			c.numbers = append(c.numbers, col)
		case col.Kind() != readers.TextColumn || f.Distinct < 2:
		case f.Distinct == filled:
			c.names = append(c.names, col)
		case f.Distinct > 6 && 5*f.Distinct > filled && 10*f.Distinct <= 6*filled:
			c.subjects = append(c.subjects, col)
		case 3*f.Distinct <= p.Table.Len():
			c.groups = append(c.groups, col)
		}
	}
	// The first column of labels is the group, unless a later one has so few
	// labels that the first looks like plots or subjects beside it.
	slices.SortStableFunc(c.groups, func(a, b *readers.Column) int {
		return c.crowded(a) - c.crowded(b)
	})
	return c
}

// crowded tells columns of more labels than a comparison of slopes can bear.
func (c columnSorts) crowded(col *readers.Column) int {
	if c.pass.Profile(col).Distinct > 8 {
		return 1
	}
	return 0
}

// asides tells of the columns that take no part in the command.
func (c columnSorts) asides() []string {
	var all []string
	for _, col := range c.orders {
		if col.Kind() == readers.NumberColumn {
			all = append(all, fmt.Sprintf("%s only counts the rows: if it is the order in which they were taken, add --order %s", col.Title(), c.shell(col)))
		} else {
			all = append(all, fmt.Sprintf("%s holds dates: if rows were taken in that order, count them in a column of numbers and name it with --order", col.Title()))
		}
	}
	for k, col := range c.names {
		if k == 0 {
			all = append(all, fmt.Sprintf("%s names each row by a label of its own: add --label %s to see it beside the rows", col.Title(), c.shell(col)))
		}
	}
	for _, col := range c.subjects {
		all = append(all, fmt.Sprintf("%s names %d things, each in a few rows: if the rows of one share an error, add --subject %s", col.Title(), c.pass.Profile(col).Distinct, c.shell(col)))
	}
	if len(c.constant) > 0 {
		var names []string
		for _, col := range c.constant {
			names = append(names, col.Title())
		}
		verb := "is"
		if len(names) > 1 {
			verb = "are"
		}
		all = append(all, fmt.Sprintf("%s %s the same in every row and cannot explain anything", wording.List(names), verb))
	}
	return append(all, c.sideBySide()...)
}

// sideBySide tells of one response written in a column for each group.
func (c columnSorts) sideBySide() []string {
	var all []string
	var told []string
	for _, col := range c.numbers {
		stem := stemOf(col)
		if stem == "" || slices.Contains(told, stem) {
			continue
		}
		var names []string
		for _, other := range c.numbers {
			if stemOf(other) == stem && other.Unit == col.Unit {
				names = append(names, other.Title())
			}
		}
		if len(names) > 1 {
			told = append(told, stem)
			all = append(all, fmt.Sprintf("%s look like one quantity side by side: to compare them, write one row per measurement, with a column that says which it is", wording.List(names)))
		}
	}
	return all
}

// stemOf is what stands before the last underscore, dash, point or space of a
// name, "" when nothing does.
func stemOf(col *readers.Column) string {
	at := strings.LastIndexAny(col.Name, "_-. ")
	if at <= 0 {
		return ""
	}
	return strings.ToLower(col.Name[:at])
}

// chooseNumbers takes as response the last column that was measured, and as
// predictor one that was set to levels, or else the first of the others. Columns
// that look like the response side by side are no predictors.
func (c columnSorts) chooseNumbers() (response, predictor *readers.Column) {
	for _, col := range slices.Backward(c.numbers) {
		if !c.set(col) {
			response = col
			break
		}
	}
	if response == nil {
		response = c.numbers[len(c.numbers)-1]
	}
	var others []*readers.Column
	for _, col := range c.numbers {
		if col != response && (stemOf(col) == "" || stemOf(col) != stemOf(response)) {
			others = append(others, col)
		}
	}
	if len(others) == 0 {
		for _, col := range c.numbers {
			if col != response {
				others = append(others, col)
			}
		}
	}
	for _, col := range others {
		if c.set(col) {
			return response, col
		}
	}
	if len(others) > 0 {
		return response, others[0]
	}
	return response, nil
}

// set tells a column whose values were chosen rather than measured.
func (c columnSorts) set(col *readers.Column) bool {
	f := c.pass.Profile(col)
	return f.Set || 3*f.Distinct <= len(f.Values)
}

func (c columnSorts) whyResponse(col *readers.Column) string {
	switch {
	case len(c.numbers) == 1:
		return "the only column of numbers"
	case c.set(col):
		return "the last column of numbers; but it takes few values, as if it had been set"
	}
	return "the last column of measured numbers, where responses are usually written"
}

func (c columnSorts) whyPredictor(col *readers.Column) string {
	f := c.pass.Profile(col)
	switch {
	case 3*f.Distinct <= len(f.Values):
		return fmt.Sprintf("%d values, each in several rows, as if it had been set", f.Distinct)
	case f.Set:
		return "values in equal steps, as if it had been set"
	}
	return "the first other column of numbers"
}

// takeNumbered makes a group of a column that numbers a few things 1, 2, 3 when
// no labels make groups and the line has its two numbers without it.
func (c *columnSorts) takeNumbered() bool {
	if len(c.groups) > 0 || len(c.numbers) < 3 {
		return false
	}
	for k, col := range c.numbers {
		values, times := c.pass.Profile(col).Levels()
		names := len(values) >= 2 && len(values) <= 4 && col.Unit == ""
		for i, v := range values {
			names = names && v == float64(i+1) && times[i] >= 3
		}
		if names {
			c.groups = []*readers.Column{col}
			c.numbers = slices.Delete(slices.Clone(c.numbers), k, k+1)
			return true
		}
	}
	return false
}

// groupInNumbers finds a column of few whole numbers that has no part yet.
func (c columnSorts) groupInNumbers(taken ...*readers.Column) *readers.Column {
	for _, col := range c.numbers {
		f := c.pass.Profile(col)
		if !slices.Contains(taken, col) && f.Distinct <= 8 && 3*f.Distinct <= len(f.Values) && f.Step >= 1 {
			return col
		}
	}
	return nil
}

// inUnit is a column's name with its unit.
func inUnit(col *readers.Column) string {
	if col.Unit == "" || col.Unit == col.Title() {
		return col.Title()
	}
	return col.Title() + " (" + col.Unit + ")"
}

// runningNumber tells whole numbers that rise by one from row to row.
func runningNumber(f *rules.Profile) bool {
	for k := 1; k < len(f.Values); k++ {
		if f.Values[k] != f.Values[k-1]+1 {
			return false
		}
	}
	return len(f.Values) >= 3
}

func (c columnSorts) shell(col *readers.Column) string {
	return wording.Shell(nameIn(c.pass.Table, col))
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
