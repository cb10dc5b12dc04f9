package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"testing"

	"footing/rules/model"
)

func TestRoundingHeaps(t *testing.T) {
	p := passOf(t, kelp(60, 45), kelpRoles)
	expect(t, p, ask(t, RoundingHeaps, p), Sound, "as even as")

	cases := []struct {
		name  string
		to    float64
		every int
	}{
		{"half to the nearest 0.005", 0.005, 2},
		{"half to one decimal less", 0.01, 2},
		{"most to two decimals less", 0.1, 3},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := kelp(60, 45)
			for i := range s.rows {
				if i%c.every != 0 {
					v, _ := strconv.ParseFloat(s.rows[i][2], 64)
					s.rows[i][2] = fmt.Sprintf("%.3f", math.Round(v/c.to)*c.to)
				}
			}
			p := passOf(t, s, kelpRoles)
			expect(t, p, ask(t, RoundingHeaps, p), Breach, "of growth are multiples of", "growth")
		})
	}
}

// A coarse scale, and rounding to significant digits over decades, are honest.
func TestHonestRoundingIsNoHeap(t *testing.T) {
	alarms := map[string]int{}
	for seed := range uint64(100) {
		random := rand.New(rand.NewPCG(seed, 5))
		s := &sheet{header: []string{"x", "halves", "digits", "even"}}
		for range 100 {
			v := math.Exp(2 * random.NormFloat64())
			s.add(fmt.Sprintf("%.2f", 10*random.Float64()), 0.5*math.Round(40*random.Float64()+20),
				strconv.FormatFloat(v, 'g', 3, 64), 2*random.IntN(400)+100)
		}
		for _, y := range s.header[1:] {
			p := passOf(t, s, model.Roles{Response: y, Predictors: []string{"x"}})
			if ask(t, RoundingHeaps, p).Answer == Breach {
				alarms[y]++
			}
		}
	}
	for y, n := range alarms {
		if n > 3 { // 0.2 % of 100
			t.Errorf("%s: %d of 100 honest columns are suspected", y, n)
		}
	}
}
