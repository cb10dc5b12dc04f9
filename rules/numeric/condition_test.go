package numeric

import (
	"math"
	"testing"
)

func TestConditionNumberAgainstReference(t *testing.T) {
	for _, row := range readReference(t, "condition.tsv") {
		n := int(row.args[0])
		_, x := design(n, int(row.args[2]))
		one := make([]float64, n)
		for i := range one {
			one[i] = 1
		}
		near(t, row.String(), ConditionNumber([][]float64{one, x, sampleOf(n, int(row.args[1]))}), row.want, 1e-11)
	}
	if got := ConditionNumber([][]float64{{1, 1}, {0, 0}}); !math.IsInf(got, 1) {
		t.Errorf("a column of zeros gives %v", got)
	}
	if got := ConditionNumber([][]float64{{1}, {2}}); !math.IsInf(got, 1) {
		t.Errorf("fewer rows than columns give %v", got)
	}
}

func TestDistinct(t *testing.T) {
	if got := Distinct([]float64{1, 2, 1, 3, 2}); got != 3 {
		t.Errorf("%d distinct values, want 3", got)
	}
	if got := Distinct(nil); got != 0 {
		t.Errorf("%d distinct values of none", got)
	}
}
