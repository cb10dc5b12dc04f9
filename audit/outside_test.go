package audit_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"footing/audit"
	"footing/readers"
	"footing/rules/model"
)

// auditFile audits a file with the given roles.
func auditFile(t *testing.T, path string, roles model.Roles) *audit.Result {
	t.Helper()
	table, err := readers.Open(path, readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := audit.Table(table, audit.Request{Roles: roles, Settings: settings()})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// auditText audits a table given as CSV.
func auditText(t *testing.T, csv string, roles model.Roles) *audit.Result {
	t.Helper()
	table, err := readers.Read("table.csv", strings.NewReader(csv), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := audit.Table(table, audit.Request{Roles: roles, Settings: settings()})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func findingOf(t *testing.T, r *audit.Result, rule string) audit.Finding {
	t.Helper()
	for _, f := range r.Findings {
		if f.Rule == rule {
			return f
		}
	}
	t.Fatalf("no finding of %s", rule)
	return audit.Finding{}
}

// digits is the number of leading digits in which a figure agrees with its
// certified value, as NIST counts them: -log10 of the relative error.
func digits(got audit.Number, want float64) float64 {
	if float64(got) == want {
		return 16
	}
	if want == 0 {
		return -math.Log10(math.Abs(float64(got)))
	}
	return -math.Log10(math.Abs(float64(got)-want) / math.Abs(want))
}

// TestNIST holds the coefficients of linear regression to the certified values
// of the NIST Statistical Reference Datasets. Filip may be refused as collinear
// but never be wrong.
func TestNIST(t *testing.T) {
	raw, err := os.ReadFile("../testdata/reference/nist/certified.json")
	if err != nil {
		t.Fatal(err)
	}
	var certified map[string]struct {
		Coefficients []float64 `json:"coefficients"`
		ResidualSD   float64   `json:"residual_sd"`
		RSquared     float64   `json:"r_squared"`
	}
	if err := json.Unmarshal(raw, &certified); err != nil {
		t.Fatal(err)
	}
	least := map[string]float64{
		"Norris": 10, "Pontius": 10, "Longley": 9, "Wampler1": 8, "Wampler2": 10,
		"Wampler3": 8, "Wampler4": 7, "Wampler5": 6, "Filip": 6,
	}
	for name, want := range least {
		t.Run(name, func(t *testing.T) {
			c, ok := certified[name]
			if !ok {
				t.Fatal("no certified values")
			}
			var roles model.Roles
			roles.Response = "y"
			for k := range len(c.Coefficients) - 1 {
				roles.Predictors = append(roles.Predictors, fmt.Sprintf("x%d", k+1))
			}
			if len(roles.Predictors) == 1 {
				roles.Predictors[0] = "x"
			}
			r := auditFile(t, "../testdata/reference/nist/"+strings.ToLower(name)+".csv", roles)
			if name == "Filip" && findingOf(t, r, "collinearity").State == audit.Stop {
				if r.Slopes[0].Slope.Defined() {
					t.Error("refused, and yet a slope is given")
				}
				return
			}
			got := []audit.Number{r.Slopes[0].Intercept, r.Slopes[0].Slope}
			for _, term := range r.Model.CovariateTerms {
				got = append(got, term.Estimate)
			}
			worst := math.Inf(1)
			for k, w := range c.Coefficients {
				worst = min(worst, digits(got[k], w))
			}
			t.Logf("%.1f digits", worst)
			if worst < want {
				t.Errorf("%.1f digits agree, at least %.0f are needed: got %v, certified %v", worst, want, got, c.Coefficients)
			}
			if c.ResidualSD > 0 {
				agree(t, "residual SD", r.Model.ResidualSD, value(c.ResidualSD), 1e-8, 0)
				agree(t, "R²", r.Model.RSquared, value(c.RSquared), 1e-8, 0)
			} else if r.Model.ResidualSD != 0 {
				t.Errorf("residual SD %g of a perfect fit", r.Model.ResidualSD)
			}
		})
	}
}

// TestLoadCell is the load cell calibration of the NIST/SEMATECH e-Handbook of
// Statistical Methods, section 4.6.1, whose 40 rows are NIST's Pontius data: a
// straight line must be found wanting.
func TestLoadCell(t *testing.T) {
	r := auditFile(t, "../testdata/reference/nist/pontius.csv", model.Roles{Response: "y", Predictors: []string{"x1"}})
	// Exact arithmetic on those rows; the Handbook prints 0.0021712694 and
	// 214.7464, which are from memory here.
	agree(t, "residual SD of the line", r.Model.ResidualSD, 0.0021712726, 1e-7, 0)
	agree(t, "lack-of-fit F", figureOf(r, "linearity", "lack_of_fit_f"), 214.74692, 1e-7, 0)
	if f := findingOf(t, r, "linearity"); f.State != audit.Warn && f.State != audit.Stop {
		t.Errorf("linearity is %s: %s", f.State, f.Message)
	}
}

// TestAnscombe audits the four tables of Anscombe (1973, Am. Stat. 27:17), as
// R's datasets has them.
func TestAnscombe(t *testing.T) {
	table := func(k string) *audit.Result {
		return auditFile(t, "../testdata/reference/data/anscombe.csv", model.Roles{Response: "y" + k, Predictors: []string{"x" + k}})
	}
	if f := findingOf(t, table("1"), "linearity"); f.State != audit.Pass && f.State != audit.Thin { // eleven rows would rarely show a bend
		t.Errorf("I: linearity is %s", f.State)
	}
	if f := findingOf(t, table("2"), "linearity"); f.State != audit.Warn && f.State != audit.Stop {
		t.Errorf("II: linearity is %s", f.State)
	}
	f := findingOf(t, table("3"), "outliers")
	if (f.State != audit.Warn && f.State != audit.Stop) || len(f.Where) != 1 || *f.Where[0].Row != 4 { // data row 3, under a header
		t.Errorf("III: outliers is %s at %v", f.State, f.Where)
	}
	r := table("4")
	if f := findingOf(t, r, "leverage"); !strings.Contains(f.Message, "row 9 alone decides the slope") {
		t.Errorf("IV: %s", f.Message)
	}
	if r.Slopes[0].Standing != audit.DoNotQuote {
		t.Errorf("IV: the slope is %s", r.Slopes[0].Standing)
	}
}

// survey draws a table of n rows at two sites, as CSV rows without header.
func survey(n int, label func(i int) string, x, y func(i int) float64) []string {
	var rows []string
	for i := range n {
		rows = append(rows, fmt.Sprintf("%s,%.17g,%.17g", label(i), x(i), y(i)))
	}
	return rows
}

// TestInvariance holds the audit to what cannot matter: shifting and scaling
// the response or the predictor, the order of rows, the names of groups.
func TestInvariance(t *testing.T) {
	const n = 40
	site := func(i int) string { return []string{"exposed", "sheltered"}[i%2] }
	x := func(i int) float64 { return 8 + 12*math.Mod(float64(i)*0.618034, 1) }
	y := func(i int) float64 { return 9 - 0.3*x(i) + math.Sin(float64(i*i)) }
	ask := func(rows []string) *audit.Result {
		return auditText(t, "site,x,y\n"+strings.Join(rows, "\n")+"\n", model.Roles{Response: "y", Predictors: []string{"x"}, Group: "site"})
	}
	start := ask(survey(n, site, x, y))
	shuffled := survey(n, site, x, y)
	slices.Reverse(shuffled)
	cases := []struct {
		name    string
		result  *audit.Result
		slope   float64 // factor of the slopes
		swapped bool    // the groups' byte order turns round
		redrawn bool    // other deviates fall to the rows: simulated p agree up to chance
	}{
		{"response shifted and scaled", ask(survey(n, site, x, func(i int) float64 { return 100 - 7*y(i) })), -7, false, false},
		{"predictor shifted and scaled", ask(survey(n, site, func(i int) float64 { return 32 + 1.8*x(i) }, y)), 1 / 1.8, false, false},
		{"rows reversed", ask(shuffled), 1, false, true},
		{"groups renamed", ask(survey(n, func(i int) string { return []string{"b", "a"}[i%2] }, x, y)), 1, true, true},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			got := slices.Clone(c.result.Slopes)
			if c.swapped {
				slices.Reverse(got)
			}
			for k, want := range start.Slopes {
				agree(t, "slope", got[k].Slope, value(float64(want.Slope)*c.slope), 1e-9, 0)
				agree(t, "p", got[k].P, value(want.P), 1e-9, 0)
			}
			agree(t, "p of the difference", c.result.Difference.P, value(start.Difference.P), 1e-9, 0)
			for _, want := range start.Findings {
				f := findingOf(t, c.result, want.Rule)
				if want.PJoint.Defined() && !c.redrawn {
					agree(t, f.Rule+" p_joint", f.PJoint, value(want.PJoint), 1e-8, 0)
				}
				if want.PSimulated.Defined() && c.redrawn {
					p := float64(want.PSimulated)
					agree(t, f.Rule+" p_simulated", f.PSimulated, value(p), 4*math.Sqrt(2*p*(1-p)/1999), 1)
				}
				if f.State != want.State && !(c.redrawn && f.ByPower != want.ByPower) {
					t.Errorf("%s: %s, was %s", f.Rule, f.State, want.State)
				}
			}
			if c.redrawn {
				return
			}
			if c.result.Verdict.State != start.Verdict.State {
				t.Errorf("verdict %s, was %s", c.result.Verdict.State, start.Verdict.State)
			}
		})
	}
}
