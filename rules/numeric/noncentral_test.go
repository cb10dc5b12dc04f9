package numeric

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestNoncentralAgainstR(t *testing.T) {
	worst := map[string]float64{}
	for _, row := range readReference(t, "noncentral.tsv") {
		a, b, c := row.args[0], row.args[1], row.args[2]
		var got float64
		switch row.function {
		case "pt":
			got = NoncentralTCDF(a, b, c)
			if sum := got + NoncentralTUpper(a, b, c); math.Abs(sum-1) > 1e-15 {
				t.Errorf("%v: the two tails add up to %v", row, sum)
			}
		case "ptukey":
			got = TukeyUpper(a, int(b), c)
		case "detectable":
			got = DetectableNCP(a, b, c)
		default:
			t.Fatalf("no such function: %v", row)
		}
		d := math.Abs(got - row.want)
		worst[row.function] = max(worst[row.function], d)
		// Absolute, as R's own accuracy: see the script.
		limit := 1e-10
		if row.function == "ptukey" {
			limit = 1e-7
		}
		if d > limit {
			t.Errorf("%v = %.12g, want %.12g, off by %.2g", row, got, row.want, d)
		}
	}
	t.Logf("largest absolute distances: %v", worst)
}

func TestNoncentralKeepsSmallTails(t *testing.T) {
	worst := map[string]float64{}
	for _, row := range readReference(t, "noncentral_small.tsv") {
		a, b, c := row.args[0], row.args[1], row.args[2]
		var got float64
		switch row.function {
		case "t_upper":
			got = NoncentralTUpper(a, b, c)
			if lower := NoncentralTCDF(-a, b, -c); off(lower, got) > 1e-14 {
				t.Errorf("%v: the mirror image gives %v, not %v", row, lower, got)
			}
		case "range_upper", "studentized_range":
			got = TukeyUpper(a, int(b), c)
		default:
			t.Fatalf("no such function: %v", row)
		}
		d := off(got, row.want)
		limit := 1e-12
		if row.function == "studentized_range" {
			// scipy's result is one minus a sum that it holds to about 1e-10.
			limit, d = 1e-9, math.Abs(got-row.want)
		}
		worst[row.function] = max(worst[row.function], d)
		if d > limit && row.want > 1e-300 {
			t.Errorf("%v = %.15g, want %.15g, off by %.2g", row, got, row.want, d)
		}
	}
	t.Logf("largest relative distances: %v", worst)
}

// TestDetectableAsQuoted holds values computed once with base R 4.2.2, pt(ncp=)
// and qtukey; to the digits they were written down with.
func TestDetectableAsQuoted(t *testing.T) {
	for _, c := range []struct {
		df     float64
		groups int
		want   float64
	}{
		{8, 2, 3.200920},
		{16, 2, 2.984543},
		{46, 2, 2.861793},
		{96, 2, 2.829999},
		{36, 3, 3.302865},
		{96, 4, 3.464219},
	} {
		crit := TukeyQuantile(0.95, c.groups, c.df) / math.Sqrt2
		if got := DetectableNCP(c.df, 0.8, crit); math.Abs(got-c.want) > 6e-7 {
			t.Errorf("df %v, %d groups: %v, want %v", c.df, c.groups, got, c.want)
		}
	}
}

func TestNoncentralAtItsEnds(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"t at infinity", NoncentralTCDF(inf, 3, 1), 1},
		{"t at minus infinity", NoncentralTCDF(-inf, 3, 1), 0},
		{"t at zero", NoncentralTCDF(0, 3, 1), NormalCDF(-1)},
		{"t without noncentrality", NoncentralTUpper(2, 7, 0), StudentTwoSided(2, 7) / 2},
		{"t with infinite df", NoncentralTUpper(2, inf, 0.5), NormalUpper(1.5)},
		{"t without df", NoncentralTCDF(1, 0, 1), nan},
		{"t of no number", NoncentralTCDF(nan, 3, 1), nan},
		{"range at zero", TukeyUpper(0, 3, 5), 1},
		{"range at infinity", TukeyUpper(inf, 3, 5), 0},
		{"range of one group", TukeyUpper(1, 1, 5), nan},
		{"range of no number", TukeyUpper(nan, 3, 5), nan},
		{"range quantile of 0", TukeyQuantile(0, 3, 5), 0},
		{"range quantile of 1", TukeyQuantile(1, 3, 5), inf},
		{"range quantile outside", TukeyQuantile(1.5, 3, 5), nan},
		{"nothing to detect", DetectableNCP(10, 0.04, StudentQuantile(0.975, 10)), 0},
		{"certain power", DetectableNCP(10, 1, 2), nan},
	} {
		if off(c.got, c.want) > 1e-12 {
			t.Errorf("%s: got %v, want %v", c.name, c.got, c.want)
		}
	}
}

func TestRangeOfTwoIsStudents(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		df := math.Pow(10, rapid.Float64Range(-0.3, 6).Draw(t, "log df"))
		x := rapid.Float64Range(0.01, 30).Draw(t, "t")
		want := StudentTwoSided(x, df)
		if got := TukeyUpper(x*math.Sqrt2, 2, df); off(got, want) > 1e-10 && want > 1e-290 {
			t.Fatalf("range of two at t %v, df %v: %v, want %v", x, df, got, want)
		}
		if got := NoncentralTTwoSided(x, df, 0); off(got, want) > 1e-10 && want > 1e-290 {
			t.Fatalf("noncentral t at %v, df %v: %v, want %v", x, df, got, want)
		}
	})
}

func TestTukeyQuantileInvertsTheTail(t *testing.T) {
	for _, p := range []float64{1e-6, 0.3, 0.95, 0.999, 1 - 1e-9} {
		for _, k := range []int{2, 5, 30} {
			for _, df := range []float64{1, 8, 300, math.Inf(1)} {
				if got := TukeyUpper(TukeyQuantile(p, k, df), k, df); off(got, 1-p) > 1e-10 {
					t.Errorf("TukeyQuantile(%v, %d, %v) is exceeded with chance %v", p, k, df, got)
				}
			}
		}
	}
}
