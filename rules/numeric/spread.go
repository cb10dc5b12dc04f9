package numeric

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// GroupSpread computes Brown and Forsythe's F over a fixed division of rows
// into groups, reusing its memory from one vector of residuals to the next. It
// is for one goroutine.
type GroupSpread struct {
	group []int
	start []int // of each group in values; one more than groups
	value []float64
	next  []int
}

// NewGroupSpread prepares for rows whose groups are numbered 0 to groups - 1.
// Groups may be empty. group is kept and must not be changed.
func NewGroupSpread(group []int, groups int) *GroupSpread {
	s := &GroupSpread{
		group: group,
		start: make([]int, groups+1),
		value: make([]float64, len(group)),
		next:  make([]int, groups),
	}
	for _, g := range group {
		s.start[g+1]++
	}
	for g := range groups {
		s.start[g+1] += s.start[g]
	}
	return s
}

// DF returns the degrees of freedom of F: groups with rows, less one, and rows
// less groups with rows.
func (s *GroupSpread) DF() (d1, d2 float64) {
	filled := 0
	for g := range s.next {
		if s.start[g+1] > s.start[g] {
			filled++
		}
	}
	return float64(filled - 1), float64(len(s.group) - filled)
}

// F returns the F of a one-way analysis of variance of each residual's
// distance to the median of its group (Brown and Forsythe 1974). Where all
// distances are the same within every group it is +Inf, or NaN when also the
// groups agree or degrees of freedom are lacking.
func (s *GroupSpread) F(e []float64) float64 {
	if len(e) != len(s.group) {
		panic(fmt.Sprintf("numeric.GroupSpread.F: %d residuals, %d rows", len(e), len(s.group)))
	}
	s.sortIntoGroups(e)
	n := float64(len(e))
	total := 0.0
	for g := range s.next {
		distances := s.value[s.start[g]:s.start[g+1]]
		if len(distances) == 0 {
			continue
		}
		middle := medianInPlace(distances)
		for i, v := range distances {
			distances[i] = math.Abs(v - middle)
		}
		total += floats.Sum(distances)
	}
	grand := total / n
	between, within := 0.0, 0.0
	for g := range s.next {
		distances := s.value[s.start[g]:s.start[g+1]]
		if len(distances) == 0 {
			continue
		}
		size := float64(len(distances))
		mean := floats.Sum(distances) / size
		between += size * (mean - grand) * (mean - grand)
		for _, v := range distances {
			within += (v - mean) * (v - mean)
		}
	}
	d1, d2 := s.DF()
	return between / d1 / (within / d2)
}

func (s *GroupSpread) sortIntoGroups(e []float64) {
	copy(s.next, s.start)
	for i, g := range s.group {
		s.value[s.next[g]] = e[i]
		s.next[g]++
	}
}

// BrownForsythe returns the F of a one-way analysis of variance of each
// residual's distance to the median of its group, its degrees of freedom and
// its upper-tail p (Brown and Forsythe 1974). Groups are numbered 0 to
// groups - 1; empty ones do not count. F and p are NaN with fewer than two
// groups or no more rows than groups.
func BrownForsythe(e []float64, group []int, groups int) (f, d1, d2, p float64) {
	s := NewGroupSpread(group, groups)
	f = s.F(e)
	d1, d2 = s.DF()
	if !(d1 > 0 && d2 > 0) {
		return math.NaN(), d1, d2, math.NaN()
	}
	return f, d1, d2, FUpper(f, d1, d2)
}

// KoenkerLM returns n R² of the regression of the squared residuals on the
// model's own regressors, about the mean (Koenker 1981): large where the
// spread follows them. Under constant variance it is near chi-squared with one
// degree of freedom less than q has columns. q holds orthonormal columns whose
// span contains the constant, as Basis.Q. u is scratch of the length of e and
// afterwards holds the squared residuals about their mean. Squared residuals
// that are all equal give NaN.
func KoenkerLM(u, e []float64, q [][]float64) float64 {
	n := len(e)
	if len(u) != n {
		panic(fmt.Sprintf("numeric.KoenkerLM: scratch %d, residuals %d", len(u), n))
	}
	mean := floats.Dot(e, e) / float64(n)
	for i, v := range e {
		u[i] = v*v - mean
	}
	explained := 0.0
	for _, column := range q {
		d := floats.Dot(column, u)
		explained += d * d
	}
	return float64(n) * explained / floats.Dot(u, u)
}
