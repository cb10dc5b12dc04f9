package numeric

import (
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func TestSorterAgreesWithSlicesSort(t *testing.T) {
	var sorter Sorter // One for all: what it remembers must not show.
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 400).Draw(t, "n")
		stream := Stream(rapid.Uint64().Draw(t, "seed"), "sorter")
		kind := rapid.IntRange(0, 5).Draw(t, "kind")
		src := make([]float64, n)
		for i := range src {
			z := stream.NormFloat64()
			switch kind {
			case 1:
				z = math.Round(z) // many ties
			case 2:
				z = z / stream.NormFloat64() / stream.NormFloat64() // long tails
			case 3:
				z = 1e6 + z*1e-6 // crowded far from zero
			case 4:
				z = math.Copysign(0, z)
			case 5:
				if i%7 == 0 {
					z = math.Inf(1 - 2*(i%2))
				}
			}
			src[i] = z
		}
		scale := math.Pow(10, rapid.Float64Range(-8, 8).Draw(t, "log scale"))
		before := slices.Clone(src)
		want := Sorted(src)
		dst := make([]float64, n)
		sorter.Sort(dst, src, scale)
		// == and not the bits: 0 and -0 may stand in either order.
		if !slices.Equal(dst, want) {
			t.Fatalf("Sort gives %v, want %v", dst, want)
		}
		if !slices.Equal(src, before) {
			t.Fatal("Sort changed its source")
		}
		sorter.Sort(src, src, scale)
		if !slices.Equal(src, want) {
			t.Fatalf("Sort in place gives %v, want %v", src, want)
		}
	})
}

func TestSorterWithoutAScale(t *testing.T) {
	src := sampleOf(50, 3)
	want := Sorted(src)
	for _, scale := range []float64{0, -1, math.NaN(), math.Inf(1), math.SmallestNonzeroFloat64, math.MaxFloat64} {
		dst := make([]float64, len(src))
		var sorter Sorter
		sorter.Sort(dst, src, scale)
		if diff := cmp.Diff(want, dst); diff != "" {
			t.Errorf("scale %v:\n%s", scale, diff)
		}
	}
}

func TestSorterAllocatesOnce(t *testing.T) {
	var sorter Sorter
	src := sampleOf(200, 3)
	dst := make([]float64, len(src))
	sorter.Sort(dst, src, 1)
	if allocations := testing.AllocsPerRun(20, func() { sorter.Sort(dst, src, 1) }); allocations != 0 {
		t.Errorf("%v allocations", allocations)
	}
	// Of known scale it is the buckets that sort, not the way out.
	if !sorter.count(src, 1) {
		t.Error("buckets are given up for ordinary values")
	}
	if sorter.count(make([]float64, 200), 1) {
		t.Error("one bucket with everything is accepted")
	}
}
