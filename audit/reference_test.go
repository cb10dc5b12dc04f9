package audit_test

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"footing/audit"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
)

// reference is one case of testdata/reference/expected.json, which base R made
// by testdata/reference/make.R. Null is NaN.
type reference struct {
	Data            string     `json:"data"`
	Response        string     `json:"response"`
	Predictor       *string    `json:"predictor"`
	Covariates      []string   `json:"covariates"`
	Group           *string    `json:"group"`
	Subject         *string    `json:"subject"`
	CommonSlope     bool       `json:"common_slope"`
	RowsUsed        int        `json:"rows_used"`
	Parameters      int        `json:"parameters"`
	ResidualDF      int        `json:"residual_df"`
	ResidualSD      value      `json:"residual_sd"`
	RSquared        value      `json:"r_squared"`
	AdjRSquared     value      `json:"adjusted_r_squared"`
	SizeRatio       value      `json:"size_ratio"`
	Slopes          []refSlope `json:"slopes"`
	Means           []refMean  `json:"means"`
	Difference      *refDiff   `json:"difference"`
	EqualMeans      *refDiff   `json:"equal_means"`
	Intercepts      []refLevel `json:"intercepts"` // of the groups, under one common slope
	CovariateTerms  []refTerm  `json:"covariate_terms"`
	Shapiro         *refStat   `json:"shapiro"`
	Koenker         *refStat   `json:"koenker"`
	BrownForsythe   *refStat   `json:"brown_forsythe"`
	Reset           *refStat   `json:"reset"`
	Quadratic       *refStat   `json:"quadratic_per_group"`
	Outlier         *refStat   `json:"outlier"`
	LargestLeverage *refStat   `json:"largest_leverage"`
	LargestCook     *refStat   `json:"largest_cook"`
	Overlap         *struct {
		ShareInside value `json:"share_inside"`
	} `json:"overlap"`
	VIF       map[string]value `json:"vif"`
	Condition value            `json:"condition_scaled_with_intercept"`
	Subjects  *struct {
		ICC value `json:"icc"`
		F   value `json:"f"`
	} `json:"subjects"`
	Rows *struct {
		Row      []int              `json:"row"`
		Fitted   []value            `json:"fitted"`
		Residual []value            `json:"residual"`
		Leverage []value            `json:"leverage"`
		Internal []value            `json:"internally_studentized"`
		External []value            `json:"externally_studentized"`
		Cook     []value            `json:"cook"`
		DFBETAS  map[string][]value `json:"dfbetas"`
	} `json:"rows"`
}

type refSlope struct {
	Group     *string `json:"group"`
	Rows      int     `json:"rows"`
	Slope     value   `json:"slope"`
	Intercept value   `json:"intercept"`
	SE        value   `json:"se"`
	DF        value   `json:"df"`
	T         value   `json:"t"`
	P         value   `json:"p"`
	Low       value   `json:"ci_low"`
	High      value   `json:"ci_high"`
	HC3       value   `json:"hc3_se"`
	Own       *struct {
		SE, DF, T, P value
		Low          value `json:"ci_low"`
		High         value `json:"ci_high"`
		RSquared     value `json:"r_squared"`
	} `json:"own_line"`
}

type refMean struct {
	Group string `json:"group"`
	Rows  int    `json:"rows"`
	Mean  value  `json:"mean"`
	SE    value  `json:"se"`
	DF    value  `json:"df"`
	Low   value  `json:"ci_low"`
	High  value  `json:"ci_high"`
}

type refDiff struct {
	F     value `json:"f"`
	DF1   value `json:"df1"`
	DF2   value `json:"df2"`
	P     value `json:"p"`
	Pairs []struct {
		First, Second  string
		Difference, SE value
		T, P           value
		Tukey          value `json:"p_tukey"`
		TukeyLow       value `json:"tukey_low"`
		TukeyHigh      value `json:"tukey_high"`
		Holm           value `json:"p_holm"`
	} `json:"pairs"`
}

// refLevel is a group's intercept under one common slope.
type refLevel struct {
	Group     string `json:"group"`
	Intercept value  `json:"intercept"`
}

type refTerm struct {
	Name     string  `json:"name"`
	Level    *string `json:"level"`
	Estimate value   `json:"estimate"`
	SE       value   `json:"se"`
	HC3      value   `json:"hc3_se"`
}

type refStat struct {
	F, LM, W, T, P, Value value
	Bonferroni            value `json:"p_bonferroni"`
}

// value is a figure of the reference; null is NaN.
type value float64

func (v *value) UnmarshalJSON(b []byte) error {
	if string(b) == "null" {
		*v = value(math.NaN())
		return nil
	}
	return json.Unmarshal(b, (*float64)(v))
}

// agree compares to a relative tolerance. Figures that are zero in exact
// arithmetic are compared to 1e-8 of the scale.
func agree(t *testing.T, what string, got audit.Number, want value, tolerance, scale float64) {
	t.Helper()
	g, w := float64(got), float64(want)
	if math.IsNaN(g) && math.IsNaN(w) {
		return
	}
	if !(math.Abs(g-w) <= tolerance*max(math.Abs(w), scale)) {
		t.Errorf("%s: got %.17g, want %.17g (relative difference %.2g)", what, g, w, math.Abs(g-w)/math.Abs(w))
	}
}

// tight is the tolerance of every figure but Shapiro and Wilk's.
const tight = 1e-8

// TestBaseR compares every figure of the result with base R 4.2.2 on open data
// sets.
func TestBaseR(t *testing.T) {
	var file struct {
		Cases map[string]reference `json:"cases"`
	}
	raw, err := os.ReadFile("../testdata/reference/expected.json")
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Cases) < 20 {
		t.Fatalf("only %d cases", len(file.Cases))
	}
	for name, want := range file.Cases {
		t.Run(name, func(t *testing.T) {
			got := auditReference(t, want)
			compareModel(t, got, want)
			compareSlopes(t, got, want)
			compareDifference(t, got, want)
			compareFindings(t, got, want)
			compareRows(t, got, want)
		})
	}
}

func auditReference(t *testing.T, want reference) *audit.Result {
	t.Helper()
	roles := model.Roles{Response: want.Response, Covariates: want.Covariates, CommonSlope: want.CommonSlope}
	if want.Predictor != nil {
		roles.Predictors = []string{*want.Predictor}
	}
	if want.Group != nil {
		roles.Group = *want.Group
	}
	if want.Subject != nil {
		roles.Subject = *want.Subject
	}
	table, err := readers.Open(filepath.Join("../testdata/reference/data", want.Data), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := audit.Table(table, audit.Request{Roles: roles, Settings: settings(), PerRow: true})
	if err != nil {
		t.Fatal(err)
	}
	return got
}

func settings() rules.Settings {
	nan := math.NaN()
	return rules.Settings{Confidence: 0.95, FalseAlarm: 0.05, SmallestDifference: nan, StatedSlope: nan, PredictorError: nan, Seed: 1}
}

func compareModel(t *testing.T, got *audit.Result, want reference) {
	m := got.Model
	if m.RowsUsed != want.RowsUsed || m.Parameters != want.Parameters || m.ResidualDF != want.ResidualDF {
		t.Errorf("rows, parameters, df: got %d, %d, %d, want %d, %d, %d", m.RowsUsed, m.Parameters, m.ResidualDF, want.RowsUsed, want.Parameters, want.ResidualDF)
	}
	agree(t, "residual SD", m.ResidualSD, want.ResidualSD, tight, 0)
	agree(t, "R²", m.RSquared, want.RSquared, tight, 0)
	agree(t, "adjusted R²", m.AdjRSquared, want.AdjRSquared, tight, 0)
	terms := m.CovariateTerms
	if want.CommonSlope {
		for _, level := range want.Intercepts[1:] {
			offset := level.Intercept - want.Intercepts[0].Intercept
			agree(t, "offset of "+terms[0].Name, terms[0].Estimate, offset, tight, float64(level.Intercept))
			terms = terms[1:]
		}
	}
	if len(terms) != len(want.CovariateTerms) {
		t.Fatalf("covariate terms: got %v, want %v", terms, want.CovariateTerms)
	}
	for k, w := range want.CovariateTerms {
		g := terms[k]
		name := w.Name
		if w.Level != nil {
			name += ": " + *w.Level
		}
		if g.Name != name {
			t.Errorf("covariate term %d is %q, want %q", k, g.Name, name)
		}
		agree(t, w.Name, g.Estimate, w.Estimate, tight, 0)
		agree(t, w.Name+" se", g.SE, w.SE, tight, 0)
		agree(t, w.Name+" hc3", g.HC3SE, w.HC3, tight, 0)
	}
}

func compareSlopes(t *testing.T, got *audit.Result, want reference) {
	got.Slopes = slices.DeleteFunc(got.Slopes, func(s audit.Slope) bool { return !s.Slope.Defined() }) // the reference lists those apart
	if len(got.Slopes) != len(want.Slopes) || len(got.Means) != len(want.Means) {
		t.Fatalf("got %d slopes and %d means, want %d and %d", len(got.Slopes), len(got.Means), len(want.Slopes), len(want.Means))
	}
	for k, w := range want.Means {
		g := got.Means[k]
		if g.Group != w.Group || g.Rows != w.Rows {
			t.Errorf("mean %d: got %s %d, want %s %d", k, g.Group, g.Rows, w.Group, w.Rows)
		}
		agree(t, "mean", g.Mean, w.Mean, tight, 0)
		agree(t, "mean se", g.SE, w.SE, tight, 0)
		agree(t, "mean df", g.DF, w.DF, tight, 0)
		agree(t, "mean low", g.CI[0], w.Low, tight, 0)
		agree(t, "mean high", g.CI[1], w.High, tight, 0)
	}
	for k, w := range want.Slopes {
		g := got.Slopes[k]
		if (g.Group == nil) != (w.Group == nil) || (g.Group != nil && *g.Group != *w.Group) || g.Rows != w.Rows {
			t.Errorf("slope %d: got group %v with %d rows, want %v with %d", k, g.Group, g.Rows, w.Group, w.Rows)
		}
		agree(t, "slope", g.Slope, w.Slope, tight, 0)
		if want.CommonSlope {
			w.Intercept = want.Intercepts[0].Intercept
		}
		agree(t, "intercept", g.Intercept, w.Intercept, tight, 0)
		agree(t, "pooled se", g.PooledSE, w.SE, tight, 0)
		agree(t, "hc3", g.HC3SE, w.HC3, tight, 0)
		if w.Own == nil {
			agree(t, "se", g.SE, w.SE, tight, 0)
			agree(t, "df", g.DF, w.DF, tight, 0)
			agree(t, "t", g.T, w.T, tight, 0)
			agree(t, "p", g.P, w.P, tight, 0)
			agree(t, "low", g.CI[0], w.Low, tight, float64(w.SE))
			agree(t, "high", g.CI[1], w.High, tight, float64(w.SE))
			continue
		}
		agree(t, "own se", g.SE, w.Own.SE, tight, 0)
		if w.Own.DF > 0 {
			agree(t, "own df", g.DF, w.Own.DF, tight, 0)
		}
		agree(t, "own t", g.T, w.Own.T, tight, 0)
		agree(t, "own p", g.P, w.Own.P, tight, 0)
		agree(t, "own low", g.CI[0], w.Own.Low, tight, float64(w.Own.SE))
		agree(t, "own high", g.CI[1], w.Own.High, tight, float64(w.Own.SE))
		agree(t, "own R²", g.RSquared, w.Own.RSquared, tight, 0)
	}
}

func compareDifference(t *testing.T, got *audit.Result, want reference) {
	if want.EqualMeans != nil {
		want.Difference = want.EqualMeans
	}
	if (got.Difference == nil) != (want.Difference == nil) {
		t.Fatalf("difference: got %v, want %v", got.Difference, want.Difference)
	}
	if want.Difference == nil {
		return
	}
	g, w := got.Difference, want.Difference
	agree(t, "F", g.F, w.F, tight, 0)
	agree(t, "F df1", g.DF[0], w.DF1, tight, 0)
	agree(t, "F df2", g.DF[1], w.DF2, tight, 0)
	agree(t, "F p", g.P, w.P, tight, 0)
	if want.EqualMeans != nil {
		return // the reference has no pairs of means
	}
	if len(g.Pairs) != len(w.Pairs) {
		t.Fatalf("got %d pairs, want %d", len(g.Pairs), len(w.Pairs))
	}
	for k, wp := range w.Pairs {
		gp := g.Pairs[k]
		if gp.Between != [2]string{wp.First, wp.Second} {
			t.Errorf("pair %d is between %v, want %s and %s", k, gp.Between, wp.First, wp.Second)
		}
		agree(t, "pair difference", gp.Difference, wp.Difference, tight, 0)
		agree(t, "pair se", gp.SE, wp.SE, tight, 0)
		agree(t, "pair t", gp.T, wp.T, tight, 0)
		agree(t, "pair p", gp.P, wp.P, tight, 0)
		agree(t, "pair Holm p", gp.PHolm, wp.Holm, tight, 0)
		agree(t, "pair Tukey p", gp.PTukey, wp.Tukey, 1e-6, 1) // absolute: R's ptukey is a quadrature itself
		agree(t, "pair low", gp.CI[0], wp.TukeyLow, 1e-6, float64(wp.SE))
		agree(t, "pair high", gp.CI[1], wp.TukeyHigh, 1e-6, float64(wp.SE))
	}
}

// figureOf reads a figure of a finding's evidence; NaN when it is not there.
func figureOf(r *audit.Result, rule, name string) audit.Number {
	for _, f := range r.Findings {
		if f.Rule != rule {
			continue
		}
		if v, ok := f.Evidence[name].(audit.Number); ok {
			return v
		}
	}
	return audit.Number(math.NaN())
}

func compareFindings(t *testing.T, got *audit.Result, want reference) {
	check := func(rule, name string, w value, tolerance float64) {
		t.Helper()
		agree(t, rule+" "+name, figureOf(got, rule, name), w, tolerance, 1e-3) // LM of anscombe2 is zero in exact arithmetic
	}
	if s := want.Quadratic; s != nil {
		check("linearity", "quadratic_f", s.F, tight)
		check("linearity", "quadratic_p", s.P, tight)
	}
	if s := want.Reset; s != nil {
		check("linearity", "reset_f", s.F, tight)
		check("linearity", "reset_p", s.P, tight)
	}
	if s := want.Shapiro; s != nil {
		check("normality", "shapiro_wilk_w", s.W, 1e-10)
		check("normality", "shapiro_wilk_p", s.P, 1e-7) // R evaluates the same approximation; p in the far tail loses a digit
	}
	if s := want.Koenker; s != nil {
		check("constant-variance", "breusch_pagan_lm", s.LM, tight)
		check("constant-variance", "breusch_pagan_p", s.P, tight)
	}
	if s := want.BrownForsythe; s != nil {
		check("constant-variance", "brown_forsythe_f", s.F, tight)
		check("constant-variance", "brown_forsythe_p", s.P, tight)
	}
	if s := want.Outlier; s != nil {
		check("outliers", "largest_studentized", s.T, tight)
		check("outliers", "bonferroni_p", s.Bonferroni, tight)
	}
	if s := want.LargestLeverage; s != nil {
		check("leverage", "largest_leverage", s.Value, tight)
	}
	if s := want.LargestCook; s != nil && want.Predictor != nil {
		check("influence", "largest_cook", s.Value, tight)
	}
	if s := want.Overlap; s != nil {
		check("overlap", "share_inside", s.ShareInside, tight)
	}
	if s := want.Subjects; s != nil {
		check("repeated-subjects", "icc", s.ICC, tight)
	}
	if len(want.VIF) > 1 {
		check("collinearity", "condition_number", want.Condition, tight)
		for _, f := range got.Findings {
			if f.Rule == "collinearity" {
				for name, w := range want.VIF {
					agree(t, "VIF "+name, f.Evidence["vif"].(map[string]any)[name].(audit.Number), w, tight, 0)
				}
			}
		}
	}
	if !math.IsNaN(float64(want.SizeRatio)) && len(want.Slopes) > 1 {
		check("group-balance", "size_ratio", want.SizeRatio, tight)
	}
}

func compareRows(t *testing.T, got *audit.Result, want reference) {
	if want.Rows == nil || len(want.Rows.Row) == 0 {
		return
	}
	w := want.Rows
	if len(got.Rows) != len(w.Row) {
		t.Fatalf("got %d rows, want %d", len(got.Rows), len(w.Row))
	}
	column := func(name string, want []value, of func(audit.Row) audit.Number) {
		largest := 0.0
		for _, v := range want {
			if !math.IsNaN(float64(v)) {
				largest = max(largest, math.Abs(float64(v)))
			}
		}
		for i, v := range want {
			agree(t, name, of(got.Rows[i]), v, tight, 1e-3*largest)
		}
	}
	for i, row := range w.Row {
		if got.Rows[i].Row != row+1 { // the header is line 1
			t.Errorf("row %d: got line %d, want %d", i, got.Rows[i].Row, row+1)
		}
	}
	column("fitted", w.Fitted, func(r audit.Row) audit.Number { return r.Fitted })
	column("residual", w.Residual, func(r audit.Row) audit.Number { return r.Residual })
	column("leverage", w.Leverage, func(r audit.Row) audit.Number { return r.Leverage })
	column("internal", w.Internal, func(r audit.Row) audit.Number { return r.Internal })
	column("external", w.External, func(r audit.Row) audit.Number { return r.External })
	column("cook", w.Cook, func(r audit.Row) audit.Number { return r.Cook })
	for group, v := range w.DFBETAS {
		if !isGroup(want, group) {
			continue
		}
		for i, d := range v {
			if got.Rows[i].Group != nil && *got.Rows[i].Group != group {
				continue
			}
			agree(t, "dfbetas of "+group, got.Rows[i].DFBETASlope, d, tight, 1e-3)
		}
	}
}

// isGroup tells the slopes of groups from those of covariates.
func isGroup(want reference, name string) bool {
	return !slices.Contains(want.Covariates, name)
}
