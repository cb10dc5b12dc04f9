package rules

import (
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"sort"
	"strconv"
	"strings"
	"testing"

	"footing/rules/model"
)

var study = flag.String("study", "", `"full" runs the studies at full size`)

// soundKind is one kind of sound table.
type soundKind struct {
	name string
	x    func(r *rand.Rand, i, n int) float64
	y    func(r *rand.Rand, x float64, g int) float64
	sort bool
	set  bool // x is written as it was set
}

func line(r *rand.Rand, x float64, g int) float64 {
	return 20 - 0.4*x + 2*float64(g) + 1.2*r.NormFloat64()
}

func soundKinds() []soundKind {
	normal := func(r *rand.Rand, _, _ int) float64 { return 15 + 3*r.NormFloat64() }
	uniform := func(r *rand.Rand, _, _ int) float64 { return 8 + 12*r.Float64() }
	return []soundKind{
		{name: "normal", x: normal, y: line},
		{name: "uniform, sorted", x: uniform, y: line, sort: true},
		{name: "no slope", x: uniform, y: func(r *rand.Rand, _ float64, _ int) float64 { return 6 + r.NormFloat64() }},
		{name: "lognormal", x: func(r *rand.Rand, _, _ int) float64 { return math.Exp(2 + 0.8*r.NormFloat64()) }, y: func(r *rand.Rand, x float64, _ int) float64 {
			return math.Exp(1 + 0.5*math.Log(x) + 0.4*r.NormFloat64())
		}},
		{name: "exponential", x: func(r *rand.Rand, _, _ int) float64 { return 10 * r.ExpFloat64() }, y: func(r *rand.Rand, x float64, _ int) float64 { return 5 + 0.3*x + r.NormFloat64() }},
		{name: "about zero", x: func(r *rand.Rand, _, _ int) float64 { return r.NormFloat64() }, y: func(r *rand.Rand, x float64, _ int) float64 { return 0.3*x + r.NormFloat64() }},
		{name: "six levels", set: true, x: func(_ *rand.Rand, i, _ int) float64 { return float64(900 + 50*(i/2%6)) }, y: func(r *rand.Rand, x float64, _ int) float64 { return 3 + 0.01*(x-900) + 0.4*r.NormFloat64() }},
		{name: "doses by tens", set: true, sort: true, x: func(_ *rand.Rand, i, _ int) float64 { return []float64{0, 1, 10, 100, 1000}[i/2%5] }, y: func(r *rand.Rand, x float64, _ int) float64 { return 3 + 0.002*x + 0.4*r.NormFloat64() }},
		{name: "evenly spaced", x: func(_ *rand.Rand, i, n int) float64 { return 8 + 12*float64(i/2)/float64(n/2-1) }, y: line},
		{name: "evenly spaced, one each", set: true, x: func(_ *rand.Rand, i, n int) float64 { return 5 * float64(i) }, y: func(r *rand.Rand, x float64, _ int) float64 { return 40 + 0.02*x + 3*r.NormFloat64() }},
	}
}

// draw makes one sound table; digits rounds it, to decimals or to significant
// digits.
func (k soundKind) draw(r *rand.Rand, n int, significant bool) *sheet {
	s := &sheet{header: []string{"no", "site", "temperature", "growth"}}
	xs, ys, gs := make([]float64, n), make([]float64, n), make([]int, n)
	for i := range n {
		gs[i] = i % 2
		xs[i] = k.x(r, i, n)
		ys[i] = k.y(r, xs[i], gs[i])
	}
	at := make([]int, n)
	for i := range at {
		at[i] = i
	}
	if k.sort {
		sort.SliceStable(at, func(a, b int) bool { return xs[at[a]] < xs[at[b]] })
	}
	for row, i := range at {
		x := digits3(xs[i], xs, significant)
		if k.set {
			x = fmt.Sprint(xs[i])
		}
		s.add(fmt.Sprintf("F%03d", row+1), []string{"exposed", "sheltered"}[gs[i]], x, digits3(ys[i], ys, significant))
	}
	return s
}

// digits3 rounds to three significant digits, of each value or of the largest.
func digits3(v float64, all []float64, significant bool) string {
	if significant {
		return strconv.FormatFloat(v, 'g', 3, 64)
	}
	largest := max(slices.Max(all), -slices.Min(all))
	places := 2 - int(math.Floor(math.Log10(largest)))
	if places < 0 {
		unit := math.Pow10(-places)
		return strconv.FormatFloat(math.Round(v/unit)*unit, 'f', 0, 64)
	}
	return strconv.FormatFloat(v, 'f', places, 64)
}

// TestTableStudy counts sound tables with any warning of a rule of the table:
// at most 2 % over all kinds of them. The full study (-study full) is what
// README quotes; the short one only holds it to the tolerance of its size.
func TestTableStudy(t *testing.T) {
	each := 8
	if *study == "full" {
		each = 250
	}
	total, alarms := 0, 0
	byRule, byKind := map[string]int{}, map[string]int{}
	for _, kind := range soundKinds() {
		of, n0 := 0, 0
		for _, n := range []int{20, 60, 200, 500} {
			for seed := range each {
				r := rand.New(rand.NewPCG(uint64(seed), uint64(n)))
				p := passOf(t, kind.draw(r, n, seed%2 == 1), model.Roles{Response: "growth", Predictors: []string{"temperature"}, Group: "site", Label: "no"})
				p.Profiles = Profiles{}
				any := false
				for _, rule := range All {
					if rule.Family != OfTable || rule.Needs >= NeedsFit && p.Fit == nil {
						continue
					}
					o, err := rule.Run(p)
					if err != nil {
						t.Fatal(err)
					}
					if o.Answer == Breach {
						any = true
						byRule[rule.Name]++
						if byRule[rule.Name] <= 3 {
							t.Logf("%s, n %d, seed %d: %s: %s", kind.name, n, seed, rule.Name, o.Message)
						}
					}
				}
				n0++
				if any {
					of++
				}
			}
		}
		byKind[kind.name] = of
		total, alarms = total+n0, alarms+of
		if share := float64(of) / float64(n0); share > 0.02+3.5*math.Sqrt(0.02*0.98/float64(n0)) {
			t.Errorf("%s: %d of %d sound tables are warned of", kind.name, of, n0)
		}
	}
	var said []string
	for name, n := range byRule {
		said = append(said, fmt.Sprintf("%s %d", name, n))
	}
	slices.Sort(said)
	t.Logf("%d of %d sound tables are warned of: %s", alarms, total, strings.Join(said, ", "))
	t.Log(byKind)
	if share := float64(alarms) / float64(total); share > 0.02+3.5*math.Sqrt(0.02*0.98/float64(total)) {
		t.Errorf("%d of %d sound tables are warned of, more than 2 %%", alarms, total)
	}
}
