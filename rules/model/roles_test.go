package model

import (
	"strings"
	"testing"

	"footing/readers"
)

func tableOf(t *testing.T, csv string) *readers.Table {
	t.Helper()
	table, err := readers.Read("table.csv", strings.NewReader(csv), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return table
}

func TestResolveRefuses(t *testing.T) {
	table := tableOf(t, "g,x,z,y\na,1,5,2\nb,2,3,4\na,3,4,5\nb,4,9,1\n")
	for _, c := range []struct {
		name  string
		roles Roles
		words string // "" for none
	}{
		{"a line", Roles{Response: "y", Predictors: []string{"x"}}, ""},
		{"one column in two roles", Roles{Response: "y", Predictors: []string{"x"}, Subject: "x"}, "both as predictor and as subject"},
		{"a predictor twice", Roles{Response: "y", Predictors: []string{"x", "x"}}, "twice as predictor"},
		{"the response as order", Roles{Response: "y", Predictors: []string{"x"}, Order: "y"}, "both as response and as order"},
		{"labels as order", Roles{Response: "y", Predictors: []string{"x"}, Covariates: []string{"g"}, Order: "g"}, "must be numbers"},
		{"rows taken along the predictor", Roles{Response: "y", Predictors: []string{"x"}, Order: "x"}, ""},
		{"the order as covariate", Roles{Response: "y", Predictors: []string{"x"}, Covariates: []string{"z"}, Order: "z"}, ""},
		{"no response", Roles{Predictors: []string{"x"}}, "no response"},
		{"a response alone", Roles{Response: "y"}, "no model"},
		{"a column that is not there", Roles{Response: "y", Predictors: []string{"w"}}, `"w"`},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Resolve(table, c.roles)
			switch {
			case c.words == "" && err != nil:
				t.Error(err)
			case c.words != "" && (err == nil || !strings.Contains(err.Error(), c.words)):
				t.Errorf("error %v, want %q", err, c.words)
			}
		})
	}
}

func TestAColumnInTwoRolesIsListedOnce(t *testing.T) {
	c, err := Resolve(tableOf(t, "x,y\n1,2\n2,4\n3,5\n"), Roles{Response: "y", Predictors: []string{"x"}, Order: "x"})
	if err != nil {
		t.Fatal(err)
	}
	if used := c.Used(); len(used) != 2 {
		t.Errorf("%d columns are used, want 2", len(used))
	}
	if role := c.RoleOf(c.Order); role != "predictor" {
		t.Errorf("the column is the %q, want the predictor", role)
	}
}
