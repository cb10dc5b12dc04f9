package audit_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"footing/audit/calibrate"
	"footing/rules"
	"footing/rules/numeric"
)

func designName(n, groups int, shape string) string {
	return fmt.Sprintf("F(%d,%d) %s", n, groups, shape)
}

// sound measures how often any rule alarms in sound tables, floors aside, over
// several nulls: one null alone adds to the error.
func (s *study) sound(*testing.T) {
	nulls, tables, size := s.pick(20, 4), s.pick(4000, 1000), s.pick(replicates, 1999)
	for _, c := range []struct {
		n, groups int
		target    float64
		short     bool
	}{
		{12, 2, 5.03, true}, {20, 2, 4.96, false}, {50, 2, 4.98, true}, {100, 2, 5.01, false}, {200, 4, 4.92, false},
	} {
		if !s.full && !c.short {
			continue
		}
		any := 0.0
		for seed := range nulls {
			null := calibrate.Simulate(rules.All, even(c.n, c.groups, "normal").pass(uint64(seed+1), size))
			any += null.Rates("study/sound", tables, soundErrors).Any / float64(nulls)
		}
		tolerance := 0.3
		if !s.full {
			p := c.target / 100
			tolerance = 300 * math.Sqrt(p*(1-p)*(1/float64(nulls*tables)+1/float64(nulls*size)))
		}
		s.value("1", "any joint alarm, sound", designName(c.n, c.groups, "normal"), c.target, 100*any, tolerance, 2)
	}
}

// critical measures what single rules would do each at their own 5 %, and the
// p that holds them together.
func (s *study) critical(*testing.T) {
	tables := s.pick(16000, 2000)
	for _, c := range []struct {
		n           int
		own, target float64
	}{
		{20, 18.2, 0.0125},
		{50, 19.5, 0.0116},
		{200, 20.1, 0.0113},
	} {
		if !s.full && c.n > 50 {
			continue
		}
		own, point := 0.0, 0.0
		for seed := range s.nulls() {
			null := calibrate.Simulate(rules.All, even(c.n, 2, "normal").pass(uint64(seed+1), replicates))
			own += null.Rates("study/own", tables/s.nulls(), soundErrors).AnyOwn / float64(s.nulls())
			point += null.Critical() / float64(s.nulls())
		}
		s.powerShare("2", "any rule at its own 5 %, sound", designName(c.n, 2, "normal"), c.own, 8000, own, tables)
		s.value("3", "critical p of a rule", designName(c.n, 2, "normal"), c.target, point, 0.0012, 4)
	}
}

// powerCase is one design with the power of a rule that is to be reached there.
type powerCase struct {
	n, groups int
	shape     string
	target    float64
	short     bool
}

// ownPower measures the power of a rule at the breach that the audit tells of.
func (s *study) ownPower(t *testing.T, number string, r *rules.Rule, cases ...powerCase) {
	tables := s.pick(16000, 2000)
	for _, c := range cases {
		if !s.full && !c.short {
			continue
		}
		got := s.power(even(c.n, c.groups, c.shape), r, tables, breachOf(t, r))
		s.powerShare(number, r.Name+", own breach", designName(c.n, c.groups, c.shape), c.target, 2000, got, tables)
	}
}

func (s *study) linearity(t *testing.T) {
	s.ownPower(t, "4", rules.Linearity,
		powerCase{20, 2, "normal", 19, false}, powerCase{50, 2, "normal", 69, true}, powerCase{60, 2, "normal", 81, false},
		powerCase{50, 1, "normal", 76, false}, powerCase{50, 2, "lognormal", 71, false})
	tables := s.pick(16000, 2000)
	square := func(v float64) float64 { return v * v }
	wave := func(v float64) float64 { return math.Sin(2 * math.Pi * v) }
	for _, c := range []struct {
		what      string
		n, groups int
		bent      int // groups that are bent
		shape     func(float64) float64
		target    float64
		short     bool
	}{
		{"linearity, one group bent", 50, 2, 1, square, 31, true},
		{"linearity, one group bent", 200, 4, 1, square, 66, false},
		{"linearity, S-shape", 50, 1, 1, wave, 72, true},
		{"linearity, S-shape", 50, 2, 2, wave, 64, false},
	} {
		if !s.full && !c.short {
			continue
		}
		r := even(c.n, c.groups, "normal")
		shift := make([]float64, c.n)
		for _, members := range r.members()[:c.bent] {
			for k, v := range r.offLine(members, c.shape) {
				shift[members[k]] = 0.5 * v
			}
		}
		got := s.power(r, rules.Linearity, tables, fixed(shifted(shift)))
		s.powerShare("5", c.what, designName(c.n, c.groups, "normal"), c.target, 2000, got, tables)
	}
}

func (s *study) normality(t *testing.T) {
	s.ownPower(t, "6", rules.Normality,
		powerCase{20, 2, "normal", 15, false}, powerCase{50, 2, "normal", 46, true}, powerCase{100, 2, "normal", 79, false}, powerCase{200, 2, "normal", 97, false})
}

func (s *study) constantVariance(t *testing.T) {
	for _, c := range []struct {
		shape string
		ratio float64
	}{
		{"normal", 4.76},
		{"uniform", 7.06},
		{"lognormal", 2},
	} {
		p := even(50, 2, c.shape).pass(1, replicates)
		ratio := fanRatio(ownBreach(t, rules.ConstantVariance, p), p.Fit.N())
		s.value("7", "widest over narrowest SD of the fan", designName(50, 2, c.shape), c.ratio, ratio, 0.01, 2)
	}
	s.ownPower(t, "7", rules.ConstantVariance,
		powerCase{50, 2, "normal", 47, true}, powerCase{50, 2, "uniform", 82, true}, powerCase{50, 2, "lognormal", 11, false})
	tables := s.pick(16000, 2000)
	r := even(50, 2, "normal")
	sd := make([]float64, r.n())
	for g, members := range r.members() {
		for _, i := range members {
			sd[i] = float64(2 - g)
		}
	}
	got := s.power(r, rules.ConstantVariance, tables, fixed(scaled(sd)))
	s.powerShare("7", "constant-variance, SD doubled in a group", designName(50, 2, "normal"), 48, 2000, got, tables)
}

// spreadOf gives the largest over the smallest SD of errors that are normal
// deviates times an SD for each row: the same deviates are drawn without it.
func fanRatio(trouble rules.Trouble, n int) float64 {
	z := make([]float64, n)
	trouble.New()(numeric.Stream(1, "study/spread"), z)
	plain := numeric.Stream(1, "study/spread")
	low, high := math.Inf(1), 0.0
	for _, v := range z {
		sd := v / plain.NormFloat64()
		low, high = min(low, sd), max(high, sd)
	}
	return high / low
}

func (s *study) outliers(t *testing.T) {
	s.ownPower(t, "8", rules.Outliers,
		powerCase{20, 1, "normal", 69, true}, powerCase{20, 2, "normal", 55, false}, powerCase{20, 4, "normal", 34, false}, powerCase{200, 2, "normal", 79, false})
}

func (s *study) influence(t *testing.T) {
	s.ownPower(t, "9", rules.Influence,
		powerCase{20, 1, "normal", 73, false}, powerCase{20, 2, "normal", 27, true}, powerCase{50, 2, "normal", 84, false}, powerCase{50, 2, "lognormal", 16, true})
}

// closed measures the joint rate of p-values from formulas in tables too large
// to be simulated.
func (s *study) closed(*testing.T) {
	tables := s.pick(1500, 60)
	for _, c := range []struct {
		n      int
		target float64
		short  bool
	}{
		{2500, 5.4, true},
		{5000, 5.1, false},
	} {
		if !s.full && !c.short {
			continue
		}
		base := even(c.n, 2, "normal").pass(1, 0)
		rate := shares(fmt.Sprintf("closed/%d", c.n), tables, func(_ int, random *rand.Rand) []bool {
			r := drawn(random, c.n, 2, "normal")
			p := withValues(base, r.x, r.y)
			return []bool{anyJoint(calibrate.Judge(rules.All, p, calibrate.Options{}))}
		})
		s.share("13", "any alarm by formulas, sound, no floors", fmt.Sprintf("n %d, 2 groups", c.n), c.target, 1500, rate[0], tables)
	}
}

// anyJoint reports whether some rule's joint p is at most 5 %, floors aside.
func anyJoint(joint map[string]*rules.Joint) bool {
	for _, j := range joint {
		if j.Asked && j.PJoint <= 0.05 {
			return true
		}
	}
	return false
}

// levels measures linearity where predictor values are replicated.
func (s *study) levels(t *testing.T) {
	tables := s.pick(16000, 2000)
	for _, c := range []struct {
		each       int
		bend, step float64
	}{
		{5, 40, 50},
		{10, 79, 90},
	} {
		random := numeric.Stream(1, "study/levels")
		r := rows{}
		for i := range 6 * c.each {
			r.x = append(r.x, float64(1+i%6))
			r.y = append(r.y, random.NormFloat64())
		}
		design := fmt.Sprintf("x 1 to 6, %d each", c.each)
		got := s.power(r, rules.Linearity, tables, breachOf(t, rules.Linearity))
		s.powerShare("14", "linearity, own breach", design, c.bend, 4000, got, tables)
		got = s.power(r, rules.Linearity, tables, fixed(func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				off := random.IntN(6)
				for i := range z {
					z[i] = random.NormFloat64()
					if i%6 == off {
						z[i] += 2
					}
				}
			}
		}))
		s.powerShare("14", "linearity, one level 2 SD off", design, c.step, 4000, got, tables)
	}
}

// rounded measures false alarms where the response is written to a step as wide
// as its scatter.
func (s *study) rounded(*testing.T) {
	tables := s.pick(1500, 100)
	for _, n := range []int{20, 60, 200} {
		if !s.full && n != 60 {
			continue
		}
		base := even(n, 2, "normal").pass(1, s.pick(0, 499))
		rate := shares(fmt.Sprintf("rounded/%d", n), tables, func(table int, random *rand.Rand) []bool {
			r := drawn(random, n, 2, "normal")
			place := random.Float64()
			for i, y := range r.y {
				r.y[i] = math.Round(y + place)
			}
			p := withValues(base, r.x, r.y)
			p.Settings.Seed = uint64(table + 1)
			return []bool{anyJoint(calibrate.Judge(rules.All, p, calibrate.Options{}))}
		})
		s.atMost("15", "any joint alarm, y rounded to 1 SD", fmt.Sprintf("n %d, 2 groups", n), 7, rate[0], tables)
	}
	s.roundedLarge()
}

// roundedLarge is the same where p-values come from formulas, for steps at which
// a normal shape can still be judged.
func (s *study) roundedLarge() {
	const n = 5000
	base := even(n, 2, "normal").pass(1, 0)
	tables := s.pick(400, 16)
	for _, step := range []float64{0.1, 0.25} {
		if !s.full && step != 0.25 {
			continue
		}
		rate := shares(fmt.Sprintf("rounded/large/%v", step), tables, func(table int, random *rand.Rand) []bool {
			r := drawn(random, n, 2, "normal")
			place := random.Float64()
			for i, y := range r.y {
				r.y[i] = step * math.Round(y/step+place)
			}
			p := withValues(base, r.x, r.y)
			p.Settings.Seed = uint64(table + 1)
			return []bool{anyJoint(calibrate.Judge(rules.All, p, calibrate.Options{OnlyAlarms: true}))}
		})
		s.atMost("", fmt.Sprintf("any joint alarm by formulas, y rounded to %v SD", step), fmt.Sprintf("n %d, 2 groups", n), 5, rate[0], tables)
	}
}

// exactness measures the joint rate with a null of its own for every table, at
// predictors of any shape.
func (s *study) exactness(*testing.T) {
	tables := s.pick(8000, 300)
	base := rows{order: []float64{}}
	r := even(20, 2, "normal")
	base.group, base.x, base.y = r.group, r.x, r.y
	for i := range r.n() {
		base.order = append(base.order, float64(i))
	}
	p := base.pass(1, 999)
	names := []string{"normal", "uniform", "lognormal", "discrete"}
	rate := shares("exactness", tables, func(table int, random *rand.Rand) []bool {
		fresh := drawn(random, 20, 2, names[table%len(names)])
		for i := range fresh.x {
			if fresh.x[i] == fresh.x[0] {
				fresh.x[i] += 1e-3 * float64(i) // a group must not hold one value only
			}
		}
		q := withValues(p, fresh.x, fresh.y)
		q.Settings.Seed = uint64(table + 1)
		return []bool{anyJoint(calibrate.Judge(rules.All, q, calibrate.Options{}))}
	})
	s.share("", "any joint alarm, sound, six rules, a null each", "n 20, any x", 5, 2000, rate[0], tables)
}
