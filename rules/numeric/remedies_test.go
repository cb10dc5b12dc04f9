package numeric

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats"
)

const referenceFolder = "../../testdata/reference"

// remedyEntry is one entry of testdata/reference/remedies.json, made by
// remedies.R beside it with base R 4.2.2 from definitions.
type remedyEntry struct {
	Quantity        string          `json:"quantity"`
	Case            string          `json:"case"`
	Data            string          `json:"data"`
	Response        string          `json:"response"`
	Predictor       string          `json:"predictor"`
	Covariates      []string        `json:"covariates"`
	LabelCovariates []string        `json:"label_covariates"`
	Group           string          `json:"group"`
	Subject         string          `json:"subject"`
	Order           string          `json:"order"`
	CommonSlope     bool            `json:"common_slope"`
	Values          json.RawMessage `json:"values"`
}

// eachRemedy runs check on every entry of a quantity, its values decoded.
func eachRemedy[V any](t *testing.T, quantity string, check func(t *testing.T, e remedyEntry, v V)) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(referenceFolder, "remedies.json"))
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Entries []remedyEntry `json:"entries"`
	}
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	found := false
	for _, e := range file.Entries {
		if e.Quantity != quantity {
			continue
		}
		found = true
		var v V
		if err := json.Unmarshal(e.Values, &v); err != nil {
			t.Fatal(err)
		}
		t.Run(quantity+"/"+e.Case, func(t *testing.T) { check(t, e, v) })
	}
	if !found {
		t.Fatalf("no entry for %s", quantity)
	}
}

// remedyTable holds the used rows of an entry's data: those with response,
// predictor, covariates and group.
type remedyTable struct {
	y, x    []float64
	group   []int
	groups  []string
	subject []int
	order   []float64
	columns [][]float64
	slopes  map[string]int // group to its slope's column; "all" for a common one
}

func (e remedyEntry) table(t *testing.T) remedyTable {
	t.Helper()
	rows := readTable(t, filepath.Join(referenceFolder, "data", e.Data), ',')
	at := func(name string) int { return slices.Index(rows[0], name) }
	need := append([]string{e.Response, e.Predictor}, e.Covariates...)
	if e.Group != "" {
		need = append(need, e.Group)
	}
	var used [][]string
	for _, row := range rows[1:] {
		if !slices.ContainsFunc(need, func(name string) bool { return row[at(name)] == "NA" }) {
			used = append(used, row)
		}
	}
	texts := func(name string) []string {
		var column []string
		for _, row := range used {
			column = append(column, row[at(name)])
		}
		return column
	}
	numbers := func(name string) []float64 {
		var column []float64
		for _, cell := range texts(name) {
			column = append(column, number(t, cell))
		}
		return column
	}
	m := remedyTable{y: numbers(e.Response), x: numbers(e.Predictor), slopes: map[string]int{}}
	m.group, m.groups = make([]int, len(used)), []string{"all"}
	if e.Group != "" {
		m.group, m.groups = codes(texts(e.Group))
	}
	if e.Subject != "" {
		m.subject, _ = codes(texts(e.Subject))
	}
	if e.Order != "" {
		m.order = numbers(e.Order)
	}
	m.addLines(e.CommonSlope)
	for _, name := range e.Covariates {
		if slices.Contains(e.LabelCovariates, name) {
			of, levels := codes(texts(name))
			for l := 1; l < len(levels); l++ {
				m.columns = append(m.columns, indicator(of, l))
			}
			continue
		}
		m.columns = append(m.columns, centred(numbers(name)))
	}
	return m
}

// codes numbers texts by the byte order of their levels.
func codes(texts []string) (code []int, levels []string) {
	levels = slices.Compact(slices.Sorted(slices.Values(texts)))
	for _, s := range texts {
		code = append(code, slices.Index(levels, s))
	}
	return code, levels
}

func indicator(code []int, level int) []float64 {
	v := make([]float64, len(code))
	for i, c := range code {
		if c == level {
			v[i] = 1
		}
	}
	return v
}

func centred(v []float64) []float64 {
	out := slices.Clone(v)
	floats.AddConst(-Mean(v), out)
	return out
}

func (m *remedyTable) addLines(common bool) {
	x := centred(m.x)
	for g := range m.groups {
		m.columns = append(m.columns, indicator(m.group, g))
	}
	if common {
		m.slopes["all"] = len(m.columns)
		m.columns = append(m.columns, x)
		return
	}
	for g, name := range m.groups {
		own := indicator(m.group, g)
		floats.Mul(own, x)
		if NewBasis([][]float64{m.columns[g], own}, len(x)).FullRank() {
			m.slopes[name] = len(m.columns)
			m.columns = append(m.columns, own)
		}
	}
}

// contrast returns the coefficients of "b less a" or of the slope of one group.
func (m remedyTable) contrast(of string) []float64 {
	l := make([]float64, len(m.columns))
	if b, a, isPair := strings.Cut(of, " less "); isPair {
		l[m.slopes[b]], l[m.slopes[a]] = 1, -1
		return l
	}
	l[m.slopes[of]] = 1
	return l
}

func (m remedyTable) fit() (b *Basis, e []float64) {
	b = NewBasis(m.columns, len(m.y))
	e = make([]float64, len(m.y))
	b.Residual(e, m.y)
	return b, e
}

// near complains when got is further than limit, relatively, from want.
func near(t *testing.T, what string, got, want, limit float64) {
	t.Helper()
	if d := off(got, want); d > limit {
		t.Errorf("%s = %.15g, want %.15g, off by %.2g", what, got, want, d)
	}
}

type estimate struct {
	Of       string   `json:"of"`
	Estimate float64  `json:"estimate"`
	SE       float64  `json:"se"`
	DF       *float64 `json:"df"`
}

type fTest struct {
	F   float64 `json:"f"`
	DF1 float64 `json:"df1"`
	DF2 float64 `json:"df2"`
	P   float64 `json:"p"`
}

func TestHC3AgainstReference(t *testing.T) {
	type values struct {
		Estimates   []estimate `json:"estimates"`
		EqualSlopes *fTest     `json:"equal_slopes"`
	}
	eachRemedy(t, "hc3", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		b, residual := m.fit()
		for _, want := range v.Estimates {
			c := b.Catcher(m.contrast(want.Of))
			near(t, want.Of, floats.Dot(c, m.y), want.Estimate, 1e-9)
			variance, ok := HC3(c, residual, b.Leverage())
			if !ok {
				t.Fatalf("%s: no variance", want.Of)
			}
			near(t, want.Of+" SE", math.Sqrt(variance), want.SE, 1e-10)
		}
		if v.EqualSlopes == nil {
			return
		}
		var differences []float64
		var catchers [][]float64
		for g := 1; g < len(m.groups); g++ {
			c := b.Catcher(m.contrast(m.groups[g] + " less " + m.groups[0]))
			catchers = append(catchers, c)
			differences = append(differences, floats.Dot(c, m.y))
		}
		chi, ok := Wald(differences, HC3Covariance(catchers, residual, b.Leverage()))
		if !ok {
			t.Fatal("no Wald statistic")
		}
		near(t, "F", chi/v.EqualSlopes.DF1, v.EqualSlopes.F, 1e-9)
	})
}

func TestCR2AgainstReference(t *testing.T) {
	type values struct {
		Subjects  int        `json:"subjects"`
		Estimates []estimate `json:"estimates"`
	}
	eachRemedy(t, "cr2", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		b, residual := m.fit()
		for _, want := range v.Estimates {
			// One number more than there are subjects: it has no row.
			variance, df := CR2(b.Catcher(m.contrast(want.Of)), residual, b.Q(), m.subject, v.Subjects+1)
			near(t, want.Of+" SE", math.Sqrt(variance), want.SE, 1e-9)
			near(t, want.Of+" df", df, *want.DF, 1e-9)
		}
	})
}

// sequences lists rows by subject in the order column; ties keep their order.
func (m remedyTable) sequences() [][]int {
	rows := make([]int, len(m.y))
	for i := range rows {
		rows[i] = i
	}
	slices.SortStableFunc(rows, func(a, b int) int {
		switch {
		case m.order[a] < m.order[b]:
			return -1
		case m.order[a] > m.order[b]:
			return 1
		}
		return 0
	})
	if m.subject == nil {
		return [][]int{rows}
	}
	out := make([][]int, slices.Max(m.subject)+1)
	for _, i := range rows {
		out[m.subject[i]] = append(out[m.subject[i]], i)
	}
	return out
}

func TestPraisWinstenAgainstReference(t *testing.T) {
	type values struct {
		Rho       float64    `json:"rho"`
		RSS       float64    `json:"rss_transformed"`
		DF        float64    `json:"df"`
		Estimates []estimate `json:"estimates"`
	}
	eachRemedy(t, "serial_errors", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		order := m.sequences()
		for j, column := range m.columns {
			m.columns[j] = PraisWinsten(column, order, v.Rho)
		}
		m.y = PraisWinsten(m.y, order, v.Rho)
		b, residual := m.fit()
		rss := floats.Dot(residual, residual)
		near(t, "RSS", rss, v.RSS, 1e-10)
		for _, want := range v.Estimates {
			l := m.contrast(want.Of)
			near(t, want.Of, floats.Dot(l, b.Solve(m.y)), want.Estimate, 1e-9)
			near(t, want.Of+" SE", math.Sqrt(rss/v.DF*b.Covariance(l, l)), want.SE, 1e-10)
		}
	})
}

func TestWelchAgainstReference(t *testing.T) {
	type values struct {
		Groups []struct {
			Slope   float64 `json:"slope"`
			SE      float64 `json:"se"`
			DF      float64 `json:"df"`
			Skipped bool    `json:"skipped"`
		} `json:"groups"`
		Test struct {
			Kind string  `json:"kind"`
			T    float64 `json:"t"`
			DF   float64 `json:"df"`
			fTest
		} `json:"test"`
	}
	eachRemedy(t, "own_variance", func(t *testing.T, _ remedyEntry, v values) {
		var b, variance, df []float64
		for _, g := range v.Groups {
			if !g.Skipped {
				b, variance, df = append(b, g.Slope), append(variance, g.SE*g.SE), append(df, g.DF)
			}
		}
		f, d1, d2, p := WelchSlopes(b, variance, df)
		near(t, "p", p, v.Test.P, 1e-10)
		if v.Test.Kind == "welch F" {
			near(t, "F", f, v.Test.F, 1e-12)
			near(t, "df1", d1, v.Test.DF1, 0)
			near(t, "df2", d2, v.Test.DF2, 1e-12)
			return
		}
		tValue, d, p := WelchDifference(b[0], variance[0], df[0], b[1], variance[1], df[1])
		near(t, "t", tValue, v.Test.T, 1e-12)
		near(t, "df", d, v.Test.DF, 1e-12)
		near(t, "p", p, v.Test.P, 1e-10)
		near(t, "F of two", f, tValue*tValue, 1e-12)
		near(t, "df2 of two", d2, d, 1e-12)
	})
}

func TestBoxCoxAgainstReference(t *testing.T) {
	type values struct {
		Lambda        float64 `json:"lambda"`
		Low           float64 `json:"set_low"`
		High          float64 `json:"set_high"`
		LogLikelihood struct {
			Maximum  float64 `json:"maximum"`
			MinusOne float64 `json:"at_minus_one"`
			Zero     float64 `json:"at_zero"`
			Half     float64 `json:"at_half"`
			One      float64 `json:"at_one"`
		} `json:"log_likelihood"`
	}
	eachRemedy(t, "box_cox", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		b, _ := m.fit()
		profile, ok := BoxCoxProfile(m.y, b)
		if !ok {
			t.Fatal("no profile")
		}
		near(t, "lambda", profile.Best, v.Lambda, 0)
		near(t, "low", profile.Low, v.Low, 0)
		near(t, "high", profile.High, v.High, 0)
		near(t, "maximum", slices.Max(profile.LogLikelihood), v.LogLikelihood.Maximum, 1e-10)
		for _, c := range []struct{ lambda, want float64 }{
			{-1, v.LogLikelihood.MinusOne},
			{0, v.LogLikelihood.Zero},
			{0.5, v.LogLikelihood.Half},
			{1, v.LogLikelihood.One},
		} {
			k := slices.Index(profile.Lambda, c.lambda)
			near(t, "log likelihood", profile.LogLikelihood[k], c.want, 1e-10)
		}
	})
	if _, ok := BoxCoxProfile([]float64{1, 2, 0}, NewBasis([][]float64{{1, 1, 1}}, 3)); ok {
		t.Error("a profile with a response of 0")
	}
}

func TestLogLinearVarianceAgainstReference(t *testing.T) {
	type values struct {
		Rows    int     `json:"rows"`
		Ratio   float64 `json:"spread_ratio"`
		SumLogV float64 `json:"sum_log_v"`
		RSS     float64 `json:"rss_weighted"`
		Largest float64 `json:"largest_log_v"`
		Least   float64 `json:"smallest_log_v"`
	}
	eachRemedy(t, "log_linear_variance", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		b, residual := m.fit()
		variance := LogLinearVariance(residual, b.Leverage(), m.columns)
		if len(variance) != v.Rows {
			t.Fatalf("%d variances, want %d", len(variance), v.Rows)
		}
		sum := 0.0
		root := make([]float64, len(variance))
		for i, s := range variance {
			sum += math.Log(s)
			root[i] = math.Sqrt(s)
		}
		low, high := slices.Min(variance), slices.Max(variance)
		// The reference minimizes a sum, which is flat to 1e-16 over some 1e-8.
		near(t, "spread ratio", math.Sqrt(high/low), v.Ratio, 1e-7)
		near(t, "largest", math.Log(high), v.Largest, 1e-7)
		near(t, "least", math.Log(low), v.Least, 1e-7)
		near(t, "sum of logarithms", sum, v.SumLogV, 1e-9)
		for _, column := range append(m.columns, m.y) {
			floats.Div(column, root)
		}
		_, weighted := m.fit()
		near(t, "weighted RSS", floats.Dot(weighted, weighted), v.RSS, 1e-7)
	})
}

func TestLogLinearVarianceWithRowsOfLeverageOne(t *testing.T) {
	e := []float64{1, -1, 3, -3, 0}
	h := []float64{0.2, 0.2, 0.2, 0.2, 1}
	a, b := []float64{1, 1, 0, 0, 0}, []float64{0, 0, 1, 1, 1}
	v := LogLinearVariance(e, h, [][]float64{a, b})
	// Two levels: each group's mean of e²/(1-h).
	for i, want := range []float64{1.25, 1.25, 11.25, 11.25, math.Sqrt(1.25 * 11.25)} {
		if off(v[i], want) > 1e-10 {
			t.Errorf("row %d: %v, want %v", i, v[i], want)
		}
	}
}

func TestMMLineAgainstReference(t *testing.T) {
	type values struct {
		Groups []struct {
			Group     string   `json:"group"`
			Scale     float64  `json:"scale"`
			Intercept *float64 `json:"intercept"`
			Slope     float64  `json:"slope"`
			SE        float64  `json:"se"`
		} `json:"groups"`
	}
	eachRemedy(t, "mm_line", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		for k, want := range v.Groups {
			var x, y []float64
			for i, g := range m.group {
				if g == k {
					x, y = append(x, m.x[i]), append(y, m.y[i])
				}
			}
			intercept, slope, se, scale, ok := MMLine(x, y, nil)
			if ok != (want.Intercept != nil) {
				t.Fatalf("ok is %v", ok)
			}
			if !ok {
				continue
			}
			near(t, "scale", scale, want.Scale, 1e-10)
			near(t, "slope", slope, want.Slope, 1e-9)
			near(t, "intercept", intercept, *want.Intercept, 1e-9)
			near(t, "SE", se, want.SE, 1e-9)
		}
	})
}

func TestAndersonDarlingAgainstReference(t *testing.T) {
	type values struct {
		Star float64 `json:"a_star"`
		P    float64 `json:"p"`
	}
	eachRemedy(t, "anderson_darling", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		_, residual := m.fit()
		a := AndersonDarlingStatistic(residual)
		near(t, "A*", a, v.Star, 1e-10)
		near(t, "p", AndersonDarlingP(a), v.P, 1e-9)
	})
}

// columnsAndRows is how remedies.json holds a table of numbers.
type columnsAndRows struct {
	Columns []string    `json:"columns"`
	Rows    [][]float64 `json:"rows"`
}

func TestStudentizedRangeAgainstIntegration(t *testing.T) {
	eachRemedy(t, "studentized_range_cdf", func(t *testing.T, _ remedyEntry, v columnsAndRows) {
		for _, row := range v.Rows { // q, groups, df, p, p_ptukey
			if d := math.Abs(1 - row[3] - TukeyUpper(row[0], int(row[1]), row[2])); d > 1e-11 {
				t.Errorf("TukeyUpper(%v) is off by %.2g", row[:3], d)
			}
		}
	})
	eachRemedy(t, "studentized_range_quantile", func(t *testing.T, _ remedyEntry, v columnsAndRows) {
		for k, row := range v.Rows { // p, groups, df, q
			if k%3 == 0 { // Each takes some milliseconds.
				near(t, "quantile", TukeyQuantile(row[0], int(row[1]), row[2]), row[3], 1e-10)
			}
		}
	})
}

func TestDetectableAgainstReference(t *testing.T) {
	eachRemedy(t, "detectable_ncp", func(t *testing.T, _ remedyEntry, v columnsAndRows) {
		for _, row := range v.Rows { // groups, df, ncp
			crit := StudentQuantile(0.975, row[1])
			if row[0] > 2 {
				crit = TukeyQuantile(0.95, int(row[0]), row[1]) / math.Sqrt2
			}
			near(t, "ncp", DetectableNCP(row[1], 0.8, crit), row[2], 1e-10)
		}
	})
	eachRemedy(t, "noncentral_t_cdf", func(t *testing.T, _ remedyEntry, v columnsAndRows) {
		for _, row := range v.Rows { // t, ncp, df, p
			if d := math.Abs(NoncentralTCDF(row[0], row[2], row[1]) - row[3]); d > 1e-11 {
				t.Errorf("NoncentralTCDF at t, ncp, df %v is off by %.2g", row[:3], d)
			}
		}
	})
}

func TestFreedmanLaneAgainstAllPermutations(t *testing.T) {
	type values struct {
		F        float64 `json:"f"`
		P        float64 `json:"p"`
		Largest  float64 `json:"largest_f"`
		Examples []struct {
			Permutation []int   `json:"permutation"`
			F           float64 `json:"f"`
		} `json:"examples"`
	}
	eachRemedy(t, "permuted_groups", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		full, _ := m.fit()
		reduced := NewBasis(append(slices.Clone(m.columns[:len(m.groups)]), centred(m.x)), len(m.y))
		p := newPermutedF(m.y, reduced, full)
		near(t, "F", p.f(p.residual), v.F, 1e-10)
		permuted := make([]float64, len(m.y))
		for _, example := range v.Examples {
			for i, from := range example.Permutation {
				permuted[i] = p.residual[from-1]
			}
			// Some F are nearly 0: a difference of sums of squares.
			if got := p.f(permuted); math.Abs(got-example.F) > 1e-10*(1+example.F) {
				t.Errorf("F of %v is %v, want %v", example.Permutation, got, example.F)
			}
		}
		// Drawn at random, p is the exact one give or take its standard error.
		const draws = 19999
		se := math.Sqrt(v.P * (1 - v.P) / draws)
		got := FreedmanLane(m.y, reduced, full, draws, Stream(1, "test"))
		if math.Abs(got-v.P) > 4*se {
			t.Errorf("p = %v, want %v ± %.2g", got, v.P, 4*se)
		}
		if again := FreedmanLane(m.y, reduced, full, draws, Stream(1, "test")); again != got {
			t.Errorf("the same stream gives %v and %v", got, again)
		}
		if !math.IsNaN(FreedmanLane(m.y, full, full, 10, Stream(1, "test"))) {
			t.Error("a model within itself has a p")
		}
	})
}

func TestWildBootstrapAgainstAllSigns(t *testing.T) {
	type values struct {
		Estimates []struct {
			Of       string    `json:"of"`
			SE       float64   `json:"hc3_se"`
			T        float64   `json:"t"`
			P        float64   `json:"p"`
			Quantile float64   `json:"quantile_type_7"`
			Null     []float64 `json:"t_null"`
			Held     []float64 `json:"t_held"`
		} `json:"estimates"`
	}
	eachRemedy(t, "wild_bootstrap", func(t *testing.T, e remedyEntry, v values) {
		m := e.table(t)
		b, _ := m.fit()
		n := len(m.y)
		for _, want := range v.Estimates {
			c := b.Catcher(m.contrast(want.Of))
			w := newWildTest(b, m.y, c)
			near(t, want.Of+" t", w.t(m.y), want.T, 1e-9)
			signs := make([]float64, n)
			for k := range 1 << n {
				for i := range signs {
					signs[i] = 1 - 2*float64(k>>i&1)
				}
				if got := w.null(signs); math.Abs(got-want.Null[k]) > 1e-8*(1+math.Abs(want.Null[k])) {
					t.Errorf("%s, signs %d: t %v under the null, want %v", want.Of, k, got, want.Null[k])
				}
				if got := w.held(signs); math.Abs(got-want.Held[k]) > 1e-8*(1+math.Abs(want.Held[k])) {
					t.Errorf("%s, signs %d: t %v held, want %v", want.Of, k, got, want.Held[k])
				}
			}
			const draws = 9999
			got := WildBootstrap(b, m.y, c, 0.95, draws, Stream(1, "test"))
			near(t, "t", got.T, want.T, 1e-9)
			if se := math.Sqrt(want.P * (1 - want.P) / draws); math.Abs(got.P-want.P) > 4*se+1.0/draws {
				t.Errorf("%s: p %v, want %v ± %.2g", want.Of, got.P, want.P, 4*se)
			}
			// The quantile of a few discrete values: within those at 94 and 96 %.
			sizes := make([]float64, len(want.Held))
			for k, h := range want.Held {
				sizes[k] = math.Abs(h)
			}
			slices.Sort(sizes)
			if low, high := Quantile(sizes, 0.94), Quantile(sizes, 0.96); got.Quantile < low*(1-1e-9) || got.Quantile > high*(1+1e-9) {
				t.Errorf("%s: quantile %v, want %v to %v", want.Of, got.Quantile, low, high)
			}
		}
	})
}
