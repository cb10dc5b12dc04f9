package numeric

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// FreedmanLane returns the p of a reduced model within a full one by permuting
// the residuals of the reduced one over all rows and computing the F of the two
// models anew (Freedman and Lane 1983): (1 + draws with an F at least as
// large)/(draws + 1). The span of full contains that of reduced. NaN when the
// full model has no more columns, or no degrees of freedom or residuals left.
func FreedmanLane(y []float64, reduced, full *Basis, draws int, stream *rand.Rand) float64 {
	p := newPermutedF(y, reduced, full)
	observed := p.f(p.residual)
	if math.IsNaN(observed) {
		return observed
	}
	permuted := slices.Clone(p.residual)
	atLeast := 1
	for range draws {
		stream.Shuffle(len(permuted), func(i, j int) { permuted[i], permuted[j] = permuted[j], permuted[i] })
		if !(p.f(permuted) < observed*(1-tied)) {
			atLeast++
		}
	}
	return float64(atLeast) / float64(draws+1)
}

// permutedF computes F again and again.
type permutedF struct {
	reduced, full *Basis
	residual      []float64 // of the reduced model
	left          []float64
}

func newPermutedF(y []float64, reduced, full *Basis) *permutedF {
	if reduced.Rows() != len(y) || full.Rows() != len(y) {
		panic(fmt.Sprintf("numeric.FreedmanLane: %d values, %d and %d rows", len(y), reduced.Rows(), full.Rows()))
	}
	p := &permutedF{reduced: reduced, full: full, residual: make([]float64, len(y)), left: make([]float64, len(y))}
	reduced.Residual(p.residual, y)
	return p
}

// f returns F for the fitted values of the reduced model plus v, which is the F
// of v alone: both models fit those values exactly.
func (p *permutedF) f(v []float64) float64 {
	d1 := float64(p.full.Rank() - p.reduced.Rank())
	d2 := float64(p.full.Rows() - p.full.Rank())
	if !(d1 > 0 && d2 > 0) {
		return math.NaN()
	}
	p.reduced.Residual(p.left, v)
	restricted := floats.Dot(p.left, p.left)
	p.full.Residual(p.left, v)
	rss := floats.Dot(p.left, p.left)
	return (restricted - rss) / d1 / (rss / d2)
}
