package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"footing/readers"
	"footing/rules/model"
)

// sheet is a table written by a test: a header and rows of cells.
type sheet struct {
	header []string
	rows   [][]string
}

func (s *sheet) add(cells ...any) {
	row := make([]string, len(cells))
	for i, c := range cells {
		row[i] = fmt.Sprint(c)
	}
	s.rows = append(s.rows, row)
}

func (s *sheet) text() string {
	var b strings.Builder
	fmt.Fprintln(&b, strings.Join(s.header, ","))
	for _, row := range s.rows {
		fmt.Fprintln(&b, strings.Join(row, ","))
	}
	return b.String()
}

// kelp draws a sound table: growth over temperature at two sites, n rows.
func kelp(n int, seed uint64) *sheet {
	random := rand.New(rand.NewPCG(seed, 1))
	s := &sheet{header: []string{"site", "temperature (°C)", "growth (mm/day)"}}
	for i := range n {
		t := 8 + 12*random.Float64()
		s.add([]string{"exposed", "sheltered"}[i%2], fmt.Sprintf("%.2f", t), fmt.Sprintf("%.3f", 10-0.4*t+0.7*random.NormFloat64()))
	}
	return s
}

func testSettings() Settings {
	nan := math.NaN()
	return Settings{Confidence: 0.95, FalseAlarm: 0.05, SmallestDifference: nan, StatedSlope: nan, PredictorError: nan, Seed: 1}
}

var kelpRoles = model.Roles{Response: "growth", Predictors: []string{"temperature"}, Group: "site"}

// passOf reads a table and fits the model of the roles; no roles screen it.
func passOf(t *testing.T, s *sheet, roles model.Roles, missing ...string) *Pass {
	t.Helper()
	table, err := readers.Read("table.csv", strings.NewReader(s.text()), readers.Options{Missing: missing})
	if err != nil {
		t.Fatal(err)
	}
	return passOn(t, table, roles)
}

// passOn fits the model of the roles to a table.
func passOn(t *testing.T, table *readers.Table, roles model.Roles) *Pass {
	t.Helper()
	p := &Pass{Table: table, Settings: testSettings()}
	if !roles.Named() {
		return p
	}
	var err error
	if p.Columns, err = model.Resolve(table, roles); err != nil {
		t.Fatal(err)
	}
	p.Design = model.NewDesign(table, p.Columns, roles.CommonSlope)
	if p.Design.N() == 0 {
		return p
	}
	fit, err := model.NewFit(p.Design)
	if err != nil {
		p.NoFit = err.(*model.NoFit)
		return p
	}
	p.Fit, p.Answers = fit, fit.Answers(0.95)
	return p
}

// ask runs a rule; one whose alarm could be chance is judged alone, by the
// textbook p of its tests and Bonferroni.
func ask(t *testing.T, r *Rule, p *Pass) Outcome {
	t.Helper()
	if r.Chance != nil {
		chance, reason := r.Chance(p)
		if chance == nil {
			return notAsked(reason)
		}
		j := &Joint{Chance: chance, Asked: true}
		for m, member := range chance.Members {
			j.Point = append(j.Point, math.Inf(1))
			if member.Test.P < chance.Members[j.Strong].Test.P {
				j.Strong = m
			}
		}
		j.Closed = p.Fit.N() > LargestSimulated
		j.P = min(1, float64(len(chance.Members))*j.Strongest().P)
		j.PJoint = j.P
		j.BelowFloor = j.P <= p.Settings.FalseAlarm && chance.Floor.Below()
		j.Alarm = j.P <= p.Settings.FalseAlarm && !j.BelowFloor
		own := *p
		own.Joint = j
		p = &own
	}
	o, err := r.Run(p)
	if err != nil {
		t.Fatal(err)
	}
	return o
}

// expect checks the answer, words of the message, and the cells pointed at.
func expect(t *testing.T, p *Pass, o Outcome, answer Answer, words string, cells ...string) {
	t.Helper()
	if o.Answer != answer {
		t.Errorf("answer %d, want %d: %s", o.Answer, answer, o.Message)
	}
	if !strings.Contains(o.Message, words) {
		t.Errorf("message %q lacks %q", o.Message, words)
	}
	if cells == nil {
		return
	}
	var got []string
	for _, w := range o.Where {
		switch {
		case w.Stray > 0:
			got = append(got, fmt.Sprint(w.Stray))
		case w.Row < 0:
			got = append(got, w.Column.Title())
		case w.Column == nil:
			got = append(got, fmt.Sprint(p.Table.Row(w.Row)))
		default:
			got = append(got, p.Table.Address(w.Column, w.Row))
		}
	}
	if !slices.Equal(got, cells) {
		t.Errorf("points at %v, want %v", got, cells)
	}
}

// drawn makes a table of n rows in one line, x evenly on 0 to 10, with errors
// by the given function of row and normal deviate.
func drawn(n int, seed uint64, errorAt func(i int, z float64) float64) *sheet {
	random := rand.New(rand.NewPCG(seed, 3))
	s := &sheet{header: []string{"no", "x", "y"}}
	for i := range n {
		x := 10 * float64((i*7)%n) / float64(n-1)
		s.add(i+1, fmt.Sprintf("%.4f", x), fmt.Sprintf("%.6f", 1+x+errorAt(i, random.NormFloat64())))
	}
	return s
}

var plainRoles = model.Roles{Response: "y", Predictors: []string{"x"}}

// meansDrawn makes a table of n rows in two groups, without a predictor.
func meansDrawn(n int, seed uint64, errorAt func(i int, z float64) float64) *sheet {
	random := rand.New(rand.NewPCG(seed, 5))
	s := &sheet{header: []string{"g", "y"}}
	for i := range n {
		s.add([]string{"a", "b"}[i%2], fmt.Sprintf("%.6f", float64(3+i%2)+errorAt(i, random.NormFloat64())))
	}
	return s
}

var meansRoles = model.Roles{Response: "y", Group: "g"}

// normal leaves the deviate as it is.
func normal(_ int, z float64) float64 { return z }
