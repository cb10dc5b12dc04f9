package model

import (
	"slices"

	"footing/readers"
)

// Without returns the design without the given used rows, which are set aside
// for the reason; the receiver is not changed.
func (d *Design) Without(rows []int, reason string) *Design {
	out := *d
	out.Rows = nil
	out.SetAside = slices.Clone(d.SetAside)
	leave := make([]bool, len(d.Rows))
	for _, k := range rows {
		leave[k] = true
	}
	for k, i := range d.Rows {
		if leave[k] {
			out.SetAside = append(out.SetAside, SetAside{Row: i, Reason: reason})
			continue
		}
		out.Rows = append(out.Rows, i)
	}
	slices.SortStableFunc(out.SetAside, func(a, b SetAside) int { return a.Row - b.Row })
	out.fill()
	return &out
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
