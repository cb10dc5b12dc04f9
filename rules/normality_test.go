package rules

import (
	"math"
	"testing"
)

func TestNormality(t *testing.T) {
	exponential := func(_ int, z float64) float64 { return -math.Log(0.5 * math.Erfc(z/math.Sqrt2)) }
	for _, c := range []struct {
		name    string
		n       int
		errorAt func(int, float64) float64
		answer  Answer
		words   string
	}{
		{"normal errors", 80, normal, Sound, "as a normal distribution would"},
		{"exponential errors", 80, exponential, Breach, "further up than down"},
		{"exponential errors downward", 80, func(i int, z float64) float64 { return -exponential(i, z) }, Breach, "further down than up"},
		{"long tails", 80, func(_ int, z float64) float64 { return z * z * z }, Breach, "a few reach very far on both sides"},
		{"two heaps", 80, func(_ int, z float64) float64 { return math.Copysign(3, z) + z/5 }, Breach, "crowd at two ends"},
		{"a large sound table", 3000, normal, Sound, "as a normal distribution would"},
		{"a slight skew in a large table", 8000, func(_ int, z float64) float64 { return z + 0.05*z*z }, Sound, "detectable, but below what matters: skewness"},
		{"a strong skew in a large table", 3000, exponential, Breach, "Anderson-Darling"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, drawn(c.n, 10, c.errorAt), plainRoles)
			expect(t, p, ask(t, Normality, p), c.answer, c.words)
		})
	}
}

func TestNormalityWithoutAPredictor(t *testing.T) {
	p := passOf(t, meansDrawn(60, 3, normal), meansRoles)
	expect(t, p, ask(t, Normality, p), Sound, "as a normal distribution would")
	p = passOf(t, meansDrawn(60, 3, func(_ int, z float64) float64 { return z * z }), meansRoles)
	expect(t, p, ask(t, Normality, p), Breach, "further up than down")
}

// TestNormalityOfARoundedResponse: in large tables a response in steps of more
// than a third of the scatter hides its shape.
func TestNormalityOfARoundedResponse(t *testing.T) {
	s := meansDrawn(3000, 9, normal)
	for _, row := range s.rows {
		row[1] = row[1][:1] // one digit: steps of one SD
	}
	p := passOf(t, s, meansRoles)
	expect(t, p, ask(t, Normality, p), CannotTell, "rounded too coarsely")
}

func TestNormalityNeedsRows(t *testing.T) {
	s := &sheet{header: []string{"x", "y"}}
	s.add(1, 2)
	s.add(2, 4)
	s.add(3, 5)
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Normality, p), NotAsked, "one row is left")
}
