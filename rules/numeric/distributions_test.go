package numeric

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestDistributionsAgainstReference(t *testing.T) {
	// The tolerance is relative to the tail itself, down to 1e-305: what is
	// left of sixteen digits after the exponential of up to -700.
	const tolerance = 4e-13
	worst := map[string]float64{}
	for _, row := range readReference(t, "distributions.tsv") {
		var got float64
		a, b, c := row.args[0], row.args[1], row.args[2]
		switch row.function {
		case "student_two_sided":
			got = StudentTwoSided(a, b)
			if cdf := StudentCDF(-a, b); off(2*cdf, got) > 1e-15 {
				t.Errorf("StudentCDF(%v, %v) = %v, want half of %v", -a, b, cdf, got)
			}
		case "f_upper":
			got = FUpper(a, b, c)
		case "chi_squared_upper":
			got = ChiSquaredUpper(a, b)
		case "normal_upper":
			got = NormalUpper(a)
			if cdf := NormalCDF(-a); off(cdf, got) > 1e-15 {
				t.Errorf("NormalCDF(%v) = %v, want %v", -a, cdf, got)
			}
		case "normal_log_upper":
			got = normalLogUpper(a)
		default:
			t.Fatalf("no such function: %v", row)
		}
		d := off(got, row.want)
		worst[row.function] = max(worst[row.function], d)
		if d > tolerance {
			t.Errorf("%v = %.17g, want %.17g, off by %.2g", row, got, row.want, d)
		}
	}
	t.Logf("largest relative errors: %v", worst)
}

func TestTailsAtTheirEnds(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"t at infinity", StudentTwoSided(inf, 3), 0},
		{"t at minus infinity", StudentTwoSided(-inf, 3), 0},
		{"t at zero", StudentTwoSided(0, 3), 1},
		{"t CDF at infinity", StudentCDF(inf, 3), 1},
		{"t CDF at minus infinity", StudentCDF(-inf, 3), 0},
		{"t CDF at zero", StudentCDF(0, 7), 0.5},
		{"t of no number", StudentTwoSided(nan, 3), nan},
		{"t without df", StudentTwoSided(1, 0), nan},
		{"t with infinite df", StudentTwoSided(2, inf), NormalTwoSided(2)},
		{"F at infinity", FUpper(inf, 2, 3), 0},
		{"F at zero", FUpper(0, 2, 3), 1},
		{"F below zero", FUpper(-1, 2, 3), 1},
		{"F of no number", FUpper(nan, 2, 3), nan},
		{"F without df", FUpper(1, 2, 0), nan},
		{"F with infinite second df", FUpper(2, 3, inf), ChiSquaredUpper(6, 3)},
		{"chi-squared at infinity", ChiSquaredUpper(inf, 2), 0},
		{"chi-squared at zero", ChiSquaredUpper(0, 2), 1},
		{"chi-squared without df", ChiSquaredUpper(1, 0), nan},
		{"normal at infinity", NormalUpper(inf), 0},
		{"normal at minus infinity", NormalUpper(-inf), 1},
		{"normal quantile of 0", NormalQuantile(0), -inf},
		{"normal quantile of 1", NormalQuantile(1), inf},
		{"normal quantile outside", NormalQuantile(1.5), nan},
		{"t quantile of 0", StudentQuantile(0, 3), -inf},
		{"t quantile of 1", StudentQuantile(1, 3), inf},
		{"t quantile of one half", StudentQuantile(0.5, 3), 0},
		{"t quantile outside", StudentQuantile(-0.1, 3), nan},
		{"t quantile with infinite df", StudentQuantile(0.975, inf), NormalQuantile(0.975)},
		{"F quantile of 0", FQuantile(0, 2, 3), 0},
		{"F quantile of 1", FQuantile(1, 2, 3), inf},
		{"F quantile outside", FQuantile(2, 2, 3), nan},
	} {
		if off(c.got, c.want) > 1e-14 {
			t.Errorf("%s: got %v, want %v", c.name, c.got, c.want)
		}
	}
}

func TestQuantilesInvertTails(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		// From 1e-300 to one half, evenly in the logarithm.
		p := math.Pow(10, rapid.Float64Range(-300, math.Log10(0.5)).Draw(t, "log p"))
		df := math.Pow(10, rapid.Float64Range(-0.3, 6).Draw(t, "log df"))
		d1 := math.Pow(10, rapid.Float64Range(-0.3, 3).Draw(t, "log d1"))
		quantile := StudentQuantile(p, df)
		if !math.IsInf(quantile, 0) { // Half a degree of freedom at 1e-300 lies beyond the largest number.
			if d := off(StudentCDF(quantile, df), p); d > 3e-12 {
				t.Fatalf("StudentCDF(StudentQuantile(%v, %v)) is off by %.2g", p, df, d)
			}
		}
		if lower := FQuantile(p, d1, df); lower > 1e-300 {
			below, _ := fisherTails(lower, d1, df)
			if d := off(below, p); d > 3e-12 {
				t.Fatalf("lower tail at FQuantile(%v, %v, %v) is off by %.2g", p, d1, df, d)
			}
		}
		q := rapid.Float64Range(0.5, 1-1e-9).Draw(t, "q")
		if d := off(FUpper(FQuantile(q, d1, df), d1, df), 1-q); d > 1e-11 {
			t.Fatalf("FUpper(FQuantile(%v, %v, %v)) is off by %.2g", q, d1, df, d)
		}
	})
}

func TestQuantilesAgainstReference(t *testing.T) {
	for _, row := range readReference(t, "quantiles.tsv") {
		var got float64
		switch row.function {
		case "qt":
			got = StudentQuantile(row.args[0], row.args[1])
		case "qf":
			got = FQuantile(row.args[0], row.args[1], row.args[2])
		case "qnorm":
			got = NormalQuantile(row.args[0])
		default:
			t.Fatalf("no such function: %v", row)
		}
		// R's own quantiles hold about eleven digits in the far tails.
		if d := off(got, row.want); d > 1e-10 {
			t.Errorf("%v = %.17g, want %.17g, off by %.2g", row, got, row.want, d)
		}
	}
}
