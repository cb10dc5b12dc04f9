package rules

import (
	"math"
	"math/rand/v2"

	"footing/rules/model"
	"footing/rules/numeric"
)

// Chance is what a rule whose alarm could be chance prepares for one design:
// the statistics to be simulated, and the breach whose power is told.
type Chance struct {
	Members []Member
	// Breach makes the consequential breach, which is costly for some rules and
	// needed only where power is told.
	Breach func() Trouble
	// Floor is the effect below which an alarm is no breach, however certain it
	// is; nil for none.
	Floor *Floor
}

// Member is one statistic of a rule, large when the assumption fails. It must
// depend on the residuals only up to their scale.
type Member struct {
	Test Test // as observed, in its usual scale, with its textbook p
	// New makes a function of the residuals for one goroutine, with scratch
	// memory of its own.
	New func() func(*Sample) float64
	// ClosedP is the p-value of a value of the statistic, for tables too large to
	// be simulated.
	ClosedP func(statistic float64) float64
}

// Trouble draws the errors of a table in which the rule's assumption fails by as
// little as a careful person would act on.
type Trouble struct {
	Short string // "unequal scatter", for a list
	Words string // "a bend that misses the ends of the line by 1.1 SD"
	// New makes a function that draws errors of unit SD into z, for one goroutine.
	New func() func(random *rand.Rand, z []float64)
	// ClosedPower is the power in a table of the given number of rows above which
	// it is not simulated; nil where power is certain there.
	ClosedPower func(critical float64) float64
}

// Floor is an effect with the least one that matters.
type Floor struct {
	Effect, Least float64
	Words         string // "a spread ratio of 1.2 (floor 1.5)"
}

// Below reports whether the effect is too small to matter.
func (f *Floor) Below() bool { return f != nil && f.Effect < f.Least }

// Sample is one vector of residuals, with what several statistics need of it
// computed at most once. It is for one goroutine.
type Sample struct {
	E   []float64
	RSS float64

	fit         *model.Fit
	sorter      numeric.Sorter
	sorted      []float64
	haveSorted  bool
	squares     []float64
	haveSquares bool
}

// NewSample makes room for residuals of the fit's design.
func NewSample(f *model.Fit) *Sample {
	n := f.N()
	return &Sample{fit: f, E: make([]float64, n), sorted: make([]float64, n), squares: make([]float64, n)}
}

// Changed tells the sample that E holds new residuals; those at rows of
// leverage 1 are set to 0, which they are whatever the response.
func (s *Sample) Changed() {
	s.haveSorted, s.haveSquares = false, false
	s.RSS = 0
	for i, e := range s.E {
		if s.fit.Leverage[i] >= 1 {
			s.E[i] = 0
			continue
		}
		s.RSS += e * e
	}
}

// Sorted gives the residuals in ascending order.
func (s *Sample) Sorted() []float64 {
	if !s.haveSorted {
		s.sorter.Sort(s.sorted, s.E, math.Sqrt(s.RSS/float64(len(s.E))))
		s.haveSorted = true
	}
	return s.sorted
}

// Squares gives the squares of the externally studentized residuals; 0 at rows
// of leverage 1, +Inf where the other rows leave no scatter.
func (s *Sample) Squares() []float64 {
	if !s.haveSquares {
		df := float64(s.fit.DF - 1)
		for i, e := range s.E {
			h := s.fit.Leverage[i]
			if h >= 1 {
				s.squares[i] = 0
				continue
			}
			q := e * e / (1 - h)
			s.squares[i] = df * q / (s.RSS - q)
		}
		s.haveSquares = true
	}
	return s.squares
}
