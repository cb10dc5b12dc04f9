package rules

import (
	"testing"

	"footing/rules/model"
)

var orderedRoles = model.Roles{Response: "y", Predictors: []string{"x"}, Order: "no"}

// following makes errors that follow their predecessors by rho.
func following(rho float64) func(int, float64) float64 {
	last := 0.0
	return func(_ int, z float64) float64 {
		last = rho*last + z
		return last
	}
}

func TestIndependence(t *testing.T) {
	for _, c := range []struct {
		name    string
		n       int
		errorAt func(int, float64) float64
		answer  Answer
		words   string
	}{
		{"independent neighbours", 80, normal, Sound, "not found to be alike"},
		{"alike neighbours", 80, following(0.7), Breach, "rows that follow each other are alike"},
		{"neighbours on opposite sides", 80, following(-0.7), Breach, "on opposite sides"},
		{"a drift", 80, func(i int, z float64) float64 { return z + float64(i)/15 }, Breach, "drift along the order"},
		{"slightly alike in a large table", 4000, following(0.07), Sound, "detectable, but below what matters: a lag-one correlation"},
		{"a slight drift in a large table", 4000, func(i int, z float64) float64 { return z + 0.3*float64(i)/4000 }, Sound, "and a drift of"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, drawn(c.n, 10, c.errorAt), orderedRoles)
			o := ask(t, Independence, p)
			expect(t, p, o, c.answer, c.words)
			if o.Statistic.Name != "lag-one autocorrelation" {
				t.Errorf("the statistic is %q", o.Statistic.Name)
			}
		})
	}
}

func TestIndependenceNeedsAnOrder(t *testing.T) {
	s := drawn(80, 10, normal)
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Independence, p), NotAsked, "--order")

	for i := range s.rows {
		if i > 2 {
			s.rows[i][0] = ""
		}
	}
	p = passOf(t, s, orderedRoles)
	expect(t, p, ask(t, Independence, p), NotAsked, "too few rows have an order")
}

func TestIndependenceTellsOfRowsWithoutOrder(t *testing.T) {
	s := drawn(80, 10, normal)
	s.rows[4][0], s.rows[40][0] = "", ""
	p := passOf(t, s, orderedRoles)
	expect(t, p, ask(t, Independence, p), Sound, "2 rows without an order left out")
}

// TestIndependenceWithinSubjects: the first row of a subject does not follow the
// last of another.
func TestIndependenceWithinSubjects(t *testing.T) {
	s := drawn(80, 10, following(0.8))
	s.header = append(s.header, "pot")
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], string(rune('a'+i%16)))
	}
	roles := orderedRoles
	p := passOf(t, s, roles)
	expect(t, p, ask(t, Independence, p), Breach, "alike")
	roles.Subject = "pot"
	p = passOf(t, s, roles)
	if o := ask(t, Independence, p); o.Answer != Sound { // neighbours of one subject stand 16 rows apart
		t.Errorf("answer %d: %s", o.Answer, o.Message)
	}
}

// TestIndependenceWhereTheOrderIsThePredictor asks for no drift.
func TestIndependenceWhereTheOrderIsThePredictor(t *testing.T) {
	roles := orderedRoles
	roles.Order = "x"
	p := passOf(t, drawn(80, 10, normal), roles)
	o := ask(t, Independence, p)
	expect(t, p, o, Sound, "not found to be alike")
	if _, asked := o.Evidence["drift_p"]; asked {
		t.Error("a drift along the predictor is asked for")
	}
}
