package audit_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"footing/audit"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
)

// remedyCase is one entry of testdata/reference/remedies.json, which base R made
// by testdata/reference/remedies.R: from the formulas, with full matrices and
// actual refits.
type remedyCase struct {
	Quantity    string          `json:"quantity"`
	Case        string          `json:"case"`
	Data        string          `json:"data"`
	Response    string          `json:"response"`
	Predictor   *string         `json:"predictor"`
	Covariates  []string        `json:"covariates"`
	Group       *string         `json:"group"`
	Subject     *string         `json:"subject"`
	Order       *string         `json:"order"`
	CommonSlope bool            `json:"common_slope"`
	Settings    json.RawMessage `json:"settings"`
	Values      json.RawMessage `json:"values"`
}

// refEstimate is a slope, or with "b less a" a difference of two.
type refEstimate struct {
	Of       string
	Estimate value
	SE, DF   value
	T, P     value
	Low      value `json:"ci_low"`
	High     value `json:"ci_high"`
}

func (e refEstimate) pair() (first, second string, isPair bool) {
	second, first, isPair = strings.Cut(e.Of, " less ")
	return first, second, isPair
}

type refF struct{ F, DF1, DF2, P value }

// eachReference runs check on every entry of a quantity. A quantity without
// entries fails, so that none is lost by a slip of its name.
func eachReference[V any](t *testing.T, quantity string, check func(t *testing.T, c remedyCase, want V)) {
	t.Helper()
	raw, err := os.ReadFile("../testdata/reference/remedies.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Counts  map[string]int `json:"counts"`
		Entries []remedyCase   `json:"entries"`
	}
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	asked := 0
	for _, c := range file.Entries {
		if c.Quantity != quantity {
			continue
		}
		asked++
		t.Run(c.Case, func(t *testing.T) {
			var want V
			if err := json.Unmarshal(c.Values, &want); err != nil {
				t.Fatal(err)
			}
			check(t, c, want)
		})
	}
	if asked == 0 || asked != file.Counts[quantity] {
		t.Fatalf("%d entries of %s, want %d", asked, quantity, file.Counts[quantity])
	}
}

func (c remedyCase) roles() model.Roles {
	text := func(s *string) string {
		if s == nil {
			return ""
		}
		return *s
	}
	r := model.Roles{Response: c.Response, Covariates: c.Covariates, Group: text(c.Group), Subject: text(c.Subject), Order: text(c.Order), CommonSlope: c.CommonSlope}
	if c.Predictor != nil {
		r.Predictors = []string{*c.Predictor}
	}
	return r
}

func (c remedyCase) table(t *testing.T) *readers.Table {
	t.Helper()
	table, err := readers.Open(filepath.Join("../testdata/reference/data", c.Data), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// pass fits the case's model as the audit does.
func (c remedyCase) pass(t *testing.T) *rules.Pass {
	t.Helper()
	return passOf(t, c.table(t), c.roles())
}

func passOf(t *testing.T, table *readers.Table, roles model.Roles) *rules.Pass {
	t.Helper()
	columns, err := model.Resolve(table, roles)
	if err != nil {
		t.Fatal(err)
	}
	p := &rules.Pass{Table: table, Columns: columns, Design: model.NewDesign(table, columns, roles.CommonSlope), Settings: settings()}
	if p.Fit, err = model.NewFit(p.Design); err != nil {
		t.Fatal(err)
	}
	p.Answers = p.Fit.Answers(p.Settings.Confidence)
	return p
}

// audit is the whole audit of the case, with the shortest simulated null that
// keeps its rate: nothing held here depends on it.
func (c remedyCase) audit(t *testing.T, change func(*rules.Settings)) *audit.Result {
	t.Helper()
	s := settings()
	s.Replicates = 19
	if change != nil {
		change(&s)
	}
	r, err := audit.Table(c.table(t), audit.Request{Roles: c.roles(), Settings: s})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func startOf(p *rules.Pass) remedy.Start {
	return remedy.Start{Design: p.Design, Fit: p.Fit, Confidence: p.Settings.Confidence, Seed: p.Settings.Seed}
}

// try carries a remedy out; one that does not apply fails the test.
func try(t *testing.T, r *remedy.Remedy, s remedy.Start) model.Answers {
	t.Helper()
	a, err := r.Try(s)
	if err != nil {
		t.Fatalf("%s: %v", r.Name, err)
	}
	return a
}

// applies reports whether a remedy can be tried, and fails on an error that
// says anything but why not.
func applies(t *testing.T, r *remedy.Remedy, s remedy.Start) bool {
	t.Helper()
	_, err := r.Try(s)
	var not *remedy.NotApplicable
	if err != nil && !errors.As(err, &not) {
		t.Fatal(err)
	}
	return err == nil
}

// held compares two figures to the relative tolerance; scale is the size below
// which a difference is rounding.
func held(t *testing.T, what string, got float64, want value, tolerance, scale float64) {
	t.Helper()
	agree(t, what, audit.Number(got), want, tolerance, scale)
}

func slopeOf(t *testing.T, a model.Answers, of string) model.Estimate {
	t.Helper()
	if of == "all" {
		of = ""
	}
	for _, e := range a.Slopes {
		if e.Group == of {
			return e
		}
	}
	t.Fatalf("no slope of %q", of)
	return model.Estimate{}
}

func pairOf(t *testing.T, a model.Answers, first, second string) model.Pair {
	t.Helper()
	if a.Difference != nil {
		for _, p := range a.Difference.Pairs {
			if p.A == first && p.B == second {
				return p
			}
		}
	}
	t.Fatalf("no pair of %s and %s", first, second)
	return model.Pair{}
}

// heldEstimates compares slopes and pairs with those of one joint model. The
// interval of a pair among more than two groups is Tukey and Kramer's here and
// plain there, so it is compared for two only. An interval's end near zero is
// compared on the scale of the standard error.
func heldEstimates(t *testing.T, a model.Answers, want []refEstimate, tolerance float64) {
	t.Helper()
	for _, w := range want {
		se := float64(w.SE)
		if first, second, isPair := w.pair(); isPair {
			p := pairOf(t, a, first, second)
			held(t, w.Of, p.Value, w.Estimate, tolerance, se)
			held(t, w.Of+" se", p.SE, w.SE, tolerance, 0)
			held(t, w.Of+" t", p.T, w.T, tolerance, 1)
			held(t, w.Of+" p", p.P, w.P, tolerance, 0)
			if len(a.Slopes) == 2 {
				held(t, w.Of+" low", p.Low, w.Low, tolerance, se)
				held(t, w.Of+" high", p.High, w.High, tolerance, se)
			}
			continue
		}
		e := slopeOf(t, a, w.Of)
		held(t, w.Of, e.Value, w.Estimate, tolerance, se)
		held(t, w.Of+" se", e.SE, w.SE, tolerance, 0)
		held(t, w.Of+" df", e.DF, w.DF, tolerance, 0)
		held(t, w.Of+" t", e.T, w.T, tolerance, 1)
		held(t, w.Of+" p", e.P, w.P, tolerance, 0)
		held(t, w.Of+" low", e.Low, w.Low, tolerance, se)
		held(t, w.Of+" high", e.High, w.High, tolerance, se)
	}
}

func heldF(t *testing.T, a model.Answers, want *refF, tolerance float64) {
	t.Helper()
	if want == nil {
		if a.Difference != nil {
			t.Errorf("a difference is given, the reference has none")
		}
		return
	}
	if a.Difference == nil {
		t.Fatal("no difference")
	}
	held(t, "F", a.Difference.F, want.F, tolerance, 0)
	held(t, "F df1", a.Difference.DF1, want.DF1, tolerance, 0)
	held(t, "F df2", a.Difference.DF2, want.DF2, tolerance, 0)
	held(t, "F p", a.Difference.P, want.P, tolerance, 0)
}

// TestRobustErrors: on their own lines the slopes keep the degrees of freedom of
// their classical interval, n_g - 2, where the reference has those of the joint
// model; so there estimate, standard error and t are compared, and p with those
// degrees of freedom follows from t.
func TestRobustErrors(t *testing.T) {
	type values struct {
		Estimates []refEstimate
		Equal     *refF `json:"equal_slopes"`
	}
	eachReference(t, "hc3", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		a := try(t, remedy.RobustErrors, startOf(p))
		heldF(t, a, want.Equal, tight)
		if !p.Fit.QuotesOwnLines() || len(a.Slopes) == 1 {
			heldEstimates(t, a, want.Estimates, tight)
			return
		}
		for _, w := range want.Estimates {
			if _, _, isPair := w.pair(); isPair {
				heldEstimates(t, a, []refEstimate{w}, tight)
				continue
			}
			e := slopeOf(t, a, w.Of)
			held(t, w.Of+" se", e.SE, w.SE, tight, 0)
			held(t, w.Of+" t", e.T, w.T, tight, 0)
			held(t, w.Of+" p", e.P, value(numeric.StudentTwoSided(float64(w.T), float64(e.Rows-2))), tight, 0)
		}
	})
}

// TestSubjectErrors: in orange_parts one group is a single subject, which the
// remedy must refuse; its numerics are held in rules/numeric.
func TestSubjectErrors(t *testing.T) {
	eachReference(t, "cr2", func(t *testing.T, c remedyCase, want struct{ Estimates []refEstimate }) {
		p := c.pass(t)
		if c.Case == "orange_parts" {
			if applies(t, remedy.SubjectErrors, startOf(p)) {
				t.Error("a group of one subject is not refused")
			}
			return
		}
		heldEstimates(t, try(t, remedy.SubjectErrors, startOf(p)), want.Estimates, tight)
	})
}

type refSerial struct {
	Rho       value
	RSS       value `json:"rss_transformed"`
	Estimates []refEstimate
	Equal     *refF `json:"equal_slopes"`
}

func heldSerial(t *testing.T, r *remedy.Remedy, p *rules.Pass, want refSerial) {
	t.Helper()
	a := try(t, r, startOf(p))
	heldEstimates(t, a, want.Estimates, tight)
	heldF(t, a, want.Equal, tight)
	d, err := r.Edit(startOf(p))
	if err != nil {
		t.Fatal(err)
	}
	f, err := model.NewFit(d)
	if err != nil {
		t.Fatal(err)
	}
	held(t, "transformed RSS", f.RSS, want.RSS, tight, 0)
}

func TestSerialErrors(t *testing.T) {
	eachReference(t, "serial_errors", func(t *testing.T, c remedyCase, want refSerial) {
		p := c.pass(t)
		heldSerial(t, remedy.SerialErrors, p, want)
		r1, mean := p.Fit.LagOne()
		held(t, "rho", max(-0.9, min(0.9, r1-mean)), want.Rho, tight, 0)
	})
}

func TestOrderTerm(t *testing.T) {
	type values struct {
		RSS       value
		Estimates []refEstimate
		Equal     *refF     `json:"equal_slopes"`
		Serial    refSerial `json:"with_serial_errors"`
	}
	eachReference(t, "order_term", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		heldSerial(t, remedy.OrderTerm, p, want.Serial)
		alone, err := model.NewFit(p.Design.With("order", p.Design.OrderRank()))
		if err != nil {
			t.Fatal(err)
		}
		held(t, "RSS", alone.RSS, want.RSS, tight, 0)
		heldEstimates(t, alone.Answers(0.95), want.Estimates, tight)
	})
}

// TestIndependence holds the two members, the floor made of their effects, and
// Durbin and Watson's d.
func TestIndependence(t *testing.T) {
	type values struct {
		Pairs    int
		R1, M    value
		Distance value `json:"lag_distance"`
		Asked    bool  `json:"drift_asked"`
		T        value `json:"drift_t"`
		P        value `json:"drift_p"`
		RMS      value `json:"drift_rms"`
		DW       value `json:"durbin_watson"`
	}
	eachReference(t, "independence", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		_, neighbours := p.Design.Sequence()
		if len(neighbours) != want.Pairs {
			t.Errorf("%d pairs, want %d", len(neighbours), want.Pairs)
		}
		r1, mean := p.Fit.LagOne()
		held(t, "r1", r1, want.R1, tight, 0)
		held(t, "m", mean, want.M, tight, 0)
		chance, reason := rules.Independence.Chance(p)
		if chance == nil {
			t.Fatal(reason)
		}
		held(t, "member r1", chance.Members[0].Test.Value, want.R1, tight, 0)
		effect := math.Abs(float64(want.Distance)) / 0.1
		if (len(chance.Members) == 2) != want.Asked {
			t.Fatalf("%d members, drift asked: %v", len(chance.Members), want.Asked)
		}
		if want.Asked {
			held(t, "drift t", math.Abs(chance.Members[1].Test.Value), want.T, tight, 0)
			held(t, "drift p", chance.Members[1].Test.P, want.P, tight, 0)
			effect = max(effect, float64(want.RMS)/0.15)
		}
		held(t, "effect against the floor", chance.Floor.Effect, value(effect), tight, 0)
		r := c.audit(t, nil)
		agree(t, "durbin_watson", figureOf(r, "independence", "durbin_watson"), want.DW, tight, 0)
		agree(t, "lag1", figureOf(r, "independence", "lag1"), want.R1, tight, 0)
	})
}

func TestCauseScoresOfTheOrder(t *testing.T) {
	type values struct {
		None   value
		Serial value  `json:"serial_errors"`
		Term   *value `json:"order_term"`
	}
	eachReference(t, "cause_scores_order", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		n := float64(p.Fit.N())
		fitted := func(d *model.Design, err error) float64 {
			if err != nil {
				t.Fatal(err)
			}
			f, err := model.NewFit(d)
			if err != nil {
				t.Fatal(err)
			}
			return n * math.Log(f.RSS/n)
		}
		r1, mean := p.Fit.LagOne()
		rho := max(-0.9, min(0.9, r1-mean))
		held(t, "none", fitted(p.Design, nil), want.None, tight, 1)
		held(t, "serial errors", fitted(remedy.SerialErrors.Edit(startOf(p)))-math.Log(1-rho*rho)+math.Log(n), want.Serial, tight, 1)
		if want.Term != nil {
			held(t, "order term", fitted(p.Design.With("order", p.Design.OrderRank()), nil)+math.Log(n), *want.Term, tight, 1)
		}
	})
}

func TestOwnVariance(t *testing.T) {
	type values struct {
		Groups []struct {
			Group   string
			Skipped bool
			SE, DF  value
		}
		Test struct {
			Kind       string
			Difference value
			SE, DF     value
			T, P       value
			Low        value `json:"ci_low"`
			High       value `json:"ci_high"`
			F          value
			DF1, DF2   value
		}
	}
	eachReference(t, "own_variance", func(t *testing.T, c remedyCase, want values) {
		a := try(t, remedy.OwnVariance, startOf(c.pass(t)))
		var used []string
		for _, g := range want.Groups {
			if g.Skipped {
				continue
			}
			used = append(used, g.Group)
			e := slopeOf(t, a, g.Group)
			held(t, g.Group+" se", e.SE, g.SE, tight, 0)
			held(t, g.Group+" df", e.DF, g.DF, tight, 0)
		}
		w := want.Test
		held(t, "p", a.Difference.P, w.P, tight, 0)
		if w.Kind == "welch F" {
			heldF(t, a, &refF{F: w.F, DF1: w.DF1, DF2: w.DF2, P: w.P}, tight)
			return
		}
		held(t, "F", a.Difference.F, w.T*w.T, tight, 0)
		held(t, "df2", a.Difference.DF2, w.DF, tight, 0)
		p := pairOf(t, a, used[0], used[1])
		held(t, "difference", p.Value, w.Difference, tight, float64(w.SE))
		held(t, "pair se", p.SE, w.SE, tight, 0)
		held(t, "pair t", p.T, w.T, tight, 0)
		held(t, "pair p", p.P, w.P, tight, 0)
		held(t, "pair low", p.Low, w.Low, tight, float64(w.SE))
		held(t, "pair high", p.High, w.High, tight, float64(w.SE))
	})
}

func TestCurve(t *testing.T) {
	type values struct {
		Parameters int
		RSS        value
		DF         int
		Estimates  []refEstimate
		Equal      *refF `json:"equal_slopes"`
		Score      value
	}
	eachReference(t, "curve", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		d, err := remedy.Curve.Edit(startOf(p))
		if err != nil {
			t.Fatal(err)
		}
		f, err := model.NewFit(d)
		if err != nil {
			t.Fatal(err)
		}
		if f.P() != want.Parameters || f.DF != want.DF {
			t.Errorf("%d parameters and %d df, want %d and %d", f.P(), f.DF, want.Parameters, want.DF)
		}
		held(t, "RSS", f.RSS, want.RSS, tight, 0)
		n := float64(f.N())
		held(t, "score", n*math.Log(f.RSS/n)+float64(f.P()-p.Fit.P())*math.Log(n), want.Score, tight, 1)
		a := try(t, remedy.Curve, startOf(p))
		heldEstimates(t, a, want.Estimates, tight)
		heldF(t, a, want.Equal, tight)
	})
}

func TestCommonCurve(t *testing.T) {
	type values struct {
		Equal *refF `json:"equal_slopes"`
		Curve refEstimate
	}
	eachReference(t, "common_curve", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		heldF(t, try(t, remedy.CommonCurve, startOf(p)), want.Equal, tight)
		d, err := remedy.CommonCurve.Edit(startOf(p))
		if err != nil {
			t.Fatal(err)
		}
		f, err := model.NewFit(d)
		if err != nil {
			t.Fatal(err)
		}
		curve := f.Term(f.P() - 1) // added last
		held(t, "curve", curve.Estimate, want.Curve.Estimate, tight, float64(want.Curve.SE))
		held(t, "curve se", f.SD*curve.Length, want.Curve.SE, tight, 0)
	})
}

// TestLinearityScores holds the statistic and the effect that the floor judges.
func TestLinearityScores(t *testing.T) {
	type values struct {
		Columns []struct {
			Kind, Of string
			T, RMS   value
		}
		Statistic value
		DF        value
	}
	eachReference(t, "linearity_scores", func(t *testing.T, c remedyCase, want values) {
		chance, reason := rules.Linearity.Chance(c.pass(t))
		if chance == nil {
			t.Fatal(reason)
		}
		test := chance.Members[0].Test
		held(t, "statistic", test.Value, want.Statistic, tight, 0)
		held(t, "df", test.DF[0], want.DF, 0, 0)
		held(t, "p", test.P, value(min(1, float64(len(want.Columns))*numeric.StudentTwoSided(float64(want.Statistic), float64(want.DF)))), tight, 0)
		strongest, largest := "", 0.0
		for _, column := range want.Columns {
			largest = max(largest, float64(column.RMS))
			if math.Abs(float64(column.T)) > float64(want.Statistic)*(1-1e-9) && strongest == "" {
				strongest = column.Kind
				if column.Kind == "covariate" {
					strongest = "bend over"
				}
				if column.Of != "all" {
					strongest += map[bool]string{true: " ", false: " in "}[column.Kind == "covariate"] + column.Of
				}
			}
		}
		if test.Name != "score t of a "+strongest {
			t.Errorf("the statistic is the %q, want %q", test.Name, strongest)
		}
		if len(chance.Members) == 1 { // else the lack of fit has a part in it
			held(t, "effect against the floor", chance.Floor.Effect, value(largest), tight, 1e-3)
		}
	})
}

func TestVarianceMembers(t *testing.T) {
	type values struct {
		Members []struct {
			Predictor string
			LM        value
		} `json:"per_predictor"`
		Koenker value `json:"koenker_lm"`
	}
	eachReference(t, "variance_members", func(t *testing.T, c remedyCase, want values) {
		chance, reason := rules.ConstantVariance.Chance(c.pass(t))
		if chance == nil {
			t.Fatal(reason)
		}
		held(t, "Koenker", chance.Members[0].Test.Value, want.Koenker, tight, 1e-3)
		for k, w := range want.Members {
			test := chance.Members[1+k].Test
			if test.Name != "score of the spread along "+w.Predictor {
				t.Errorf("member %d is %q, want that of %s", 1+k, test.Name, w.Predictor)
			}
			held(t, w.Predictor, test.Value, w.LM, tight, 1e-3)
		}
	})
}

func TestLackOfFit(t *testing.T) {
	type values struct {
		Member   bool
		F        value
		DF1, DF2 value
		P, RMS   value
	}
	eachReference(t, "lack_of_fit", func(t *testing.T, c remedyCase, want values) {
		chance, reason := rules.Linearity.Chance(c.pass(t))
		if chance == nil {
			t.Fatal(reason)
		}
		if (len(chance.Members) == 2) != want.Member {
			t.Fatalf("%d members, lack of fit among them: %v", len(chance.Members), want.Member)
		}
		if want.Member {
			test := chance.Members[1].Test
			held(t, "member F", test.Value, want.F, tight, 0)
			held(t, "df1", test.DF[0], want.DF1, 0, 0)
			held(t, "df2", test.DF[1], want.DF2, 0, 0)
			held(t, "p", test.P, want.P, tight, 0)
			if chance.Floor.Effect < float64(want.RMS)*(1-tight) {
				t.Errorf("effect %v against the floor, the lack of fit alone is %v", chance.Floor.Effect, want.RMS)
			}
		}
		r := c.audit(t, nil)
		agree(t, "lack_of_fit_f", figureOf(r, "linearity", "lack_of_fit_f"), want.F, tight, 0)
		agree(t, "lack_of_fit_p", figureOf(r, "linearity", "lack_of_fit_p"), want.P, tight, 0)
	})
}

// TestLogResponse: the powers of the set decide whether the remedy applies, and
// which other scale is named when it does not.
func TestLogResponse(t *testing.T) {
	type values struct {
		Lambda    value
		Low       value    `json:"set_low"`
		High      value    `json:"set_high"`
		Zero      bool     `json:"zero_in_set"`
		One       bool     `json:"one_in_set"`
		Nearest   *float64 `json:"nearest_named"`
		Estimates []struct {
			refEstimate
			Percent value
		} `json:"log_slopes"`
		Equal *refF `json:"log_equal_slopes"`
	}
	powers := map[float64]string{-1: "the reciprocal would", -0.5: "the reciprocal square root would", 0.5: "the square root would", 2: "the square would"}
	eachReference(t, "box_cox", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		profile, positive := numeric.BoxCoxProfile(p.Design.Y, p.Fit.Basis)
		if !positive {
			t.Fatal("the response is not positive")
		}
		held(t, "lambda", profile.Best, want.Lambda, 1e-12, 0) // points of one grid
		held(t, "low", profile.Low, want.Low, 1e-12, 0)
		held(t, "high", profile.High, want.High, 1e-12, 0)

		_, err := remedy.LogResponse.Try(startOf(p))
		switch {
		case want.Zero && !want.One:
			if err != nil {
				t.Errorf("not tried: %v", err)
			}
		case err == nil:
			t.Error("tried, though the rows do not ask for the logarithm")
		case want.One:
			if !strings.Contains(err.Error(), "do not ask for another scale") {
				t.Errorf("not tried since %v", err)
			}
		case want.Nearest == nil:
			if strings.Contains(err.Error(), "would") {
				t.Errorf("names a scale, none suits: %v", err)
			}
		default:
			if !strings.Contains(err.Error(), "; "+powers[*want.Nearest]) {
				t.Errorf("%v, want %s", err, powers[*want.Nearest])
			}
		}

		f, err := model.NewFit(p.Design.OnLogScale())
		if err != nil {
			t.Fatal(err)
		}
		a := f.Answers(0.95)
		if a.Scale != "log" {
			t.Errorf("the scale is %q", a.Scale)
		}
		heldF(t, a, want.Equal, tight)
		for _, w := range want.Estimates {
			e := slopeOf(t, a, w.Of)
			held(t, w.Of, e.Value, w.Estimate, tight, float64(w.SE))
			held(t, w.Of+" pooled se", e.PooledSE, w.SE, tight, 0)
			held(t, w.Of+" percent", 100*math.Expm1(e.Value), w.Percent, tight, 0)
		}
	})
}

// TestLogLinearVariance: the minimum is flat, so the spread ratio is held to
// 1e-6 and what is summed over the rows to 1e-8.
func TestLogLinearVariance(t *testing.T) {
	type values struct {
		Ratio value `json:"spread_ratio"`
		Log   value `json:"sum_log_v"`
		RSS   value `json:"rss_weighted"`
		None  value `json:"score_none"`
		Score value `json:"score_weights"`
	}
	eachReference(t, "log_linear_variance", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		chance, reason := rules.ConstantVariance.Chance(p)
		if chance == nil {
			t.Fatal(reason)
		}
		held(t, "spread ratio", chance.Floor.Effect, want.Ratio, 1e-6, 0)
		v := numeric.LogLinearVariance(p.Fit.Residual, p.Fit.Leverage, p.Fit.RegressorColumns())
		logs := 0.0
		for _, s := range v {
			logs += math.Log(s)
		}
		held(t, "sum of ln v", logs, want.Log, tight, 1)
		f, err := model.NewFit(p.Design.WithVariances(v))
		if err != nil {
			t.Fatal(err)
		}
		held(t, "weighted RSS", f.RSS, want.RSS, 1e-6, 0)
		n := float64(f.N())
		held(t, "score without", n*math.Log(p.Fit.RSS/n), want.None, tight, 1)
		held(t, "score", logs+n*math.Log(f.RSS/n)+float64(f.P()-1)*math.Log(n), want.Score, 1e-6, 1)
	})
}

// TestSetAsideOne: the row is the one that outliers names. On their own lines
// the pooled standard errors are compared.
func TestSetAsideOne(t *testing.T) {
	type values struct {
		Row       int
		RSS       value
		Score     value
		Estimates []refEstimate
		Equal     *refF `json:"equal_slopes"`
	}
	eachReference(t, "set_aside_one", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		row, _ := p.Fit.Diagnostics().LargestExternal()
		if at := p.Design.Rows[row] + 1; at != want.Row {
			t.Fatalf("the row furthest off is %d, want %d", at, want.Row)
		}
		s := startOf(p)
		s.Target.Rows = []int{row}
		a := try(t, remedy.SetAside, s)
		heldF(t, a, want.Equal, tight)
		for _, w := range want.Estimates {
			if first, second, isPair := w.pair(); isPair {
				pair := pairOf(t, a, first, second)
				held(t, w.Of, pair.Value, w.Estimate, tight, float64(w.SE))
				held(t, w.Of+" se", pair.SE, w.SE, tight, 0)
				continue
			}
			e := slopeOf(t, a, w.Of)
			held(t, w.Of, e.Value, w.Estimate, tight, float64(w.SE))
			held(t, w.Of+" pooled se", e.PooledSE, w.SE, tight, 0)
		}
		d, err := remedy.SetAside.Edit(s)
		if err != nil {
			t.Fatal(err)
		}
		f, err := model.NewFit(d)
		if err != nil {
			t.Fatal(err)
		}
		n := float64(p.Fit.N())
		held(t, "RSS", f.RSS, want.RSS, tight, 0)
		held(t, "score", n*math.Log(f.RSS/n)+2*math.Log(n), want.Score, tight, 1)
	})
}

// TestRobustLine: an iteration ends within 1e-7 of the estimate. Below 20 rows
// in a group the remedy refuses.
func TestRobustLine(t *testing.T) {
	type values struct {
		Groups []struct {
			Group     string
			Rows      int
			Scale     value
			Intercept value
			Slope     value
			SE, DF    value
			T, P      value
			Low       value `json:"ci_low"`
			High      value `json:"ci_high"`
		}
	}
	tried := 0
	eachReference(t, "mm_line", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		for _, g := range want.Groups {
			if g.Rows < 20 {
				if applies(t, remedy.RobustLine, startOf(p)) {
					t.Errorf("tried with a group of %d rows", g.Rows)
				}
				return
			}
		}
		tried++
		a := try(t, remedy.RobustLine, startOf(p))
		for _, w := range want.Groups {
			e := slopeOf(t, a, w.Group)
			se := float64(w.SE)
			held(t, w.Group+" slope", e.Value, w.Slope, 1e-7, se)
			held(t, w.Group+" intercept", e.Intercept, w.Intercept, 1e-7, 0)
			held(t, w.Group+" se", e.SE, w.SE, 1e-7, 0)
			held(t, w.Group+" df", e.DF, w.DF, 0, 0)
			held(t, w.Group+" p", e.P, w.P, 1e-6, 0) // far out p moves by the 50th power of t
			held(t, w.Group+" low", e.Low, w.Low, 1e-7, se)
			held(t, w.Group+" high", e.High, w.High, 1e-7, se)
		}
	})
	if tried < 4 {
		t.Errorf("only %d cases were large enough", tried)
	}
}

// TestAndersonDarling holds the statistic on the residuals of each fit; the
// rule asks it of large tables only, which these are not.
func TestAndersonDarling(t *testing.T) {
	type values struct {
		Star value `json:"a_star"`
		P    value
	}
	eachReference(t, "anderson_darling", func(t *testing.T, c remedyCase, want values) {
		a := numeric.AndersonDarlingStatistic(c.pass(t).Fit.Residual)
		held(t, "A*", a, want.Star, tight, 0)
		held(t, "p", numeric.AndersonDarlingP(a), want.P, 1e-7, 1e-12) // in its tail p moves by the 30th power of A*
	})
}

// TestTukeyKramer: quadrature here and there agree to 1e-7.
func TestTukeyKramer(t *testing.T) {
	type values struct {
		Pairs []struct {
			First, Second  string
			Difference, SE value
			Low, High, P   value
		}
		Detectable value `json:"detectable_difference"`
	}
	eachReference(t, "tukey_kramer", func(t *testing.T, c remedyCase, want values) {
		d := c.audit(t, nil).Difference
		if d == nil {
			t.Fatal("no difference")
		}
		if len(d.Pairs) != len(want.Pairs) {
			t.Fatalf("%d pairs, want %d", len(d.Pairs), len(want.Pairs))
		}
		for k, w := range want.Pairs {
			g, se := d.Pairs[k], float64(w.SE)
			name := w.First + " and " + w.Second
			if g.Between != [2]string{w.First, w.Second} {
				t.Errorf("pair %d is between %v, want %s", k, g.Between, name)
			}
			agree(t, name, g.Difference, w.Difference, tight, se)
			agree(t, name+" se", g.SE, w.SE, tight, 0)
			agree(t, name+" low", g.CI[0], w.Low, 1e-7, se)
			agree(t, name+" high", g.CI[1], w.High, 1e-7, se)
			agree(t, name+" p", g.PTukey, w.P, 1e-7, 1)
		}
		agree(t, "detectable", d.Detectable, want.Detectable, 1e-7, 0)
	})
}

// spreadOf gives the SD of each row in the errors of a trouble that only scales
// normal deviates: what it drew over the deviates themselves.
func spreadOf(trouble rules.Trouble, n int) []float64 {
	z := make([]float64, n)
	trouble.New()(rand.New(rand.NewPCG(7, 7)), z)
	deviates := rand.New(rand.NewPCG(7, 7))
	for i := range z {
		z[i] /= deviates.NormFloat64()
	}
	return z
}

// TestConsequentialFan: a bisection of 40 steps ends within 1e-6. The three
// entries without a table are made designs of two groups of 25, whose response
// does not matter.
func TestConsequentialFan(t *testing.T) {
	type values struct {
		Rho       value
		Direction string
	}
	type made struct {
		Rows, Groups int
		Shape        string
	}
	eachReference(t, "consequential_fan", func(t *testing.T, c remedyCase, want values) {
		var p *rules.Pass
		if c.Data != "" {
			p = c.pass(t)
		} else {
			var m made
			if err := json.Unmarshal(c.Settings, &m); err != nil {
				t.Fatal(err)
			}
			p = madeDesign(t, m.Rows, m.Groups, m.Shape)
		}
		chance, reason := rules.ConstantVariance.Chance(p)
		if chance == nil {
			t.Fatal(reason)
		}
		sd := spreadOf(chance.Breach(), p.Fit.N())
		held(t, "rho", slices.Max(sd)/slices.Min(sd), want.Rho, 1e-6, 0)
		square := 0.0
		for _, s := range sd {
			square += s * s
		}
		held(t, "mean square", square/float64(len(sd)), 1, 1e-9, 0)
		x := p.Design.X()
		low, high := slices.Index(x, slices.Min(x)), slices.Index(x, slices.Max(x))
		if up := sd[high] > sd[low]; c.Data != "" && up != (want.Direction == "up") { // made designs are symmetric or tie
			t.Errorf("the wide end is at the top: %v, want %s", up, want.Direction)
		}
	})
}

// madeDesign is rows in equal groups, x at the same places in each.
func madeDesign(t *testing.T, rows, groups int, shape string) *rules.Pass {
	t.Helper()
	var b strings.Builder
	b.WriteString("g,x,y\n")
	own := rows / groups
	for i := range rows {
		u := (float64(i%own) + 0.5) / float64(own)
		x := u
		switch shape {
		case "normal":
			x = numeric.NormalQuantile(u)
		case "lognormal":
			x = math.Exp(numeric.NormalQuantile(u))
		}
		fmt.Fprintf(&b, "%c,%.17g,%d\n", 'a'+i/own, x, (i*i)%7)
	}
	table, err := readers.Read("made.csv", strings.NewReader(b.String()), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return passOf(t, table, model.Roles{Response: "y", Predictors: []string{"x"}, Group: "g"})
}

func TestInfluenceBound(t *testing.T) {
	eachReference(t, "influence_bound", func(t *testing.T, c remedyCase, want struct{ Statistic, P value }) {
		chance, reason := rules.Influence.Chance(c.pass(t))
		if chance == nil {
			t.Fatal(reason)
		}
		held(t, "statistic", chance.Members[0].Test.Value, want.Statistic, tight, 0)
		held(t, "p", chance.Members[0].Test.P, want.P, tight, 0)
		held(t, "closed p", chance.Members[0].ClosedP(float64(want.Statistic)), want.P, tight, 0)
	})
}

func TestPredictorError(t *testing.T) {
	type values struct {
		Groups []struct {
			Group        string
			Lambda       value
			Slope        value
			Corrected    value
			SE           value `json:"own_se"`
			SECorrected  value `json:"own_se_corrected"`
			PooledSE     value `json:"pooled_se"`
			PooledSECorr value `json:"pooled_se_corrected"`
		}
	}
	eachReference(t, "predictor_error", func(t *testing.T, c remedyCase, want values) {
		var s struct {
			SD float64 `json:"sd_u"`
		}
		if err := json.Unmarshal(c.Settings, &s); err != nil {
			t.Fatal(err)
		}
		r := c.audit(t, func(settings *rules.Settings) { settings.PredictorError = s.SD })
		f := findingOf(t, r, "predictor-error")
		reliability, corrected := f.Evidence["reliability"].(map[string]any), f.Evidence["corrected_slopes"].(map[string]any)
		breached := false
		for _, w := range want.Groups {
			key := w.Group
			if key == "all" {
				key = "the table"
			}
			agree(t, w.Group+" reliability", reliability[key].(audit.Number), w.Lambda, tight, 0)
			agree(t, w.Group+" corrected", corrected[key].(audit.Number), w.Corrected, tight, 0)
			breached = breached || math.Abs(float64(w.Corrected-w.Slope)) > float64(w.SE)/2
		}
		if got := f.State == audit.Warn || f.State == audit.Stop; got != breached {
			t.Errorf("%s, a correction by more than half a standard error: %v", f.State, breached)
		}
		start := startOf(c.pass(t))
		start.Target.Reliability = map[string]float64{}
		for _, w := range want.Groups {
			start.Target.Reliability[strings.TrimPrefix(w.Group, "all")] = float64(w.Lambda)
		}
		a := try(t, remedy.CorrectSlopes, start)
		for _, w := range want.Groups {
			e := slopeOf(t, a, w.Group)
			held(t, w.Group+" slope", e.Value, w.Corrected, tight, 0)
			held(t, w.Group+" se", e.SE, w.SECorrected, tight, 0)
		}
	})
}

// resampled is how often the remedies that resample draw anew.
const resampled = 1999

// withinChance holds a p found by resampling to the exact one: within four
// standard errors of that many draws, and the one that is always added.
func withinChance(t *testing.T, what string, got float64, want value) {
	t.Helper()
	exact := float64(want)
	if se := math.Sqrt(exact * (1 - exact) / resampled); !(math.Abs(got-exact) <= 4*se+1.0/resampled) {
		t.Errorf("%s: p %v, exactly %v, give or take %.2g", what, got, exact, se)
	}
}

func TestPermutedGroups(t *testing.T) {
	eachReference(t, "permuted_groups", func(t *testing.T, c remedyCase, want struct{ F, P value }) {
		p := c.pass(t)
		a := try(t, remedy.PermutedGroups, startOf(p))
		held(t, "F", a.Difference.F, want.F, tight, 0)
		withinChance(t, "permutation", a.Difference.P, want.P)
		if !slices.Equal(a.Slopes, p.Answers.Slopes) {
			t.Error("a slope has changed")
		}
	})
}

func TestWildBootstrap(t *testing.T) {
	type values struct {
		Estimates []struct {
			Of       string
			Estimate value
			SE       value `json:"hc3_se"`
			T, P     value
			Held     []value `json:"t_held"`
		}
	}
	eachReference(t, "wild_bootstrap", func(t *testing.T, c remedyCase, want values) {
		a := try(t, remedy.WildBootstrap, startOf(c.pass(t)))
		for _, w := range want.Estimates {
			sizes := make([]float64, len(w.Held))
			for k, h := range w.Held {
				sizes[k] = math.Abs(float64(h))
			}
			slices.Sort(sizes)
			check := func(estimate, se, tt, p, low, high float64) {
				held(t, w.Of, estimate, w.Estimate, tight, 0)
				held(t, w.Of+" se", se, w.SE, tight, 0)
				held(t, w.Of+" t", tt, w.T, tight, 0)
				withinChance(t, w.Of, p, w.P)
				// The 0.95 quantile of draws lies between the exact ones four standard
				// errors of its share to either side.
				half, slack := (high-low)/2/se, 4*math.Sqrt(0.95*0.05/resampled)
				least, most := numeric.Quantile(sizes, 0.95-slack), numeric.Quantile(sizes, 0.95+slack)
				if !(half >= least*(1-tight) && half <= most*(1+tight)) {
					t.Errorf("%s: half-width %v standard errors, want %v to %v", w.Of, half, least, most)
				}
			}
			if first, second, isPair := (refEstimate{Of: w.Of}).pair(); isPair {
				p := pairOf(t, a, first, second)
				check(p.Value, p.SE, p.T, p.P, p.Low, p.High)
				withinChance(t, "the difference", a.Difference.P, w.P)
				continue
			}
			e := slopeOf(t, a, w.Of)
			check(e.Value, e.SE, e.T, e.P, e.Low, e.High)
		}
	})
}

// TestFragilityPaths: rows may be deleted in another order where two of them
// tie.
func TestFragilityPaths(t *testing.T) {
	type values struct {
		Limit   int
		Answers []struct {
			Of    string
			Clear bool
			K     *int
			KRows []int `json:"k_rows"`
			KSign *int  `json:"k_sign"`
			Path  []struct {
				Row  int
				Tied []int
			}
		}
	}
	asked := 0
	eachReference(t, "fragility", func(t *testing.T, c remedyCase, want values) {
		p := c.pass(t)
		for _, w := range want.Answers {
			if !w.Clear {
				continue
			}
			asked++
			var q model.Question
			var ok bool
			if strings.Contains(w.Of, " less ") {
				q, ok = p.Fit.DifferenceQuestion()
			} else {
				q, ok = p.Fit.SlopeQuestion(max(0, slices.Index(p.Design.Groups, w.Of)))
			}
			if !ok {
				t.Fatalf("%s cannot be asked", w.Of)
			}
			got := q.Greedy(0.95, want.Limit)
			if got.Flip != orZero(w.K) || got.Reverse != orZero(w.KSign) {
				t.Errorf("%s: %d rows to flip and %d to reverse, want %d and %d", w.Of, got.Flip, got.Reverse, orZero(w.K), orZero(w.KSign))
			}
			if len(got.Rows) != len(w.KRows) {
				t.Fatalf("%s: rows %v, want %v", w.Of, got.Rows, w.KRows)
			}
			for k, i := range got.Rows {
				if row := p.Design.Rows[i] + 1; row != w.KRows[k] && !slices.Contains(w.Path[k].Tied, row) {
					t.Errorf("%s: row %d goes in step %d, want %v", w.Of, row, k+1, w.Path[k].Tied)
				}
			}
		}
	})
	if asked < 10 {
		t.Errorf("only %d answers were asked", asked)
	}
}

func orZero(k *int) int {
	if k == nil {
		return 0
	}
	return *k
}

// TestLevelErrors: where the lack of fit between replicated predictor values is
// what alarms, their readings may share an error, and the interval that counts
// levels is that of the reference with the level as subject.
func TestLevelErrors(t *testing.T) {
	eachReference(t, "cr2", func(t *testing.T, c remedyCase, want struct{ Estimates []refEstimate }) {
		if c.Case != "toothgrowth_levels" {
			return
		}
		c.Subject = nil
		f := findingOf(t, c.audit(t, func(s *rules.Settings) { s.Replicates = 0 }), "linearity")
		if !strings.Contains(f.Message, "lack-of-fit F") {
			t.Fatalf("the lack of fit is not what alarms: %s", f.Message)
		}
		for _, r := range f.Remedies {
			if r.Remedy != remedy.LevelErrors.Name {
				continue
			}
			if !r.Tried {
				t.Fatal(*r.Why)
			}
			for k, got := range r.Slopes {
				w := want.Estimates[k]
				agree(t, w.Of, got.Slope, w.Estimate, tight, 0)
				agree(t, w.Of+" se", got.SE, w.SE, tight, 0)
				agree(t, w.Of+" df", got.DF, w.DF, tight, 0)
				agree(t, w.Of+" low", got.CI[0], w.Low, tight, 0)
			}
			return
		}
		t.Error("the remedy is not there")
	})
}
