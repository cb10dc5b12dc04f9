package audit_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"footing/audit"
	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/numeric"
)

// replicates is how many tables make the null of the targets for single rules.
const replicates = 9999

// rows is a table in the making; what is nil is not a column.
type rows struct {
	group    []string
	x, x2, y []float64
	order    []float64
}

func (r rows) n() int { return len(r.y) }

func (r rows) text() string {
	var b strings.Builder
	var header []string
	if r.group != nil {
		header = append(header, "site")
	}
	header = append(header, "temperature")
	if r.x2 != nil {
		header = append(header, "depth")
	}
	if r.order != nil {
		header = append(header, "day")
	}
	header = append(header, "growth")
	b.WriteString(strings.Join(header, ",") + "\n")
	for i := range r.y {
		if r.group != nil {
			b.WriteString(r.group[i] + ",")
		}
		b.WriteString(exact(r.x[i]) + ",")
		if r.x2 != nil {
			b.WriteString(exact(r.x2[i]) + ",")
		}
		if r.order != nil {
			b.WriteString(exact(r.order[i]) + ",")
		}
		b.WriteString(exact(r.y[i]) + "\n")
	}
	return b.String()
}

func exact(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }

func (r rows) roles() model.Roles {
	roles := model.Roles{Response: "growth", Predictors: []string{"temperature"}}
	if r.group != nil {
		roles.Group = "site"
	}
	if r.x2 != nil {
		roles.Predictors = append(roles.Predictors, "depth")
	}
	if r.order != nil {
		roles.Order = "day"
	}
	return roles
}

func (r rows) read() *readers.Table {
	table, err := readers.Read("study.csv", strings.NewReader(r.text()), readers.Options{})
	if err != nil {
		panic(err)
	}
	return table
}

// pass fits the rows; it is what the rules see of a table.
func (r rows) pass(seed uint64, replicates int) *rules.Pass {
	table := r.read()
	columns, err := model.Resolve(table, r.roles())
	if err != nil {
		panic(err)
	}
	p := &rules.Pass{Table: table, Columns: columns, Design: model.NewDesign(table, columns, false), Settings: settings()}
	p.Settings.Seed, p.Settings.Replicates = seed, replicates
	refit(p)
	if p.Design.N() != r.n() {
		panic(fmt.Sprintf("%d rows of %d are used", p.Design.N(), r.n()))
	}
	return p
}

func refit(p *rules.Pass) {
	fit, err := model.NewFit(p.Design)
	if err != nil {
		panic(err)
	}
	p.Fit, p.Answers = fit, fit.Answers(p.Settings.Confidence)
}

// withValues gives the pass with other values in the same rows, which is
// quicker than to read a table anew. A nil x keeps the predictor.
func withValues(p *rules.Pass, x, y []float64) *rules.Pass {
	q, d := *p, *p.Design
	d.Y = y
	if x != nil {
		d.Predictors = [][]float64{x}
	}
	q.Design = &d
	refit(&q)
	return &q
}

// result audits the rows as the command does.
func (r rows) result(seed uint64) *audit.Result {
	s := settings()
	s.Seed = seed
	result, err := audit.Table(r.read(), audit.Request{Roles: r.roles(), Settings: s})
	if err != nil {
		panic(err)
	}
	return result
}

// The shapes of a predictor: a group's values at evenly spaced shares.
var shapes = map[string]func(u float64) float64{
	"normal":    numeric.NormalQuantile,
	"uniform":   func(u float64) float64 { return u },
	"lognormal": func(u float64) float64 { return math.Exp(numeric.NormalQuantile(u)) },
	"discrete":  func(u float64) float64 { return math.Floor(6 * u) },
}

// even gives n rows in equal groups, the predictor of each evenly spaced on a
// shape, with sound errors.
func even(n, groups int, shape string) rows {
	random := numeric.Stream(1, fmt.Sprintf("study/even/%d/%d/%s", n, groups, shape))
	r := rows{}
	size := n / groups
	for g := range groups {
		for i := range size {
			if groups > 1 {
				r.group = append(r.group, string(rune('a'+g)))
			}
			r.x = append(r.x, shapes[shape]((float64(i)+0.5)/float64(size)))
			r.y = append(r.y, random.NormFloat64())
		}
	}
	return r
}

// drawn gives n rows in groups taken in turn, the predictor drawn from a shape,
// with sound errors.
func drawn(random *rand.Rand, n, groups int, shape string) rows {
	r := rows{}
	for i := range n {
		if groups > 1 {
			r.group = append(r.group, string(rune('a'+i%groups)))
		}
		r.x = append(r.x, shapes[shape](random.Float64()))
		r.y = append(r.y, random.NormFloat64())
	}
	return r
}

// members lists the rows of each group of two or more, in the order of labels.
func (r rows) members() [][]int {
	if r.group == nil {
		all := make([]int, r.n())
		for i := range all {
			all[i] = i
		}
		return [][]int{all}
	}
	var all [][]int
	for i, label := range r.group {
		g := int(label[0] - 'a')
		for len(all) <= g {
			all = append(all, nil)
		}
		all[g] = append(all[g], i)
	}
	return all
}

// offLine gives shape(x), x the place in the group's range from 0 to 1, off the
// group's level and line and at a root mean square of 1 over its rows.
func (r rows) offLine(members []int, shape func(v float64) float64) []float64 {
	low, high := math.Inf(1), math.Inf(-1)
	for _, i := range members {
		low, high = min(low, r.x[i]), max(high, r.x[i])
	}
	n := len(members)
	one, line, curve := make([]float64, n), make([]float64, n), make([]float64, n)
	for k, i := range members {
		v := (r.x[i] - low) / (high - low)
		one[k], line[k], curve[k] = 1, v, shape(v)
	}
	numeric.NewBasis([][]float64{one, line}, n).Residual(curve, curve)
	ss := 0.0
	for _, v := range curve {
		ss += v * v
	}
	for k := range curve {
		curve[k] *= math.Sqrt(float64(n) / ss)
	}
	return curve
}

// shifted draws normal errors about a shift.
func shifted(shift []float64) func() func(*rand.Rand, []float64) {
	return func() func(*rand.Rand, []float64) {
		return func(random *rand.Rand, z []float64) {
			for i := range z {
				z[i] = random.NormFloat64() + shift[i]
			}
		}
	}
}

// scaled draws normal errors of the given SD.
func scaled(sd []float64) func() func(*rand.Rand, []float64) {
	return func() func(*rand.Rand, []float64) {
		return func(random *rand.Rand, z []float64) {
			for i := range z {
				z[i] = random.NormFloat64() * sd[i]
			}
		}
	}
}

// soundErrors draws normal errors of unit SD.
func soundErrors() func(*rand.Rand, []float64) {
	return func(random *rand.Rand, z []float64) {
		for i := range z {
			z[i] = random.NormFloat64()
		}
	}
}

// ownBreach is the breach of a rule whose power the audit tells.
func ownBreach(t *testing.T, r *rules.Rule, p *rules.Pass) rules.Trouble {
	t.Helper()
	chance, reason := r.Chance(p)
	if chance == nil {
		t.Fatalf("%s is not asked: %s", r.Name, reason)
	}
	return chance.Breach()
}

// power is how often a rule alarms jointly at errors of the given kind, the mean
// over several nulls.
func (s *study) power(r rows, rule *rules.Rule, tables int, errors func(p *rules.Pass) func() func(*rand.Rand, []float64)) float64 {
	mean := 0.0
	for seed := range s.nulls() {
		p := r.pass(uint64(seed+1), replicates)
		rates := calibrate.Simulate(rules.All, p).Rates("study/"+rule.Name, tables/s.nulls(), errors(p))
		mean += rates.Rule[rule.Name] / float64(s.nulls())
	}
	return mean
}

// fixed gives the same errors for every pass.
func fixed(newErrors func() func(*rand.Rand, []float64)) func(*rules.Pass) func() func(*rand.Rand, []float64) {
	return func(*rules.Pass) func() func(*rand.Rand, []float64) { return newErrors }
}

// breachOf gives the errors of a rule's own breach in each pass.
func breachOf(t *testing.T, r *rules.Rule) func(*rules.Pass) func() func(*rand.Rand, []float64) {
	return func(p *rules.Pass) func() func(*rand.Rand, []float64) { return ownBreach(t, r, p).New }
}
