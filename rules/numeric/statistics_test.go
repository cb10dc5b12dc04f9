package numeric

import (
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// statistic computes what a row of testdata/statistics.tsv names.
func statistic(t *testing.T, row referenceRow) float64 {
	n, kind, extra := int(row.args[0]), int(row.args[1]), row.args[2]
	x := sampleOf(n, kind)
	switch row.function {
	case "mean":
		return Mean(x)
	case "var":
		return SampleVariance(x)
	case "sd":
		return SampleSD(x)
	case "median":
		return Median(x)
	case "mad":
		return MAD(x)
	case "quantile":
		return Quantile(slices.Sorted(slices.Values(x)), extra)
	case "skewness":
		return Skewness(x)
	case "kurtosis":
		return ExcessKurtosis(x)
	case "shapiro_w":
		w, _, _ := ShapiroWilk(x)
		return w
	case "shapiro_p":
		_, p, _ := ShapiroWilk(x)
		return p
	}
	groups := int(extra)
	b, _, e, group := linesFit(n, kind, groups)
	subject, k := subjectsOf(n)
	switch row.function {
	case "brown_forsythe_f":
		f, _, _, _ := BrownForsythe(e, group, groups)
		return f
	case "brown_forsythe_p":
		_, _, _, p := BrownForsythe(e, group, groups)
		return p
	case "koenker":
		return KoenkerLM(make([]float64, n), e, b.Q())
	case "durbin_watson":
		return DurbinWatson(e)
	case "lag1":
		return Lag1(e)
	case "subjects_f":
		f, _, _, _, _ := IntraclassANOVA(e, subject, k)
		return f
	case "subjects_p":
		_, _, _, p, _ := IntraclassANOVA(e, subject, k)
		return p
	case "subjects_icc":
		_, _, _, _, icc := IntraclassANOVA(e, subject, k)
		return icc
	}
	t.Fatalf("no such function: %v", row)
	return 0
}

func TestStatisticsAgainstReference(t *testing.T) {
	tolerance := map[string]float64{
		// An approximation with its own fitted constants: W is the same to
		// rounding, p passes through 1 - W and the normal tail.
		"shapiro_w": 1e-13,
		"shapiro_p": 1e-10,
		// A small F is a difference of near-equal means.
		"subjects_f": 1e-10, "subjects_icc": 1e-10, "brown_forsythe_f": 1e-10,
	}
	worst := map[string]float64{}
	for _, row := range readReference(t, "statistics.tsv") {
		got := statistic(t, row)
		limit, ok := tolerance[row.function]
		if !ok {
			limit = 1e-11
		}
		d := off(got, row.want)
		if row.want != 0 && math.Abs(row.want) < 1e-3 && row.function != "shapiro_p" {
			d *= math.Abs(row.want) * 1e3 // Near 0, against the size such a statistic usually has.
		}
		worst[row.function] = max(worst[row.function], d)
		if d > limit {
			t.Errorf("%v = %.17g, want %.17g, off by %.2g", row, got, row.want, d)
		}
	}
	t.Logf("largest errors: %v", worst)
}

func TestHolmAgainstReference(t *testing.T) {
	cases := map[float64][]referenceRow{}
	for _, row := range readReference(t, "holm.tsv") {
		cases[row.args[0]] = append(cases[row.args[0]], row)
	}
	for k, rows := range cases {
		p := make([]float64, len(rows))
		for i, row := range rows {
			p[i] = row.args[2]
		}
		before := slices.Clone(p)
		for i, got := range Holm(p) {
			if off(got, rows[i].want) > 1e-15 {
				t.Errorf("case %v, p %v: got %v, want %v", k, p[i], got, rows[i].want)
			}
		}
		for i := range p {
			if off(p[i], before[i]) > 0 {
				t.Errorf("case %v: Holm changed its input", k)
			}
		}
	}
	if got := Holm(nil); len(got) != 0 {
		t.Errorf("Holm of nothing is %v", got)
	}
}

func TestMomentsKeepDigitsUnderALargeCommonPart(t *testing.T) {
	x := sampleOf(101, 1)
	shifted := make([]float64, len(x))
	for i, v := range x {
		// A power of two rounds the parts below 2^-22 away, and no others.
		shifted[i] = 0x1p30 + math.Round(v*0x1p20)/0x1p20
		x[i] = math.Round(v*0x1p20) / 0x1p20
	}
	for _, c := range []struct {
		name string
		of   func([]float64) float64
	}{{"variance", SampleVariance}, {"skewness", Skewness}, {"kurtosis", ExcessKurtosis}, {"MAD", MAD}} {
		if d := off(c.of(shifted), c.of(x)); d > 1e-11 {
			t.Errorf("%s changes by %.2g under a shift", c.name, d)
		}
	}
}

func TestStatisticsWithoutAnAnswer(t *testing.T) {
	nan := math.NaN()
	same := []float64{2, 2, 2, 2}
	w, p, ok := ShapiroWilk(same)
	f, _, _, fp := BrownForsythe([]float64{1, 2, 3}, []int{0, 0, 0}, 1)
	sf, _, _, _, icc := IntraclassANOVA([]float64{1, 2, 3}, []int{0, 1, 2}, 3)
	for _, c := range []struct {
		name string
		got  float64
	}{
		{"mean of nothing", Mean(nil)},
		{"variance of one", SampleVariance([]float64{1})},
		{"median of nothing", Median(nil)},
		{"median with a NaN", Median([]float64{1, nan, 2})},
		{"MAD of nothing", MAD(nil)},
		{"quantile of nothing", Quantile(nil, 0.5)},
		{"quantile outside", Quantile([]float64{1, 2}, 1.1)},
		{"skewness of one value", Skewness(same)},
		{"kurtosis of one value", ExcessKurtosis(same)},
		{"W of one value", w},
		{"its p", p},
		{"spread of one group", f},
		{"its p", fp},
		{"subjects of one row each", sf},
		{"their correlation", icc},
		{"lag of nothing", Lag1(nil)},
		{"steps of zeros", DurbinWatson([]float64{0, 0})},
		{"score of equal squares", KoenkerLM(make([]float64, 2), []float64{1, -1}, nil)},
	} {
		if !math.IsNaN(c.got) {
			t.Errorf("%s is %v, want NaN", c.name, c.got)
		}
	}
	if ok {
		t.Error("ShapiroWilk accepts equal values")
	}
	for _, n := range []int{2, 5001} {
		if _, _, ok := ShapiroWilk(sampleOf(n, 1)); ok {
			t.Errorf("ShapiroWilk accepts %d values", n)
		}
	}
	if _, _, ok := ShapiroWilk([]float64{1, 2, nan, 3}); ok {
		t.Error("ShapiroWilk accepts a NaN")
	}
}

func TestShapiroWeights(t *testing.T) {
	for n := 3; n <= 60; n++ {
		a := ShapiroWeights(n)
		squares := 0.0
		for i, v := range a {
			squares += v * v
			if v != -a[n-1-i] {
				t.Errorf("n %d: weights %d and %d are %v and %v", n, i, n-1-i, v, a[n-1-i])
			}
		}
		if math.Abs(squares-1) > 1e-14 {
			t.Errorf("n %d: squared length %v", n, squares)
		}
		if !slices.IsSorted(a) {
			t.Errorf("n %d: weights do not rise: %v", n, a)
		}
	}
}

func TestShapiroWIgnoresPlaceAndScale(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(3, 60).Draw(t, "n")
		x := deviates(t, n)
		a := rapid.Float64Range(-100, 100).Draw(t, "a")
		b := math.Pow(10, rapid.Float64Range(-3, 3).Draw(t, "log b"))
		w, p, ok := ShapiroWilk(x)
		if !ok || !(w > 0 && w <= 1+1e-15) || !(p >= 0 && p <= 1) {
			t.Fatalf("W %v, p %v, ok %v", w, p, ok)
		}
		moved := make([]float64, n)
		for i, v := range x {
			moved[i] = a - b*v
		}
		// Moving by up to 1e5 scales costs that many digits.
		if again, _, _ := ShapiroWilk(moved); off(again, w) > 1e-10 {
			t.Fatalf("W %v becomes %v", w, again)
		}
	})
}

func TestMedianInPlaceAgreesWithSorting(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 300).Draw(t, "n")
		levels := rapid.IntRange(1, 400).Draw(t, "levels") // Few levels give many ties.
		x := make([]float64, n)
		stream := Stream(rapid.Uint64().Draw(t, "seed"), "median")
		for i := range x {
			x[i] = float64(stream.IntN(levels))
		}
		before := slices.Clone(x)
		sorted := slices.Sorted(slices.Values(x))
		want := (sorted[(n-1)/2] + sorted[n/2]) / 2
		if got := Median(x); got != want {
			t.Fatalf("Median is %v, want %v", got, want)
		}
		if diff := cmp.Diff(before, x); diff != "" {
			t.Fatalf("Median changed its input:\n%s", diff)
		}
		k := rapid.IntRange(0, n-1).Draw(t, "k")
		if got := selectInPlace(x, k); got != sorted[k] {
			t.Fatalf("position %d holds %v, want %v", k, got, sorted[k])
		}
	})
}

func TestGroupSpreadReusesItsMemory(t *testing.T) {
	_, _, e, group := linesFit(101, 1, 3)
	s := NewGroupSpread(group, 3)
	first := s.F(e)
	other := sampleOf(101, 3)
	if s.F(other) == first {
		t.Error("F does not depend on the residuals")
	}
	if again := s.F(e); again != first {
		t.Errorf("F is %v at first and %v later", first, again)
	}
	if allocations := testing.AllocsPerRun(10, func() { s.F(e) }); allocations != 0 {
		t.Errorf("%v allocations", allocations)
	}
	// A group without rows changes nothing.
	withEmpty, d1, d2, _ := BrownForsythe(e, group, 5)
	if withEmpty != first || d1 != 2 || d2 != 98 {
		t.Errorf("with empty groups F(%v, %v) is %v, want F(2, 98) %v", d1, d2, withEmpty, first)
	}
}
