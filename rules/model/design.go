package model

import (
	"fmt"
	"math"
	"slices"

	"footing/readers"
)

// Design holds the numbers of the rows that are used, in file order, and
// remembers where each came from. All slices but SetAside run over the used
// rows. A design is never changed once made; edits return a new one.
type Design struct {
	Table    *readers.Table
	Columns  Columns
	Rows     []int      // index of each used row in the table
	SetAside []SetAside // rows not used, in file order

	Y          []float64
	Predictors [][]float64 // per predictor; the first is the main one
	Covariates []Covariate

	Group  []int    // code into Groups; all 0 without a group column
	Groups []string // labels in byte order; one empty label without a group column

	Subject  []int // code into Subjects, -1 where missing; nil without a subject
	Subjects []string
	Order    []float64 // NaN where missing; nil without an order

	CommonSlope bool
	Added       []Term // columns that a remedy added

	changes   []Change                    // numbers that a remedy put in place of the table's
	scale     string                      // "log" when the response was transformed
	transform func(v []float64) []float64 // of the rows, by a remedy; nil for none
	lostDF    int                         // degrees of freedom that a remedy used besides its columns
}

// SetAside is a row that is not used, with its reason in words.
type SetAside struct {
	Row    int // index in the table
	Column *readers.Column
	Reason string
}

// Covariate is an additive column: numbers, or labels as codes into Levels.
type Covariate struct {
	Column *readers.Column
	Number []float64 // nil for labels
	Code   []int
	Levels []string // in byte order
}

// Name is the covariate's column name.
func (c Covariate) Name() string { return c.Column.Title() }

// N is the number of used rows.
func (d *Design) N() int { return len(d.Rows) }

// X is the main predictor of the used rows, nil when the model has none.
func (d *Design) X() []float64 {
	if len(d.Predictors) == 0 {
		return nil
	}
	return d.Predictors[0]
}

// HasGroup reports whether a group column was given.
func (d *Design) HasGroup() bool { return d.Columns.Group != nil }

// GroupSizes counts the used rows of each group.
func (d *Design) GroupSizes() []int {
	n := make([]int, len(d.Groups))
	for _, g := range d.Group {
		n[g]++
	}
	return n
}

// Members lists the used rows of group g.
func (d *Design) Members(g int) []int {
	var rows []int
	for i, code := range d.Group {
		if code == g {
			rows = append(rows, i)
		}
	}
	return rows
}

// OfGroup picks the values of v at the rows of group g.
func (d *Design) OfGroup(v []float64, g int) []float64 {
	var out []float64
	for i, code := range d.Group {
		if code == g {
			out = append(out, v[i])
		}
	}
	return out
}

// NewDesign sets aside every row that lacks a value in a fitted column, with
// its reason, and collects the numbers of the others. A row without subject
// or order is used: only the rules that need these leave it out.
func NewDesign(t *readers.Table, c Columns, commonSlope bool) *Design {
	d := &Design{Table: t, Columns: c, CommonSlope: commonSlope}
	for i := range t.Len() {
		if col, reason := whySetAside(t, c, i); reason != "" {
			d.SetAside = append(d.SetAside, SetAside{Row: i, Column: col, Reason: reason})
			continue
		}
		d.Rows = append(d.Rows, i)
	}
	d.fill()
	return d
}

// fill collects the numbers of d.Rows from the table.
func (d *Design) fill() {
	c := d.Columns
	d.Y = d.numbers(c.Response)
	d.Predictors = nil
	for _, col := range c.Predictors {
		d.Predictors = append(d.Predictors, d.numbers(col))
	}
	d.Group, d.Groups = make([]int, d.N()), []string{""}
	if c.Group != nil {
		d.Group, d.Groups = d.codes(c.Group)
	}
	d.Covariates = nil
	for _, col := range c.Covariates {
		cov := Covariate{Column: col}
		if col.Kind() == readers.NumberColumn {
			cov.Number = d.numbers(col)
		} else {
			cov.Code, cov.Levels = d.codes(col)
		}
		d.Covariates = append(d.Covariates, cov)
	}
	if c.Subject != nil {
		d.Subject, d.Subjects = d.codes(c.Subject)
	}
	if c.Order != nil {
		d.Order = d.numbers(c.Order)
	}
}

func (d *Design) numbers(col *readers.Column) []float64 {
	v := make([]float64, len(d.Rows))
	for k, i := range d.Rows {
		x, ok := col.Number(i)
		if !ok {
			x = math.NaN()
		}
		v[k] = x
	}
	for _, c := range d.changes {
		if k, used := slices.BinarySearch(d.Rows, c.Row); used && c.Column == col {
			v[k] = c.Value
		}
	}
	return v
}

// codes gives each used row the position of its label among the labels in
// byte order, -1 where there is none.
func (d *Design) codes(col *readers.Column) (code []int, levels []string) {
	names, of := col.Levels()
	position := make([]int, len(names))
	for _, i := range d.Rows {
		if of[i] >= 0 && position[of[i]] == 0 {
			position[of[i]] = 1
			levels = append(levels, names[of[i]])
		}
	}
	slices.Sort(levels)
	for k, name := range names {
		position[k], _ = slices.BinarySearch(levels, name)
	}
	code = make([]int, len(d.Rows))
	for k, i := range d.Rows {
		code[k] = -1
		if of[i] >= 0 {
			code[k] = position[of[i]]
		}
	}
	return code, levels
}

// whySetAside gives the first column in the way of using row i, with the
// reason; the reason is "" when the row can be used.
func whySetAside(t *readers.Table, c Columns, i int) (*readers.Column, string) {
	if fault := t.RowFault(i); fault != "" {
		return nil, fault
	}
	for _, col := range c.Fitted() {
		cell := col.Cell(i)
		asLabel := col == c.Group || isLabelCovariate(c, col)
		if asLabel {
			if _, ok := col.Label(i); ok {
				continue
			}
		} else if _, ok := col.Number(i); ok {
			continue
		}
		return col, reasonFor(col, cell)
	}
	return nil, ""
}

func isLabelCovariate(c Columns, col *readers.Column) bool {
	return slices.Contains(c.Covariates, col) && col.Kind() != readers.NumberColumn
}

func reasonFor(col *readers.Column, cell readers.Cell) string {
	switch cell.Kind {
	case readers.Blank:
		return col.Title() + " is missing"
	case readers.Code:
		return fmt.Sprintf("%s is missing (%s)", col.Title(), cell.Text)
	case readers.Fault:
		return fmt.Sprintf("%s is the error %s", col.Title(), cell.Text)
	case readers.Uncached:
		return col.Title() + " is a formula without a stored value"
	case readers.Date:
		return fmt.Sprintf("%s is a date (%s)", col.Title(), cell.Text)
	default:
		return fmt.Sprintf("%s is not a number (%q)", col.Title(), cell.Text)
	}
}
