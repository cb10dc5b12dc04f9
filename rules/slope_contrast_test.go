package rules

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

func TestSlopeContrast(t *testing.T) {
	for _, c := range []struct {
		name   string
		second float64 // slope of the second group; the first has 0.5
		limits int
	}{
		{"one clear and one not, no difference", 0.3, 1},
		{"both clear", 0.5, 0},
		{"a clear difference", -0.8, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			random := rand.New(rand.NewPCG(20, 7))
			s := &sheet{header: []string{"site", "temperature", "growth"}}
			for i := range 30 {
				x := float64(i / 2)
				slope := []float64{0.5, c.second}[i%2]
				s.add([]string{"exposed", "sheltered"}[i%2], x, fmt.Sprintf("%.3f", slope*x+3*random.NormFloat64()))
			}
			p := passOf(t, s, kelpRoles)
			o := ask(t, SlopeContrast, p)
			if o.Answer != Sound || len(o.Limits) != c.limits {
				t.Errorf("answer %d with %d limits, want sound with %d: %s", o.Answer, len(o.Limits), c.limits, o.Message)
			}
		})
	}
}
