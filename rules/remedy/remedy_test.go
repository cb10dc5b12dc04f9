package remedy

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"strings"
	"testing"

	"footing/readers"
	"footing/rules/model"
)

// drawn is a table of two groups along an order; y makes the response of row i
// from x and a normal deviate.
func drawn(n int, y func(i int, x, z float64) float64) string {
	random := rand.New(rand.NewPCG(4, 2))
	var b strings.Builder
	b.WriteString("site,pot,no,x,w,y\n")
	for i := range n {
		x := 1 + float64((i*7)%n)/float64(n)*9
		fmt.Fprintf(&b, "%c,pot%d,%d,%.6f,%.6f,%.9f\n", 'a'+i%2, i/6, i+1, x, random.NormFloat64(), y(i, x, random.NormFloat64()))
	}
	return b.String()
}

func plain(_ int, x, z float64) float64 { return 20 + 2*x + z }

func startOf(t *testing.T, csv string, roles model.Roles) Start {
	t.Helper()
	table, err := readers.Read("table.csv", strings.NewReader(csv), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	columns, err := model.Resolve(table, roles)
	if err != nil {
		t.Fatal(err)
	}
	d := model.NewDesign(table, columns, roles.CommonSlope)
	f, err := model.NewFit(d)
	if err != nil {
		t.Fatal(err)
	}
	return Start{Design: d, Fit: f, Confidence: 0.95, Seed: 1}
}

var (
	line    = model.Roles{Response: "y", Predictors: []string{"x"}}
	grouped = model.Roles{Response: "y", Predictors: []string{"x"}, Group: "site"}
	means   = model.Roles{Response: "y", Group: "site"}
	two     = model.Roles{Response: "y", Predictors: []string{"x", "w"}, Group: "site"}
)

func with(roles model.Roles, change func(*model.Roles)) model.Roles {
	change(&roles)
	return roles
}

// TestRemedies tries each remedy where it applies and where it does not. What it
// gives where it applies is held elsewhere, to base R; here it is what tells it
// from the original answers. No trial may touch the original fit.
func TestRemedies(t *testing.T) {
	ordered := with(grouped, func(r *model.Roles) { r.Order = "no" })
	subjects := with(grouped, func(r *model.Roles) { r.Subject = "pot" })
	sound := drawn(60, plain)
	exponential := drawn(60, func(_ int, x, z float64) float64 { return math.Exp(0.2*x + 0.3*z) })
	target := func(change func(*Target)) func(*Start) {
		return func(s *Start) { change(&s.Target) }
	}
	moved := func(before, after model.Answers) bool { return after.Slopes[0].Value != before.Slopes[0].Value }
	requoted := func(before, after model.Answers) bool {
		return !moved(before, after) && after.Slopes[0].SE != before.Slopes[0].SE
	}
	cases := []struct {
		name   string
		remedy *Remedy
		csv    string
		roles  model.Roles
		start  func(*Start)
		shows  func(before, after model.Answers) bool // nil: it does not apply
		why    string                                 // words of the reason
	}{
		{"codes taken as missing", AsMissing, sound, grouped, target(func(g *Target) { g.Rows = []int{2} }), moved, ""},
		{"no code in the fit", AsMissing, sound, grouped, nil, nil, "no row"},
		{"copies dropped", DropCopies, sound, grouped, target(func(g *Target) { g.Rows = []int{0, 5} }), moved, ""},
		{"no copy in the fit", DropCopies, sound, grouped, nil, nil, "no row"},
		{"a row set aside", SetAside, sound, grouped, target(func(g *Target) { g.Rows = []int{2} }), moved, ""},
		{"no row named", SetAside, sound, grouped, nil, nil, "no row"},
		{"labels merged", MergeLabels, sound, grouped, target(func(g *Target) { g.Labels = map[string]string{"b": "a"} }), func(before, after model.Answers) bool {
			return len(after.Slopes) == 1 && after.Slopes[0].Rows == 60 && len(before.Slopes) == 2
		}, ""},
		{"variants of another column", MergeLabels, sound, grouped, nil, nil, "not group labels"},
		{"a column left out", LeaveOutColumn, sound, two, nil, moved, ""},
		{"nothing to compare with", LeaveOutColumn, sound, two, func(s *Start) { s.Fit = nil }, nil, "no fit"},

		{"a curve", Curve, sound, grouped, nil, moved, ""},
		{"a curve without predictor", Curve, sound, means, nil, nil, "no predictor"},
		{"a curve through too few rows", Curve, "x,y\n1,2\n2,4\n3,5\n3,6\n", model.Roles{Response: "y", Predictors: []string{"x"}}, nil, func(_, after model.Answers) bool { return after.Slopes[0].DF == 1 }, ""},
		{"a common curve", CommonCurve, sound, grouped, nil, func(before, after model.Answers) bool {
			return after.Difference.DF2 == before.Difference.DF2-1 && after.Difference.P != before.Difference.P
		}, ""},
		{"a common curve without predictor", CommonCurve, sound, means, nil, nil, "no predictor"},

		{"a response that grows by percent", LogResponse, exponential, grouped, nil, func(_, after model.Answers) bool { return after.Scale == "log" }, ""},
		{"a response that needs no other scale", LogResponse, sound, grouped, nil, nil, "do not ask"},
		{"a response with a zero", LogResponse, "x,y\n1,0\n2,4\n3,5\n4,6\n5,9\n", line, nil, nil, "not positive"},

		{"robust errors", RobustErrors, sound, grouped, nil, requoted, ""},
		{"robust errors at leverage 1", RobustErrors, "x,y\n8,6\n8,5\n8,7\n8,8\n19,12\n", line, nil, nil, "stands alone"},
		{"own variances", OwnVariance, sound, grouped, nil, func(before, after model.Answers) bool {
			return after.Difference.DF2 < before.Difference.DF2 && after.Difference.Pairs[0].SE != before.Difference.Pairs[0].SE && !moved(before, after)
		}, ""},
		{"own variances of one line", OwnVariance, sound, line, nil, nil, "no two groups"},
		{"own variances with a covariate", OwnVariance, sound, two, nil, nil, "share covariates"},
		{"a bootstrap", WildBootstrap, sound, grouped, nil, requoted, ""},
		{"a bootstrap at leverage 1", WildBootstrap, "x,y\n8,6\n8,5\n8,7\n8,8\n19,12\n", line, nil, nil, "stands alone"},
		{"a permutation", PermutedGroups, sound, grouped, nil, func(before, after model.Answers) bool {
			return after.Difference.P != before.Difference.P && after.Difference.F == before.Difference.F
		}, ""},
		{"a permutation of means", PermutedGroups, sound, means, nil, func(before, after model.Answers) bool { return after.Difference.P != before.Difference.P }, ""},
		{"a permutation of one group", PermutedGroups, sound, line, nil, nil, "no two groups"},

		{"a robust line", RobustLine, sound, grouped, nil, moved, ""},
		{"a robust line through few rows", RobustLine, drawn(30, plain), grouped, nil, nil, "fewer than 20"},
		{"a robust line with a covariate", RobustLine, sound, two, nil, nil, "without covariates"},
		{"a robust line through a line", RobustLine, drawn(60, func(i int, x, z float64) float64 {
			if i < 40 {
				return 2 * x
			}
			return 2*x + z
		}), grouped, nil, nil, "lie on one line"},

		{"serial errors", SerialErrors, sound, ordered, nil, func(before, after model.Answers) bool {
			return moved(before, after) && after.Difference.DF2 == before.Difference.DF2-1
		}, ""},
		{"serial errors without an order", SerialErrors, sound, grouped, nil, nil, "no order"},
		{"the order as covariate", OrderTerm, sound, ordered, nil, func(before, after model.Answers) bool {
			return moved(before, after) && after.Difference.DF2 == before.Difference.DF2-2
		}, ""},
		{"no order as covariate", OrderTerm, sound, grouped, nil, nil, "no order"},
		{"the order is the predictor", OrderTerm, sound, with(line, func(r *model.Roles) { r.Order = "x" }), nil, nil, "cannot be told apart"},

		{"subjects", SubjectErrors, sound, subjects, nil, requoted, ""},
		{"no subjects", SubjectErrors, sound, grouped, nil, nil, "no subject"},
		{
			"a group of one subject", SubjectErrors, "site,pot,x,y\na,p,1,2\na,p,2,4\na,q,3,5\na,q,4,9\nb,r,1,3\nb,r,2,3\nb,r,4,5\n",
			with(grouped, func(r *model.Roles) { r.Subject = "pot" }), nil, nil, "fewer than two subjects",
		},
		{"levels", LevelErrors, sound, grouped, target(func(g *Target) {
			for i := range 60 {
				g.Subjects = append(g.Subjects, i/4)
			}
		}), requoted, ""},
		{"no shared error of levels", LevelErrors, sound, grouped, nil, nil, "not found to share"},

		{"a predictor with an error", CorrectSlopes, sound, grouped, target(func(g *Target) { g.Reliability = map[string]float64{"a": 0.8, "b": 0.8} }), func(before, after model.Answers) bool {
			b, a := before.Slopes[0], after.Slopes[0]
			return math.Abs(a.Value-b.Value/0.8) < 1e-12 && math.Abs(a.SE-b.SE/0.8) < 1e-12
		}, ""},
		{"a predictor that is all error", CorrectSlopes, sound, grouped, target(func(g *Target) { g.Reliability = map[string]float64{"a": -0.1, "b": 0.8} }), nil, "as large as its scatter"},
	}
	tried := map[*Remedy]bool{}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			tried[c.remedy] = true
			s := startOf(t, c.csv, c.roles)
			fit := s.Fit
			before, figures := fit.Answers(0.95), snapshot(fit)
			if c.start != nil {
				c.start(&s)
			}
			after, err := c.remedy.Try(s)
			var not *NotApplicable
			switch {
			case c.shows == nil && (!errors.As(err, &not) || !strings.Contains(not.Reason, c.why)):
				t.Errorf("error %v, want %q", err, c.why)
			case c.shows != nil && err != nil:
				t.Errorf("not tried: %v", err)
			case c.shows != nil && !c.shows(before, after):
				t.Errorf("from %+v to %+v", before, after)
			}
			if !reflect.DeepEqual(figures, snapshot(fit)) || !sameEstimates(before, fit.Answers(0.95)) {
				t.Error("the trial has changed the original fit")
			}
			again, _ := c.remedy.Try(s)
			if c.shows != nil && !sameEstimates(after, again) {
				t.Error("a second trial answers otherwise")
			}
		})
	}
	for _, r := range []*Remedy{
		AsMissing, DropCopies, SetAside, MergeLabels, LeaveOutColumn, Curve, CommonCurve, LogResponse, RobustErrors, OwnVariance,
		WildBootstrap, PermutedGroups, RobustLine, SerialErrors, OrderTerm, SubjectErrors, LevelErrors, CorrectSlopes,
	} {
		if !tried[r] || !r.CanBeTried() {
			t.Errorf("%s is not tried", r.Name)
		}
	}
}

// TestOwnersRemedies cannot be carried out by a program.
func TestOwnersRemedies(t *testing.T) {
	for _, r := range []*Remedy{MendCells, FillGaps, MoreRows, LeaveOut, AddGroup} {
		if r.CanBeTried() {
			t.Errorf("%s can be tried", r.Name)
		}
	}
}

// snapshot copies what runs over the rows of a fit and its design.
func snapshot(f *model.Fit) []any {
	d := f.Design
	return []any{
		slices.Clone(f.Coef), slices.Clone(f.Fitted), slices.Clone(f.Residual), slices.Clone(f.Leverage), f.RSS, f.DF, f.SD,
		slices.Clone(d.Y), slices.Clone(d.X()), slices.Clone(d.Group), slices.Clone(d.Groups), slices.Clone(d.Rows), slices.Clone(d.Subject), slices.Clone(d.Order),
		len(d.Predictors), len(d.Added), len(d.SetAside), f.IsTransformed(),
	}
}

// sameEstimates compares the slopes, where a figure that is not defined equals
// itself.
func sameEstimates(a, b model.Answers) bool {
	return fmt.Sprint(a.Slopes) == fmt.Sprint(b.Slopes) && (a.Difference == nil) == (b.Difference == nil) &&
		(a.Difference == nil || fmt.Sprint(*a.Difference) == fmt.Sprint(*b.Difference))
}
