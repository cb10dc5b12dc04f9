package model

import (
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// drawnTable is a table of random numbers as CSV records, so that rows can be
// dropped from it by hand.
type drawnTable struct {
	rows  []string
	roles Roles
}

const drawnHeader = "site,pot,no,x,z,kind,y\n"

// drawTable draws groups, x, a numeric and a label covariate, subjects and an
// order, with some of them in no role. Answers of three groups are slow.
func drawTable(t *rapid.T, most int) drawnTable {
	random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
	groups := rapid.IntRange(1, most).Draw(t, "groups")
	n := groups*rapid.IntRange(6, 9).Draw(t, "rows of a group") + 2
	var d drawnTable
	for i := range n {
		x := 10 * random.Float64()
		if rapid.Bool().Draw(t, "x is whole") {
			x = math.Round(x)
		}
		y := 20 + float64(i%groups) + x*(1+0.3*float64(i%groups)) + random.NormFloat64()
		d.rows = append(d.rows, fmt.Sprintf("%c,pot%d,%d,%.17g,%.17g,%c,%.17g", 'a'+i%groups, i/3, random.IntN(n), x, random.NormFloat64(), 'p'+i%2, y))
	}
	d.roles = Roles{Response: "y", Predictors: []string{"x"}, Subject: "pot", Order: "no"}
	if groups > 1 {
		d.roles.Group = "site"
		d.roles.CommonSlope = rapid.IntRange(0, 3).Draw(t, "common slope") == 0
	}
	if rapid.Bool().Draw(t, "a further predictor") {
		d.roles.Predictors = append(d.roles.Predictors, "z")
	}
	if rapid.Bool().Draw(t, "a label covariate") {
		d.roles.Covariates = []string{"kind"}
	}
	return d
}

// fitter is what both kinds of test have.
type fitter interface {
	Helper()
	Fatal(args ...any)
}

// fit fits the table without the given rows, or reports that it has no fit.
func (d drawnTable) fit(t *testing.T, without ...int) (*Fit, bool) {
	t.Helper()
	var kept []string
	for i, row := range d.rows {
		if !slices.Contains(without, i) {
			kept = append(kept, row)
		}
	}
	table := tableOf(t, drawnHeader+strings.Join(kept, "\n")+"\n")
	columns, err := Resolve(table, d.roles)
	if err != nil {
		t.Fatal(err)
	}
	f, err := NewFit(NewDesign(table, columns, d.roles.CommonSlope))
	return f, err == nil && f.HasScatter()
}

// snapshot copies all that runs over the rows of a design.
func snapshot(d *Design) map[string]any {
	predictors := make([][]float64, len(d.Predictors))
	for k, v := range d.Predictors {
		predictors[k] = slices.Clone(v)
	}
	covariates := slices.Clone(d.Covariates)
	for k := range covariates {
		covariates[k].Number, covariates[k].Code, covariates[k].Levels = slices.Clone(covariates[k].Number), slices.Clone(covariates[k].Code), slices.Clone(covariates[k].Levels)
	}
	added := slices.Clone(d.Added)
	for k := range added {
		added[k].Values = slices.Clone(added[k].Values)
	}
	return map[string]any{
		"rows": slices.Clone(d.Rows), "set aside": slices.Clone(d.SetAside), "y": slices.Clone(d.Y), "predictors": predictors, "covariates": covariates,
		"group": slices.Clone(d.Group), "groups": slices.Clone(d.Groups), "subject": slices.Clone(d.Subject), "subjects": slices.Clone(d.Subjects),
		"order": slices.Clone(d.Order), "columns": d.Columns, "predictor columns": slices.Clone(d.Columns.Predictors), "covariate columns": slices.Clone(d.Columns.Covariates),
		"common": d.CommonSlope, "added": added, "scale": d.scale, "lost": d.lostDF, "transformed": d.transform != nil,
	}
}

// edits are all that a remedy may do to a design.
func edits(d *Design) map[string]func() *Design {
	variance := make([]float64, d.N())
	for i := range variance {
		variance[i] = 1 + float64(i)
	}
	rows, _ := d.Sequence()
	all := map[string]func() *Design{
		"without":       func() *Design { return d.Without([]int{1, 3}, "left out") },
		"relabelled":    func() *Design { return d.Relabelled(map[string]string{"b": "a"}) },
		"with":          func() *Design { return d.With("order", d.OrderRank()) },
		"log":           func() *Design { return d.OnLogScale() },
		"variances":     func() *Design { return d.WithVariances(variance) },
		"serial errors": func() *Design { return d.WithSerialErrors(0.4, rows) },
	}
	if len(d.Predictors) > 1 || len(d.Covariates) > 0 {
		all["leaving out"] = func() *Design { return d.LeavingOut(0) }
	}
	return all
}

func TestEditsChangeNothingOfTheReceiver(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 3).fit(t)
		if !ok {
			rt.Skip()
		}
		d := f.Design
		before, coef, residual := snapshot(d), slices.Clone(f.Coef), slices.Clone(f.Residual)
		for name, edit := range edits(d) {
			out := edit()
			if fit, err := NewFit(out); err == nil {
				fit.Diagnostics()
			}
			if out == d {
				rt.Fatalf("%s gives the receiver itself", name)
			}
			// What the edit returns must not share memory that a later edit writes.
			edited := snapshot(out)
			for other, again := range edits(out) {
				if edited["transformed"] == true && other == "without" {
					continue // refused: what was done to the rows is not known of fewer
				}
				again()
			}
			if !reflect.DeepEqual(edited, snapshot(out)) {
				rt.Fatalf("a further edit changes what %s returned", name)
			}
			if !reflect.DeepEqual(before, snapshot(d)) {
				rt.Fatalf("%s changes the receiver", name)
			}
		}
		if !slices.Equal(coef, f.Coef) || !slices.Equal(residual, f.Residual) {
			rt.Fatal("the fit has changed")
		}
		if again, _ := NewFit(d); !slices.Equal(coef, again.Coef) {
			rt.Fatal("the design fits otherwise than before")
		}
	})
}

// near compares to a relative tolerance of 1e-9: both sides are least-squares
// fits of well-conditioned designs.
func near(t fitter, what string, got, want float64) {
	t.Helper()
	if math.IsNaN(got) && math.IsNaN(want) {
		return
	}
	if !(math.Abs(got-want) <= 1e-9*(1+math.Abs(want))) {
		t.Fatal(fmt.Sprintf("%s: %.15g, want %.15g", what, got, want))
	}
}

// sameAnswers compares every figure of the answers.
func sameAnswers(t fitter, got, want Answers) {
	t.Helper()
	if len(got.Slopes) != len(want.Slopes) || (got.Difference == nil) != (want.Difference == nil) {
		t.Fatal("other answers are given")
	}
	for k, w := range want.Slopes {
		g := got.Slopes[k]
		if g.Group != w.Group || g.Rows != w.Rows || g.Exists != w.Exists {
			t.Fatal(fmt.Sprintf("slope %d is %+v, want %+v", k, g, w))
		}
		for name, of := range map[string]func(Estimate) float64{
			"slope": func(e Estimate) float64 { return e.Value }, "intercept": func(e Estimate) float64 { return e.Intercept },
			"se": func(e Estimate) float64 { return e.SE }, "df": func(e Estimate) float64 { return e.DF }, "p": func(e Estimate) float64 { return e.P },
			"low": func(e Estimate) float64 { return e.Low }, "high": func(e Estimate) float64 { return e.High },
			"R²": func(e Estimate) float64 { return e.RSquared }, "pooled se": func(e Estimate) float64 { return e.PooledSE }, "HC3": func(e Estimate) float64 { return e.HC3 },
		} {
			near(t, name, of(g), of(w))
		}
	}
	if want.Difference == nil {
		return
	}
	near(t, "F", got.Difference.F, want.Difference.F)
	near(t, "p of F", got.Difference.P, want.Difference.P)
	for k, w := range want.Difference.Pairs {
		near(t, "pair", got.Difference.Pairs[k].Value, w.Value)
		near(t, "pair se", got.Difference.Pairs[k].SE, w.SE)
	}
}

// TestWithoutIsTheTableWithoutThoseRows compares an edit with a table from which
// the lines were struck.
func TestWithoutIsTheTableWithoutThoseRows(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		table := drawTable(rt, 2)
		f, ok := table.fit(t)
		rows := rapid.SliceOfNDistinct(rapid.IntRange(0, len(table.rows)-1), 1, 4, rapid.ID[int]).Draw(rt, "left out")
		struck, okToo := table.fit(t, rows...)
		if !ok || !okToo {
			rt.Skip()
		}
		d := f.Design.Without(rows, "left out")
		got, err := NewFit(d)
		if err != nil {
			rt.Fatal(err)
		}
		sameAnswers(rt, got.Answers(0.95), struck.Answers(0.95))
		r1, mean := got.LagOne()
		wantR1, wantMean := struck.LagOne()
		near(rt, "r1", r1, wantR1)
		near(rt, "mean of r1", mean, wantMean)
		if len(d.SetAside) != len(rows) || d.N() != len(table.rows)-len(rows) {
			rt.Fatalf("%d rows are used and %d set aside", d.N(), len(d.SetAside))
		}
	})
}

// TestEditsAddUp carries out two edits in both orders.
func TestEditsAddUp(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 2).fit(t)
		if !ok {
			rt.Skip()
		}
		d := f.Design
		column := make([]float64, d.N())
		for i, x := range d.X() {
			column[i] = x * x
		}
		rows := []int{0, 4}
		kept := picked(column, slices.DeleteFunc(sequence(d.N()), func(i int) bool { return slices.Contains(rows, i) }))
		one, err1 := NewFit(d.OnLogScale().With("square", column).Without(rows, "left out"))
		two, err2 := NewFit(d.Without(rows, "left out").With("square", kept).OnLogScale())
		if err1 != nil || err2 != nil {
			rt.Skip()
		}
		sameAnswers(rt, one.Answers(0.95), two.Answers(0.95))
		if one.Answers(0.95).Scale != "log" {
			rt.Fatal("the logarithm is lost")
		}
	})
}

func sequence(n int) []int {
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	return all
}

func TestRelabelledMergesGroups(t *testing.T) {
	f, ok := (drawnTable{
		rows:  []string{"a,p,1,1,0,p,2", "A,p,2,2,0,p,4", "a,p,3,3,0,p,5", "b,p,4,1,0,p,9", "b,p,5,2,0,p,7", "b,p,6,4,0,p,8", "A,p,7,5,0,p,9"},
		roles: Roles{Response: "y", Predictors: []string{"x"}, Group: "site"},
	}).fit(t)
	if !ok {
		t.Fatal("no fit")
	}
	d := f.Design.Relabelled(map[string]string{"A": "a"})
	if !slices.Equal(d.Groups, []string{"a", "b"}) || !slices.Equal(d.Group, []int{0, 0, 0, 1, 1, 1, 0}) {
		t.Errorf("groups %v, codes %v", d.Groups, d.Group)
	}
	// Rows set aside afterwards must not bring the old label back.
	if without := d.Without([]int{0}, "left out"); !slices.Equal(without.Groups, []string{"a", "b"}) {
		t.Errorf("groups %v after another edit", without.Groups)
	}
}

// TestTransformedRows: equal variances change no answer, nor does a correlation
// of 0, which yet costs the degree of freedom that it was estimated with.
func TestTransformedRows(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 3).fit(t)
		if !ok {
			rt.Skip()
		}
		d := f.Design
		same, err := NewFit(d.WithVariances(slices.Repeat([]float64{4}, d.N())))
		if err != nil {
			rt.Fatal(err)
		}
		rows, _ := d.Sequence()
		serial, err := NewFit(d.WithSerialErrors(0, rows))
		if err != nil {
			rt.Fatal(err)
		}
		for k := range f.Coef {
			near(rt, "coefficient", same.Coef[k], f.Coef[k])
			near(rt, "coefficient", serial.Coef[k], f.Coef[k])
		}
		near(rt, "RSS by equal variances", 4*same.RSS, f.RSS)
		near(rt, "RSS without correlation", serial.RSS, f.RSS)
		if serial.DF != f.DF-1 || same.DF != f.DF {
			rt.Fatalf("%d and %d degrees of freedom of %d", serial.DF, same.DF, f.DF)
		}
		// Doubled weight is doubled rows, for the estimates.
		variance := slices.Repeat([]float64{1}, d.N())
		variance[2] = 0.5
		weighted, err := NewFit(d.WithVariances(variance))
		if err != nil {
			rt.Fatal(err)
		}
		rss := 0.0
		for i, y := range d.Y {
			rss += (y - weighted.Fitted[i]) * (y - weighted.Fitted[i]) / variance[i]
		}
		near(rt, "weighted RSS", weighted.RSS, rss)
		if unweighted := squared(d.Y, f.Fitted, variance); rss > unweighted*(1+1e-12) {
			rt.Fatalf("the weighted fit leaves %v, the plain one %v", rss, unweighted)
		}
	})
}

func squared(y, fitted, variance []float64) float64 {
	sum := 0.0
	for i := range y {
		sum += (y[i] - fitted[i]) * (y[i] - fitted[i]) / variance[i]
	}
	return sum
}

func TestSequenceAndRank(t *testing.T) {
	nan := math.NaN()
	d := &Design{Rows: sequence(6), Y: make([]float64, 6), Order: []float64{3, 1, nan, 3, 2, 1}}
	rows, pairs := d.Sequence()
	if !slices.Equal(rows, []int{1, 5, 4, 0, 3}) {
		t.Errorf("sequence %v", rows)
	}
	if len(pairs) != 4 || pairs[0] != [2]int{1, 5} || pairs[3] != [2]int{0, 3} {
		t.Errorf("neighbours %v", pairs)
	}
	// Ranks 4.5, 1.5, none, 4.5, 3, 1.5 about their mean of 3.
	if rank := d.OrderRank(); !slices.Equal(rank, []float64{1.5, -1.5, 0, 1.5, 0, -1.5}) {
		t.Errorf("ranks %v", rank)
	}
	d.Subject = []int{1, 0, 0, 0, 1, -1}
	rows, pairs = d.Sequence()
	if !slices.Equal(rows, []int{1, 3, 4, 0}) {
		t.Errorf("sequence within subjects %v", rows)
	}
	if want := [][2]int{{1, 3}, {4, 0}}; !slices.Equal(pairs, want) {
		t.Errorf("neighbours within subjects %v, want %v", pairs, want)
	}
}

// TestMeanOfLagOne holds the null mean of r1 to its definition: the sum over the
// pairs of the entries of I - QQ', over the degrees of freedom.
func TestMeanOfLagOne(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 3).fit(t)
		if !ok {
			rt.Skip()
		}
		_, pairs := f.Design.Sequence()
		trace := 0.0
		for _, pair := range pairs {
			unit, left := make([]float64, f.N()), make([]float64, f.N())
			unit[pair[0]] = 1
			f.Basis.Residual(left, unit)
			trace += left[pair[1]]
		}
		_, mean := f.LagOne()
		near(rt, "mean", mean, trace/float64(f.DF))
	})
}
