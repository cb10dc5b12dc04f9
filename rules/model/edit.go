package model

import (
	"slices"

	"footing/readers"
)

// Without returns the design without the given used rows, which are set aside
// for the reason; what earlier edits did to the other rows stays. The receiver,
// whose rows must not have been transformed, is not changed.
func (d *Design) Without(rows []int, reason string) *Design {
	if d.transform != nil {
		panic("model.Without: the rows are transformed")
	}
	out := *d
	out.SetAside = slices.Clone(d.SetAside)
	var keep []int
	leave := make([]bool, len(d.Rows))
	for _, k := range rows {
		leave[k] = true
	}
	for k, i := range d.Rows {
		if leave[k] {
			out.SetAside = append(out.SetAside, SetAside{Row: i, Reason: reason})
			continue
		}
		keep = append(keep, k)
	}
	slices.SortStableFunc(out.SetAside, func(a, b SetAside) int { return a.Row - b.Row })
	out.keep(keep)
	return &out
}

// keep picks the given used rows out of everything that runs over them. Labels
// that no row bears any more are gone.
func (d *Design) keep(rows []int) {
	d.Rows = picked(d.Rows, rows)
	d.Y = picked(d.Y, rows)
	d.Order = picked(d.Order, rows)
	d.Group, d.Groups = recoded(picked(d.Group, rows), d.Groups)
	d.Subject, d.Subjects = recoded(picked(d.Subject, rows), d.Subjects)
	d.Predictors = slices.Clone(d.Predictors)
	for k, v := range d.Predictors {
		d.Predictors[k] = picked(v, rows)
	}
	d.Covariates = slices.Clone(d.Covariates)
	for k, c := range d.Covariates {
		c.Number = picked(c.Number, rows)
		c.Code, c.Levels = recoded(picked(c.Code, rows), c.Levels)
		d.Covariates[k] = c
	}
	d.Added = slices.Clone(d.Added)
	for k, t := range d.Added {
		t.Values = picked(t.Values, rows)
		d.Added[k] = t
	}
}

// picked gives the values at the given positions; nil of nil.
func picked[V any](v []V, at []int) []V {
	if v == nil {
		return nil
	}
	out := make([]V, len(at))
	for k, i := range at {
		out[k] = v[i]
	}
	return out
}

// recoded numbers the labels anew that some code still names; -1 stays.
func recoded(code []int, labels []string) ([]int, []string) {
	named := make([]bool, len(labels))
	for _, c := range code {
		if c >= 0 {
			named[c] = true
		}
	}
	var left []string
	to := make([]int, len(labels))
	for c, label := range labels {
		if named[c] {
			to[c] = len(left)
			left = append(left, label)
		}
	}
	for i, c := range code {
		if c >= 0 {
			code[i] = to[c]
		}
	}
	return code, left
}

// Relabelled returns the design with group labels replaced as the map says;
// labels that it lacks stay. The receiver is not changed.
func (d *Design) Relabelled(to map[string]string) *Design {
	out := *d
	names := map[string]bool{}
	label := make([]string, len(d.Group))
	for i, g := range d.Group {
		label[i] = d.Groups[g]
		if t, ok := to[label[i]]; ok {
			label[i] = t
		}
		names[label[i]] = true
	}
	out.Groups = nil
	for name := range names {
		out.Groups = append(out.Groups, name)
	}
	slices.Sort(out.Groups)
	out.Group = make([]int, len(label))
	for i, name := range label {
		out.Group[i], _ = slices.BinarySearch(out.Groups, name)
	}
	return &out
}

// RowsAt lists the used rows that stand at the given rows of the table, upwards
// and each once.
func (d *Design) RowsAt(table []int) []int {
	var rows []int
	for _, i := range table {
		if k, used := slices.BinarySearch(d.Rows, i); used {
			rows = append(rows, k)
		}
	}
	slices.Sort(rows)
	return slices.Compact(rows)
}

// Change is another number for one cell.
type Change struct {
	Row    int // index in the table
	Column *readers.Column
	Value  float64
}

// Changed returns the design with other numbers in some cells; cells that are
// not in use are passed over. The receiver and the table are not changed.
func (d *Design) Changed(changes []Change) *Design {
	out := *d
	out.changes = append(slices.Clone(d.changes), changes...)
	out.fill()
	return &out
}

// Place is the address of a used row's cell in a column.
func (d *Design) Place(row int, col *readers.Column) readers.Pos {
	return d.Table.Pos(col, d.Rows[row])
}
