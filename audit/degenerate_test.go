package audit_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"footing/audit"
	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
)

// chances are the rules whose alarms could be chance.
func chances() []string {
	var names []string
	for _, r := range rules.All {
		if r.Chance != nil {
			names = append(names, r.Name)
		}
	}
	return names
}

// heldToState expects a state of every rule that could alarm by chance and was
// not skipped for want of a role; words is part of each message.
func heldToState(t *testing.T, r *audit.Result, state audit.State, words string) {
	t.Helper()
	asked := 0
	for _, name := range chances() {
		f := findingOf(t, r, name)
		if f.State == audit.Skip && (strings.Contains(f.Message, "--order") || strings.Contains(f.Message, "--subject")) {
			continue
		}
		asked++
		if f.State != state || !strings.Contains(f.Message, words) {
			t.Errorf("%s is %s, want %s with %q: %s", name, f.State, state, words, f.Message)
		}
	}
	if asked < 3 {
		t.Errorf("only %d rules were asked", asked)
	}
}

var plainLine = model.Roles{Response: "y", Predictors: []string{"x"}}

func TestNoFreedomLeft(t *testing.T) {
	r := auditText(t, "x,y\n1,2\n2,5\n", plainLine)
	heldToState(t, r, audit.Skip, "")
	if f := findingOf(t, r, "sample-size"); f.State != audit.Stop || !strings.Contains(f.Message, "2 rows") {
		t.Errorf("sample-size is %s: %s", f.State, f.Message)
	}
	if r.Slopes[0].Standing != audit.DoNotQuote || r.Slopes[0].SE.Defined() {
		t.Errorf("the slope is %s with standard error %v", r.Slopes[0].Standing, r.Slopes[0].SE)
	}
}

// TestOneDegreeOfFreedom: the residuals then have one direction and can say
// nothing of their shape.
func TestOneDegreeOfFreedom(t *testing.T) {
	r := auditText(t, "x,y\n1,2\n2,5\n3,6\n", plainLine)
	if r.Model.ResidualDF != 1 {
		t.Fatalf("%d degrees of freedom", r.Model.ResidualDF)
	}
	heldToState(t, r, audit.Skip, "")
}

// TestFewDegreesOfFreedom: simulated as ever, and a pass is thin whatever its
// power.
func TestFewDegreesOfFreedom(t *testing.T) {
	for df := 2; df <= 4; df++ {
		var b strings.Builder
		b.WriteString("x,y\n")
		for i := range df + 2 {
			fmt.Fprintf(&b, "%d,%d\n", i, []int{3, 5, 6, 10, 11, 14}[i])
		}
		r := auditText(t, b.String(), plainLine)
		if r.Model.ResidualDF != df {
			t.Fatalf("%d degrees of freedom, want %d", r.Model.ResidualDF, df)
		}
		for _, name := range []string{"linearity", "normality", "constant-variance", "outliers", "influence"} {
			f := findingOf(t, r, name)
			if f.State != audit.Thin || !f.PSimulated.Defined() {
				t.Errorf("df %d: %s is %s with simulated p %v: %s", df, name, f.State, f.PSimulated, f.Message)
			}
		}
		if r.Verdict.State != audit.Tentative {
			t.Errorf("df %d: the verdict is %s", df, r.Verdict.State)
		}
	}
}

// TestNoScatter: a computed response, and a constant one.
func TestNoScatter(t *testing.T) {
	for name, csv := range map[string]string{
		"a computed response":           "x,y\n1,2.3\n2,4.3\n3,6.3\n4,8.3\n5,10.3\n6,12.3\n",
		"a computed response far off 0": "x,y\n1,1e9\n2,1000000002\n3,1000000004\n4,1000000006\n5,1000000008\n",
		"a constant response":           "x,y\n1,2\n2,2\n3,2\n4,2\n5,2\n",
	} {
		t.Run(name, func(t *testing.T) {
			r := auditText(t, csv, plainLine)
			heldToState(t, r, audit.Skip, "no scatter to judge from")
			f := findingOf(t, r, "sample-size")
			if f.State != audit.Stop || !strings.Contains(f.Message, "no scatter") {
				t.Errorf("sample-size is %s: %s", f.State, f.Message)
			}
			if r.Verdict.State != audit.Unsound || r.Slopes[0].Standing != audit.DoNotQuote {
				t.Errorf("verdict %s, slope %s", r.Verdict.State, r.Slopes[0].Standing)
			}
		})
	}
}

// TestLeverageOne: the row is out of outliers and influence, whatever is written
// in it, and HC3 has nothing to say of the slope that it enters.
func TestLeverageOne(t *testing.T) {
	at := func(y string) *audit.Result {
		var b strings.Builder
		b.WriteString("x,y\n")
		for i := range 12 {
			fmt.Fprintf(&b, "8,%d.%d\n", 5+(i*7)%4, (i*3)%10)
		}
		fmt.Fprintf(&b, "19,%s\n", y)
		return auditText(t, b.String(), plainLine)
	}
	near, far := at("8"), at("8000")
	if near.Slopes[0].HC3SE.Defined() {
		t.Error("HC3 gives the slope a standard error")
	}
	for _, name := range chances() {
		a, b := findingOf(t, near, name), findingOf(t, far, name)
		if a.State != b.State || (a.PSimulated.Defined() && math.Abs(float64(a.PSimulated-b.PSimulated)) > 1e-12) {
			t.Errorf("%s: %s with p %v, and %s with p %v when the row reads 8000", name, a.State, a.PSimulated, b.State, b.PSimulated)
		}
	}
	if f := findingOf(t, far, "outliers"); f.State == audit.Skip {
		t.Errorf("the other rows are not asked: %s", f.Message)
	}
	if far.Slopes[0].Standing != audit.DoNotQuote {
		t.Errorf("the slope is %s", far.Slopes[0].Standing)
	}
}

// TestGroupWithoutASlope keeps its level; the slopes of the others and their
// difference are answered.
func TestGroupWithoutASlope(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 9))
	for name, x := range map[string]func(i int) float64{
		"one distinct value": func(int) float64 { return 4 },
		"one row":            func(i int) float64 { return float64(i) },
	} {
		t.Run(name, func(t *testing.T) {
			var b strings.Builder
			b.WriteString("g,x,y\n")
			for i := range 12 {
				for _, g := range []string{"a", "b"} {
					fmt.Fprintf(&b, "%s,%d,%.4f\n", g, i, 2+float64(i)+random.NormFloat64())
				}
			}
			rows := 6
			if name == "one row" {
				rows = 1
			}
			for i := range rows {
				fmt.Fprintf(&b, "c,%g,%.4f\n", x(i), 7+random.NormFloat64())
			}
			r := auditText(t, b.String(), model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"})
			if len(r.Slopes) != 3 || r.Slopes[2].Slope.Defined() || r.Slopes[2].Standing != audit.DoNotQuote {
				t.Fatalf("slopes %+v", r.Slopes)
			}
			if !r.Slopes[0].CI[0].Defined() || r.Slopes[0].Standing == audit.DoNotQuote {
				t.Errorf("the slope of a is %s", r.Slopes[0].Standing)
			}
			if r.Difference == nil || len(r.Difference.Pairs) != 1 || r.Difference.Pairs[0].Between != [2]string{"a", "b"} {
				t.Errorf("the difference is %+v", r.Difference)
			}
			if r.Model.RowsUsed != 24+rows || r.Model.Parameters != 5 {
				t.Errorf("%d rows and %d parameters", r.Model.RowsUsed, r.Model.Parameters)
			}
			if f := findingOf(t, r, "sample-size"); f.State != audit.Stop || !strings.Contains(f.Message, "c") {
				t.Errorf("sample-size is %s: %s", f.State, f.Message)
			}
		})
	}
}

// TestNoSlopeAtAll: the predictor does not vary.
func TestNoSlopeAtAll(t *testing.T) {
	r := auditText(t, "x,y\n4,2\n4,5\n4,6\n4,4\n4,7\n", plainLine)
	if r.Slopes[0].Slope.Defined() || r.Slopes[0].Standing != audit.DoNotQuote || r.Verdict.State != audit.Unsound {
		t.Errorf("slope %+v, verdict %s", r.Slopes[0], r.Verdict.State)
	}
}

// TestConstantStatistic: with two means of two rows each the squared residuals
// are the same within a group, so that the score of unequal scatter is n
// whatever was measured.
func TestConstantStatistic(t *testing.T) {
	r := auditText(t, "g,y\na,1.137\na,2.291\nb,4.618\nb,9.343\n", model.Roles{Response: "y", Group: "g"})
	f := findingOf(t, r, "constant-variance")
	if f.State != audit.Thin || f.PSimulated != 1 || f.Power != 0 || !strings.Contains(f.Message, "cannot be asked of so few rows") {
		t.Errorf("%s with p %v and power %v: %s", f.State, f.PSimulated, f.Power, f.Message)
	}
}

// TestCoarseResponse: a response in steps of one SD about a level line looks far
// from normal by the textbook in most tables, and in no more than a few against
// tables rounded likewise.
func TestCoarseResponse(t *testing.T) {
	const tables = 60
	random := rand.New(rand.NewPCG(10, 10))
	textbook, alarms := 0, 0
	for k := range tables {
		var b strings.Builder
		b.WriteString("x,y\n")
		start := random.Float64()
		for range 80 {
			fmt.Fprintf(&b, "%.4f,%.0f\n", random.Float64(), math.Round(20+start+random.NormFloat64()))
		}
		table, err := readers.Read("table.csv", strings.NewReader(b.String()), readers.Options{})
		if err != nil {
			t.Fatal(err)
		}
		p := passOf(t, table, plainLine)
		p.Settings.Replicates, p.Settings.Seed = 199, uint64(k)
		joint := calibrate.Judge([]*rules.Rule{rules.Normality}, p, calibrate.Options{})[rules.Normality.Name]
		if joint.First().P <= 0.05 {
			textbook++
		}
		if joint.P <= 0.05 {
			alarms++
		}
	}
	if textbook < tables/4 {
		t.Errorf("the textbook alarms in %d of %d tables only: the step is not coarse", textbook, tables)
	}
	// Near, and no longer exact, since the scatter before rounding is estimated:
	// at most 7 in 100, and three standard errors of so few tables.
	if most := 0.07 + 3*math.Sqrt(0.07*0.93/tables); float64(alarms)/tables > most {
		t.Errorf("%d alarms in %d tables", alarms, tables)
	}
}

// TestLargeTable: no null is drawn, W is told up to 5,000 rows only, and the
// remedies of thousands of refits are left out.
func TestLargeTable(t *testing.T) {
	if testing.Short() {
		t.Skip("6,000 rows")
	}
	random := rand.New(rand.NewPCG(12, 12))
	var b strings.Builder
	b.WriteString("x,y\n")
	for range 6000 {
		x := random.Float64()
		fmt.Fprintf(&b, "%.6f,%.6f\n", x, 1+x+(0.3+2*x)*random.NormFloat64())
	}
	r := auditText(t, b.String(), plainLine)
	if r.Calibration.Method != "formulas" || r.Calibration.Replicates != 0 {
		t.Errorf("calibrated by %s with %d tables", r.Calibration.Method, r.Calibration.Replicates)
	}
	f := findingOf(t, r, "normality")
	if w := f.Evidence["shapiro_wilk_w"].(audit.Number); w.Defined() || f.PSimulated.Defined() || !f.PJoint.Defined() {
		t.Errorf("W %v, simulated p %v, joint p %v", w, f.PSimulated, f.PJoint)
	}
	f = findingOf(t, r, "constant-variance")
	if f.State != audit.Warn && f.State != audit.Stop {
		t.Fatalf("a sevenfold fan is %s: %s", f.State, f.Message)
	}
	for _, remedy := range f.Remedies {
		if remedy.Remedy == "wild-bootstrap" && (remedy.Tried || !strings.Contains(*remedy.Why, "robust-errors")) {
			t.Errorf("wild-bootstrap is tried: %v", remedy.Why)
		}
	}
}

// TestDegenerateTables gives a true sentence and no NaN, whatever the table.
func TestDegenerateTables(t *testing.T) {
	line := model.Roles{Response: "y", Predictors: []string{"x"}}
	grouped := model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"}
	means := model.Roles{Response: "y", Group: "g"}
	cases := []struct {
		name, csv string
		roles     model.Roles
		rule      string
		state     audit.State
	}{
		{"one row", "x,y\n1,2\n", line, "sample-size", audit.Stop},
		{"two rows", "x,y\n1,2\n2,5\n", line, "sample-size", audit.Stop},
		{"a perfect line", "x,y\n1,2\n2,4\n3,6\n4,8\n", line, "sample-size", audit.Stop},
		{"a constant response", "x,y\n1,2\n2,2\n3,2\n4,2\n", line, "constant-column", audit.Stop},
		{"a constant predictor", "x,y\n1,2\n1,3\n1,5\n1,4\n", line, "constant-column", audit.Stop},
		{"nothing but gaps", "x,y\n1,\n,3\n2,\n,5\n", line, "sample-size", audit.Stop},
		{"more parameters than rows", "g,x,y\na,1,2\na,2,3\nb,1,5\nb,3,4\nc,1,2\n", grouped, "sample-size", audit.Stop},
		{"a group of one row", "g,x,y\na,1,2\na,2,3.5\na,3,4\na,4,6\na,5,6\na,6,8\na,7,9\nb,3,4\n", grouped, "sample-size", audit.Stop},
		{"one group", "g,x,y\na,1,2\na,2,3.5\na,3,4\na,4,6\na,5,6\na,6,8\na,7,9\n", grouped, "group-balance", audit.Skip},
		{"one x and one other row", "x,y\n8,6.58\n8,5.76\n8,7.71\n8,8.84\n8,8.47\n19,12.5\n", line, "leverage", audit.Warn},
		{"means of two", "g,y\na,1\na,2\nb,4\nb,6\n", means, "sample-size", audit.Thin},
		{"means of one group", "g,y\na,1\na,2\na,4\na,6\n", means, "group-balance", audit.Skip},
		{"copies of a predictor", "x,z,y\n1,2,1\n2,4,3\n3,6,2\n4,8,5\n5,10,4\n6,12,7\n", model.Roles{Response: "y", Predictors: []string{"x", "z"}}, "collinearity", audit.Stop},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			r := auditText(t, c.csv, c.roles)
			if f := findingOf(t, r, c.rule); f.State != c.state {
				t.Errorf("%s is %s, want %s: %s", c.rule, f.State, c.state, f.Message)
			}
			raw, err := json.Marshal(r)
			if err != nil {
				t.Fatal(err)
			}
			for _, word := range []string{"NaN", "Inf", "undefined"} {
				if strings.Contains(string(raw), word) {
					t.Errorf("the result holds %q: %s", word, raw)
				}
			}
			if c.state == audit.Stop && r.Verdict.State != audit.Unsound {
				t.Errorf("verdict %s", r.Verdict.State)
			}
			if c.state == audit.Stop && len(r.Verdict.DoNotQuote) == 0 {
				t.Error("nothing is kept from being quoted")
			}
		})
	}
}
