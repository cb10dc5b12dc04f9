package numeric

import (
	"fmt"
	"math"
	"slices"
)

// Sorted returns the values in rising order, in a slice of their own. NaNs come
// first.
func Sorted(x []float64) []float64 {
	sorted := slices.Clone(x)
	slices.Sort(sorted)
	return sorted
}

// Sorter sorts values of a known scale in time linear in their number, and
// reuses its memory. The zero Sorter is ready; it is for one goroutine.
type Sorter struct {
	start  []int32 // first position of each bucket
	bucket []int32 // of each value
}

// bucketsPerValue keeps most buckets to a value or none, so that little is left
// for insertion.
const bucketsPerValue = 4

// crowded is the mean squared number of values in a bucket from which insertion
// would no longer be faster than slices.Sort; a scale that fits the values keeps
// it near 1.
const crowded = 24

// Sort sets dst to the values of src in rising order, as slices.Sort does. src
// is not changed unless it is dst. scale is the rough size of the values, such
// as their standard deviation: a wrong one, ties and outliers cost time, never
// order. It allocates nothing once it has sorted as many values before.
func (s *Sorter) Sort(dst, src []float64, scale float64) {
	n := len(src)
	if len(dst) != n {
		panic(fmt.Sprintf("numeric.Sorter.Sort: %d places for %d values", len(dst), n))
	}
	if !(scale > 0) || math.IsInf(scale, 1) || n < 16 || &dst[0] == &src[0] || !s.count(src, scale) {
		copy(dst, src)
		slices.Sort(dst)
		return
	}
	for i, v := range src {
		at := &s.start[s.bucket[i]]
		dst[*at] = v
		*at++
	}
	// Buckets are in order; within one, and there only, values may not be.
	for i := 1; i < n; i++ {
		v := dst[i]
		j := i
		for ; j > 0 && dst[j-1] > v; j-- {
			dst[j] = dst[j-1]
		}
		dst[j] = v
	}
}

// count finds each value's bucket and where each bucket starts. It reports
// false when a value is not finite or buckets are crowded.
//
// v/(1+|v|) brings the whole line to (-1, 1) and rises with v, so a value's
// bucket never lies before that of a smaller one.
func (s *Sorter) count(src []float64, scale float64) bool {
	n := len(src)
	buckets := bucketsPerValue * n
	if cap(s.bucket) < n {
		s.bucket = make([]int32, n)
		s.start = make([]int32, buckets+1)
	}
	s.bucket, s.start = s.bucket[:n], s.start[:buckets+1]
	clear(s.start)
	half := float64(buckets) / 2
	inverse := 1 / scale
	for i, v := range src {
		v *= inverse
		place := half + half*(v/(1+math.Abs(v)))
		if !(place >= 0 && place <= float64(buckets)) {
			return false
		}
		b := min(int32(place), int32(buckets-1))
		s.bucket[i] = b
		s.start[b]++
	}
	next, squares := int32(0), 0
	for b, size := range s.start {
		s.start[b] = next
		next += size
		squares += int(size) * int(size)
	}
	return squares < crowded*n
}
