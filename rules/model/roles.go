// Package model turns the roles of a table's columns into a design matrix,
// fits it once by least squares and computes what the rules need to know of
// every row. It also holds the edits that a remedy may make to a design.
package model

import (
	"fmt"
	"slices"

	"footing/readers"
)

// Roles says which column plays which part, by header, by name without unit
// or by column letter. The zero value asks for no model: the table is only
// screened.
type Roles struct {
	Response    string
	Predictors  []string // the first is the one whose slopes are compared, the others are additive
	Group       string
	Covariates  []string // additive; a column of numbers or of labels
	Subject     string   // rows of one subject are not independent
	Order       string   // the sequence in which rows were taken
	Label       string   // row identifier
	CommonSlope bool     // one slope for all groups
}

// Named reports whether any role is given.
func (r Roles) Named() bool {
	return r.Response != "" || len(r.Predictors) > 0 || r.Group != "" || len(r.Covariates) > 0 ||
		r.Subject != "" || r.Order != "" || r.Label != ""
}

// Columns are the columns found for Roles; a role that was not given is nil.
type Columns struct {
	Response   *readers.Column
	Predictors []*readers.Column
	Group      *readers.Column
	Covariates []*readers.Column
	Subject    *readers.Column
	Order      *readers.Column
	Label      *readers.Column
}

// Fitted lists the columns that enter the fit: response, predictors, group
// and covariates, in that order. A row needs a value in each of them.
func (c Columns) Fitted() []*readers.Column {
	var all []*readers.Column
	if c.Response != nil {
		all = append(all, c.Response)
	}
	all = append(all, c.Predictors...)
	if c.Group != nil {
		all = append(all, c.Group)
	}
	return append(all, c.Covariates...)
}

// Used lists every column that has a role, once.
func (c Columns) Used() []*readers.Column {
	all := c.Fitted()
	for _, col := range []*readers.Column{c.Subject, c.Order, c.Label} {
		if col != nil && !slices.Contains(all, col) {
			all = append(all, col)
		}
	}
	return all
}

// RoleOf names the part that a column plays in words ("the response"), or
// gives "" when it has none.
func (c Columns) RoleOf(col *readers.Column) string {
	switch {
	case col == nil:
		return ""
	case col == c.Response:
		return "response"
	case col == c.Group:
		return "group"
	case col == c.Subject:
		return "subject"
	case col == c.Label:
		return "label"
	}
	for _, p := range c.Predictors {
		if p == col {
			return "predictor"
		}
	}
	for _, p := range c.Covariates {
		if p == col {
			return "covariate"
		}
	}
	if col == c.Order {
		return "order"
	}
	return ""
}

// Resolve finds the columns of the roles. It refuses a name that no column or
// two columns bear, one column in two roles (but the order may be a predictor or
// a covariate too), a column of another kind in the part of a number, and roles
// that make no model. Every error is one sentence with the position where there
// is one.
func Resolve(t *readers.Table, r Roles) (Columns, error) {
	var c Columns
	taken := map[*readers.Column]string{}
	find := func(role, name string, number bool) (*readers.Column, error) {
		if name == "" {
			return nil, nil
		}
		col, err := t.Find(name)
		if err != nil {
			return nil, err
		}
		if other, twice := taken[col]; twice && role == "order" && (other == "predictor" || other == "covariate") {
			return col, mustBeNumbers(t, col, role) // rows taken along the predictor, or a drift that is allowed for
		} else if twice && other == role {
			return nil, refuse(t, "column %q is given twice as %s; name it once", col.Title(), role)
		} else if twice {
			return nil, refuse(t, "column %q is given both as %s and as %s; give each column one role", col.Title(), other, role)
		}
		taken[col] = role
		if number {
			if err := mustBeNumbers(t, col, role); err != nil {
				return nil, err
			}
		}
		return col, nil
	}

	var err error
	single := []struct {
		role   string
		name   string
		number bool
		to     **readers.Column
	}{
		{"response", r.Response, true, &c.Response},
		{"group", r.Group, false, &c.Group},
		{"subject", r.Subject, false, &c.Subject},
		{"label", r.Label, false, &c.Label},
	}
	for i, s := range single {
		if *s.to, err = find(s.role, s.name, s.number); err != nil {
			return Columns{}, err
		}
		if i > 0 {
			continue
		}
		for _, name := range r.Predictors {
			col, err := find("predictor", name, true)
			if err != nil {
				return Columns{}, err
			}
			c.Predictors = append(c.Predictors, col)
		}
	}
	for _, name := range r.Covariates {
		col, err := find("covariate", name, false)
		if err != nil {
			return Columns{}, err
		}
		c.Covariates = append(c.Covariates, col)
	}
	if c.Order, err = find("order", r.Order, true); err != nil {
		return Columns{}, err
	}
	return c, makesModel(t, c)
}

func makesModel(t *readers.Table, c Columns) error {
	switch {
	case c.Response == nil:
		return refuse(t, "roles are given but no response; name it with --response (-y)")
	case len(c.Predictors) == 0 && c.Group == nil:
		return refuse(t, "a response alone is no model; give a predictor with -x, a group with -g, or both")
	}
	return nil
}

// mustBeNumbers refuses a column that is not mostly numbers, naming the first
// cell that is in the way.
func mustBeNumbers(t *readers.Table, col *readers.Column, role string) error {
	if col.Kind() == readers.NumberColumn {
		return nil
	}
	bad, first := 0, -1
	for i := range col.Len() {
		cell := col.Cell(i)
		if cell.Kind == readers.Number || cell.Kind == readers.Blank || cell.Kind == readers.Code {
			continue
		}
		if first < 0 {
			first = i
		}
		bad++
	}
	if first < 0 {
		return refuse(t, "column %q holds no numbers, so it cannot be the %s", col.Title(), role)
	}
	return &readers.Error{
		Pos: t.Pos(col, first),
		Msg: fmt.Sprintf("%s is %q; the %s must be numbers, and %d of %d cells of this column are not", col.Title(), col.Cell(first).Text, role, bad, col.Len()),
	}
}

func refuse(t *readers.Table, format string, args ...any) error {
	return &readers.Error{Pos: readers.Pos{File: t.File, Sheet: t.Sheet}, Msg: fmt.Sprintf(format, args...)}
}
