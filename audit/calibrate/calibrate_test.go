package calibrate

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"footing/rules"
)

func TestReplicates(t *testing.T) {
	for _, c := range []struct {
		n, asked int
		alpha    float64
		want     int
	}{
		{12, 0, 0.05, 1999},
		{500, 0, 0.05, 1999},
		{501, 0, 0.05, 999},
		{2000, 0, 0.05, 999},
		{50, 19, 0.05, 19},
		{50, 1, 0.05, 19}, // 0.05 of 20 is the first whole number
		{50, 20, 0.05, 39},
		{50, 500, 0.05, 519},
		{50, 0, 0.01, 1999},
		{50, 100, 0.01, 199},
		{50, 5, 0.1, 9},
		{50, 0, 0.03, 1999},
		{50, 1, 1.0 / 3, 2},
	} {
		if got := Replicates(c.n, c.asked, c.alpha); got != c.want {
			t.Errorf("%d rows, %d asked, alpha %v: %d tables, want %d", c.n, c.asked, c.alpha, got, c.want)
		}
	}
	rapid.Check(t, func(rt *rapid.T) {
		asked := rapid.IntRange(1, 5000).Draw(rt, "asked")
		alpha := float64(rapid.IntRange(1, 50).Draw(rt, "percent")) / 100
		got := Replicates(50, asked, alpha)
		whole := alpha * float64(got+1)
		if got < asked || got > asked+100 || math.Abs(whole-math.Round(whole)) > 1e-9 || math.Round(whole) < 1 {
			rt.Fatalf("%d asked at %v: %d, of which alpha is %v", asked, alpha, got, whole)
		}
	})
}

// drawNull makes a null table of statistics, some of them tied, for rules with
// one to three members each. Row 0 is the observed table.
func drawNull(t *rapid.T) (n *Null, rows [][]float64) {
	f := &family{first: []int{0}}
	for k := range rapid.IntRange(1, 4).Draw(t, "rules") {
		f.names = append(f.names, string(rune('a'+k)))
		f.first = append(f.first, f.members()+rapid.IntRange(1, 3).Draw(t, "members"))
	}
	value := rapid.Map(rapid.IntRange(0, 30), func(v int) float64 { return float64(v) / 7 })
	for range rapid.IntRange(20, 60).Draw(t, "tables") + 1 {
		rows = append(rows, rapid.SliceOfN(value, f.members(), f.members()).Draw(t, "statistics"))
	}
	d := &drawer{family: f, pass: &rules.Pass{Settings: rules.Settings{FalseAlarm: 0.05}}}
	return newNull(d, rows[0], rows[1:]), rows
}

// counted is the share of all rows for which a claim holds.
func counted(rows int, claim func(s int) bool) float64 {
	count := 0
	for s := range rows {
		if claim(s) {
			count++
		}
	}
	return float64(count) / float64(rows)
}

// TestNullByDefinition computes every p anew as it is defined, by counting.
func TestNullByDefinition(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, rows := drawNull(rt)
		f := n.family
		size := len(rows)
		rule := make([][]float64, len(f.names)) // per rule, per row
		for k := range f.names {
			least := make([]float64, size)
			for r := range rows {
				least[r] = 1
				for m := f.first[k]; m < f.first[k+1]; m++ {
					p := counted(size, func(s int) bool { return rows[s][m] >= rows[r][m] })
					if p != n.member[m][r] {
						rt.Fatalf("member %d, row %d: p %v, want %v", m, r, n.member[m][r], p)
					}
					least[r] = min(least[r], p)
				}
			}
			rule[k] = least
			if f.first[k+1]-f.first[k] > 1 {
				rule[k] = make([]float64, size)
				for r := range rows {
					rule[k][r] = counted(size, func(s int) bool { return least[s] <= least[r] })
				}
			}
			if !slices.Equal(rule[k], n.rule[k]) {
				rt.Fatalf("rule %d: p %v, want %v", k, n.rule[k], rule[k])
			}
		}

		order := make([]int, len(rule))
		for k := range order {
			order[k] = k
		}
		slices.SortStableFunc(order, func(a, b int) int {
			if rule[a][0] < rule[b][0] {
				return -1
			}
			if rule[a][0] > rule[b][0] {
				return 1
			}
			return 0
		})
		joint, so := n.stepDown(), 0.0
		for at, k := range order {
			so = max(so, counted(size, func(s int) bool {
				least := 1.0
				for _, later := range order[at:] {
					least = min(least, rule[later][s])
				}
				return least <= rule[k][0]
			}))
			if joint[k] != so {
				rt.Fatalf("rule %d: joint p %v, want %v", k, joint[k], so)
			}
		}
	})
}

// TestStepDownIsMonotone: a joint p is never below the rule's own, a smaller p
// never has a larger joint one, and the least is that of the whole family.
func TestStepDownIsMonotone(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, rows := drawNull(rt)
		joint := n.stepDown()
		least := 1.0
		for a := range joint {
			least = min(least, joint[a])
			if joint[a] < n.rule[a][0] || joint[a] > 1 {
				rt.Fatalf("joint p %v of p %v", joint[a], n.rule[a][0])
			}
			for b := range joint {
				if n.rule[a][0] < n.rule[b][0] && joint[a] > joint[b] {
					rt.Fatalf("p %v and %v have joint p %v and %v", n.rule[a][0], n.rule[b][0], joint[a], joint[b])
				}
			}
		}
		smallest := 1.0
		for k := range n.rule {
			smallest = min(smallest, n.rule[k][0])
		}
		whole := counted(len(rows), func(s int) bool {
			for k := range n.rule {
				if n.rule[k][s] <= smallest {
					return true
				}
			}
			return false
		})
		if least != whole {
			rt.Fatalf("least joint p %v, of the whole family %v", least, whole)
		}
	})
}

// TestCriticalKeepsTheRate: at the critical p the family keeps its rate, and at
// the next attained one it does not; a rule's p at or below it is an alarm of
// the least p exactly when its joint p is.
func TestCriticalKeepsTheRate(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, rows := drawNull(rt)
		least := make([]float64, len(rows))
		for s := range rows {
			least[s] = 1
			for k := range n.rule {
				least[s] = min(least[s], n.rule[k][s])
			}
		}
		share := func(p float64) float64 {
			return counted(len(rows), func(s int) bool { return least[s] <= p })
		}
		const slack = 1 + 1e-12
		if got := share(n.critical); got > 0.05*slack {
			rt.Fatalf("at the critical p %v the rate is %v", n.critical, got)
		}
		next := math.Inf(1)
		for _, p := range least {
			if p > n.critical {
				next = min(next, p)
			}
		}
		if !math.IsInf(next, 1) && share(next) <= 0.05*slack {
			rt.Fatalf("the critical p is %v, and %v keeps the rate too", n.critical, next)
		}
		if first := slices.Min(n.stepDown()); (first <= 0.05*slack) != (least[0] <= n.critical) {
			rt.Fatalf("least joint p %v, least p %v, critical %v", first, least[0], n.critical)
		}
	})
}

// TestNewRowReadsTheNull: the p of a row of the null itself is the one it has
// there.
func TestNewRowReadsTheNull(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, rows := drawNull(rt)
		for k := range n.rule {
			for r, row := range rows {
				if got := n.ruleP(k, row); got != n.rule[k][r] {
					rt.Fatalf("rule %d, row %d: p %v, want %v", k, r, got, n.rule[k][r])
				}
			}
		}
	})
}

// TestPointIsReachedByFew: at most alpha of the rows reach a member's point, and
// a value just below it more.
func TestPointIsReachedByFew(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, rows := drawNull(rt)
		for m := range rows[0] {
			point := n.point(m)
			reach := func(v float64) float64 {
				return counted(len(rows), func(s int) bool { return rows[s][m] >= v })
			}
			if reach(point) > 0.05*(1+1e-12) {
				rt.Fatalf("%v of the rows reach the point %v", reach(point), point)
			}
			below := math.Inf(-1)
			for _, row := range rows {
				if row[m] < point {
					below = max(below, row[m])
				}
			}
			if !math.IsInf(below, -1) && reach(below) <= 0.05*(1+1e-12) {
				rt.Fatalf("the point is %v, and %v is reached by %v of the rows", point, below, reach(below))
			}
		}
	})
}

func TestPointOfClosedP(t *testing.T) {
	got := pointOf(func(v float64) float64 { return math.Exp(-v) }, 0.05)
	if want := -math.Log(0.05); math.Abs(got-want) > 1e-9 {
		t.Errorf("the point is %v, want %v", got, want)
	}
}

// TestTiesCount: values that differ by rounding are tied, and so are infinite
// ones.
func TestTiesCount(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		sorted []float64
		v      float64
		want   float64
	}{
		{[]float64{1, 2, 3, 4}, 3, 0.5},
		{[]float64{4 - 1e-15, 4 - 2e-16, 4, 4 + 1e-15}, 4 + 1e-15, 1},
		{[]float64{1, 2, inf, inf}, inf, 0.5},
		{[]float64{1, 2, 3, inf}, 1, 1},
		{[]float64{0, 0, 0, 1}, 0, 1},
		{[]float64{1, 2, 3, 4}, 3 + 1e-6, 0.25},
	} {
		if got := exceeding(c.sorted, c.v); got != c.want {
			t.Errorf("%v of %v: %v, want %v", c.v, c.sorted, got, c.want)
		}
	}
}
