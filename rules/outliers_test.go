package rules

import "testing"

func TestOutliers(t *testing.T) {
	far := func(at int, by float64) func(int, float64) float64 {
		return func(i int, z float64) float64 {
			if i == at {
				return by
			}
			return z
		}
	}
	for _, c := range []struct {
		name    string
		n       int
		errorAt func(int, float64) float64
		answer  Answer
		words   string
		cells   []string
	}{
		{"no wild row", 80, normal, Sound, "no row lies further", nil},
		{"one row below", 80, far(11, -9), Breach, "row 13 lies", []string{"C13"}},
		{"one row above", 80, far(30, 9), Breach, "above its line", []string{"C32"}},
		{"the end of a slightly long tail", 4000, far(2000, 6.5), Sound, "detectable, but below what matters", []string{"C2002"}},
		{"a wild row in a large table", 4000, far(2000, 12), Breach, "row 2002 lies", []string{"C2002"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := passOf(t, drawn(c.n, 10, c.errorAt), plainRoles)
			expect(t, p, ask(t, Outliers, p), c.answer, c.words, c.cells...)
		})
	}
}

func TestOutliersWhereAllOthersLieOnTheLine(t *testing.T) {
	s := &sheet{header: []string{"x", "y"}}
	for i := range 12 {
		s.add(i, 3+2*i)
	}
	s.rows[5][1] = "16"
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Outliers, p), Breach, "all other rows lie on theirs", "B7")
}

func TestOutliersOfMeans(t *testing.T) {
	p := passOf(t, meansDrawn(40, 6, func(i int, z float64) float64 {
		if i == 7 {
			return 8
		}
		return z
	}), meansRoles)
	o := ask(t, Outliers, p)
	expect(t, p, o, Breach, "row 9 lies", "B9")
	if len(o.Target.Rows) != 1 || o.Target.Rows[0] != 7 {
		t.Errorf("the remedies are to act on %v", o.Target.Rows)
	}
}

// TestBeyondListsTheWorstFirst: never more than a twentieth of the rows, and at
// least one.
func TestBeyondListsTheWorstFirst(t *testing.T) {
	p := passOf(t, drawn(60, 10, normal), plainRoles)
	values := make([]float64, 60)
	values[3], values[20], values[21], values[40], values[50] = 4, -6, 5, 3.5, 7
	for _, c := range []struct {
		point float64
		want  []int
	}{
		{8, []int{50}},
		{5.5, []int{50, 20}},
		{3, []int{50, 20, 21}},
	} {
		got := p.beyond(values, c.point)
		if len(got) != len(c.want) {
			t.Fatalf("beyond %v: %v, want %v", c.point, got, c.want)
		}
		for k := range got {
			if got[k] != c.want[k] {
				t.Errorf("beyond %v: %v, want %v", c.point, got, c.want)
			}
		}
	}
}

func TestOutliersNeedRows(t *testing.T) {
	s := &sheet{header: []string{"x", "y"}}
	s.add(1, 2)
	s.add(2, 4)
	s.add(3, 5)
	p := passOf(t, s, plainRoles)
	expect(t, p, ask(t, Outliers, p), NotAsked, "too few rows")
}
