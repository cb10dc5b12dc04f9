package rules

import (
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"testing"
)

func TestMissingPattern(t *testing.T) {
	p := passOf(t, kelp(40, 41), kelpRoles)
	expect(t, p, ask(t, MissingPattern, p), Sound, "too few")

	s := kelp(40, 41)
	var warm []int // the rows of the highest temperatures
	for i := range s.rows {
		warm = append(warm, i)
	}
	slices.SortFunc(warm, func(a, b int) int {
		x, _ := strconv.ParseFloat(s.rows[a][1], 64)
		y, _ := strconv.ParseFloat(s.rows[b][1], 64)
		return int(math.Copysign(1, y-x))
	})
	for _, i := range warm[:6] {
		s.rows[i][2] = ""
	}
	p = passOf(t, s, kelpRoles)
	o := ask(t, MissingPattern, p)
	expect(t, p, o, Breach, "missing values of growth go with temperature: they lie mostly towards high")
	if len(o.Where) != 6 {
		t.Errorf("points at %d cells, want 6", len(o.Where))
	}

	s = kelp(40, 41)
	for i := range 12 {
		s.rows[2*i+8][2] = "" // all exposed
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, MissingPattern, p), Breach, "with site: 12 of 12 are exposed")

	s = kelp(40, 41)
	for i := range 6 {
		s.rows[17+i][2] = ""
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, MissingPattern, p), Breach, "they follow each other", "C19", "C20", "C21", "C22", "C23", "C24")
}

// Gaps at random places are no pattern.
func TestRandomGapsAreNoPattern(t *testing.T) {
	alarms := 0
	for seed := range uint64(300) {
		random := rand.New(rand.NewPCG(seed, 3))
		s := kelp(40, seed)
		for _, i := range random.Perm(40)[:3+random.IntN(10)] {
			s.rows[i][2] = ""
		}
		p := passOf(t, s, kelpRoles)
		if ask(t, MissingPattern, p).Answer == Breach {
			alarms++
		}
	}
	if alarms > 4 { // 0.2 % of 300: more than 4 has a chance below 1e-3
		t.Errorf("%d of 300 tables with gaps at random are suspected", alarms)
	}
}

func TestRankSumExact(t *testing.T) {
	// All of 3 marked among the highest of 10: 2 of C(10, 3) = 120 ways.
	values, marked := make([]float64, 10), make([]bool, 10)
	for i := range values {
		values[i] = float64(i)
		marked[i] = i >= 7
	}
	above, chance := rankSum(values, marked)
	if !above || math.Abs(chance-2.0/120) > 1e-12 {
		t.Errorf("above %v, chance %g, want 2/120", above, chance)
	}
	// 3 neighbours among 10: 8 of 120 ways make one stretch.
	if c := fewStretches(marked); math.Abs(c-8.0/120) > 1e-9 {
		t.Errorf("chance of one stretch %g, want 8/120", c)
	}
}
