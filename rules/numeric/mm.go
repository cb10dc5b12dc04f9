package numeric

import (
	"fmt"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/floats"
)

// The constants of the MM-estimate (Yohai 1987): with the first, the
// S-estimate resists up to half of the rows; with the second, the line is 95 %
// as good as least squares when the errors are normal.
const (
	resistant = 1.547645
	efficient = 4.685061
)

// breakdown is the mean of rho that defines the scale: half the rows far off.
const breakdown = 0.5

// candidatePairs is the number of pairs of rows up to which every pair gives a
// line to start from; of more, that many are drawn.
const candidatePairs = 500

// MMLine returns the MM-estimate of a line y = intercept + slope x, which up to
// half of the rows can hardly move (Yohai 1987, bisquare): an S-estimate, then
// 95 % efficient reweighting with its scale held. se is the standard error of
// the slope with Huber's correction (Huber 1981, section 7.6), to be read with
// n - 2 degrees of freedom from about 20 rows on; scale is the S-estimate of
// the errors' standard deviation. The stream is drawn from only when there are
// more than 500 pairs of rows with different x.
//
// ok is false, and the numbers NaN, with fewer than three rows or two distinct
// x, and when more than half of the rows lie on one line: there is no scale to
// tell near from far by.
func MMLine(x, y []float64, stream *rand.Rand) (intercept, slope, se, scale float64, ok bool) {
	nan := math.NaN()
	if len(x) != len(y) {
		panic(fmt.Sprintf("numeric.MMLine: %d x, %d y", len(x), len(y)))
	}
	m := &mmSearch{x: make([]float64, len(x)), y: y, residual: make([]float64, len(x)), weight: make([]float64, len(x))}
	middle := Mean(x)
	for i, v := range x {
		m.x[i] = v - middle
	}
	start, scale, ok := m.sEstimate(stream)
	if !ok {
		return nan, nan, nan, nan, false
	}
	fit, ok := m.reweight(start, scale)
	if !ok {
		return nan, nan, nan, nan, false
	}
	se = m.slopeError(fit, scale)
	return fit.level - fit.slope*middle, fit.slope, se, scale, true
}

// mmLine is a line about the mean of x.
type mmLine struct{ level, slope float64 }

type mmSearch struct {
	x, y             []float64
	residual, weight []float64
}

// sEstimate returns the line with the smallest scale of residuals that the
// candidates lead to: two reweighting steps each, then the best to the end.
func (m *mmSearch) sEstimate(stream *rand.Rand) (best mmLine, scale float64, ok bool) {
	scale = math.Inf(1)
	for _, pair := range m.pairs(stream) {
		i, j := pair[0], pair[1]
		slope := (m.y[j] - m.y[i]) / (m.x[j] - m.x[i])
		line := mmLine{m.y[i] - slope*m.x[i], slope}
		line, s := m.improve(line, m.scaleOf(line), 1)
		if s >= scale && !m.canBeat(line, s, scale) {
			continue
		}
		line, s = m.improve(line, s, 1)
		if s < scale {
			best, scale = line, s
		}
	}
	if math.IsInf(scale, 1) || len(m.x) < 3 {
		return best, scale, false
	}
	best, scale = m.improve(best, scale, 1000)
	return best, scale, scale > 0
}

// canBeat reports whether one more step from a line can bring the scale below
// that of the best: a look at the mean of rho there, which falls with the scale,
// spares most candidates the search for their own.
func (m *mmSearch) canBeat(line mmLine, scale, best float64) bool {
	if !(scale > 0) || math.IsInf(best, 1) {
		return true
	}
	next, ok := m.weighted(line, scale, resistant)
	if !ok {
		return false
	}
	m.setResiduals(next)
	mean, _ := m.meanRho(best)
	return mean < breakdown
}

// pairs lists every pair of rows with different x, or 500 drawn from them.
func (m *mmSearch) pairs(stream *rand.Rand) [][2]int {
	var all [][2]int
	n := len(m.x)
	for i := range n {
		for j := i + 1; j < n; j++ {
			if m.x[i] == m.x[j] {
				continue
			}
			if len(all) == candidatePairs {
				return m.drawnPairs(stream)
			}
			all = append(all, [2]int{i, j})
		}
	}
	return all
}

// drawnPairs draws 500 pairs, all pairs with different x being equally likely.
// There are more than 500 of them, so that drawing again where the two x agree
// comes to an end.
func (m *mmSearch) drawnPairs(stream *rand.Rand) [][2]int {
	n := len(m.x)
	drawn := make([][2]int, 0, candidatePairs)
	for len(drawn) < candidatePairs {
		i, j := stream.IntN(n), stream.IntN(n)
		if m.x[i] != m.x[j] {
			drawn = append(drawn, [2]int{i, j})
		}
	}
	return drawn
}

// improve takes up to steps reweighting steps, each of which lowers the scale,
// and ends when it has stopped falling.
func (m *mmSearch) improve(line mmLine, scale float64, steps int) (mmLine, float64) {
	for range steps {
		if !(scale > 0) {
			break
		}
		next, ok := m.weighted(line, scale, resistant)
		if !ok {
			break
		}
		s := m.scaleOf(next)
		if !(s < scale) {
			break
		}
		fall := scale - s
		line, scale = next, s
		if fall < 1e-13*scale {
			break
		}
	}
	return line, scale
}

// reweight iterates the efficient estimate, the scale held, to 1e-10 and a bit.
func (m *mmSearch) reweight(line mmLine, scale float64) (mmLine, bool) {
	spread := floats.Norm(m.x, 2) / math.Sqrt(float64(len(m.x)))
	for range 5000 {
		next, ok := m.weighted(line, scale, efficient)
		if !ok {
			return line, false
		}
		// In units of the response, at the centre and at a typical distance.
		move := math.Abs(next.level-line.level) + spread*math.Abs(next.slope-line.slope)
		line = next
		if move < 1e-12*scale {
			return line, true
		}
	}
	return line, false
}

// weighted returns the least-squares line with bisquare weights of the
// residuals from line. ok is false when the rows with weight have one x.
func (m *mmSearch) weighted(line mmLine, scale, c float64) (mmLine, bool) {
	m.setResiduals(line)
	total, meanX, meanY := 0.0, 0.0, 0.0
	for i, r := range m.residual {
		w := 0.0
		if u := r / (scale * c); math.Abs(u) < 1 {
			w = (1 - u*u) * (1 - u*u)
		}
		m.weight[i] = w
		total += w
		meanX += w * m.x[i]
		meanY += w * r
	}
	meanX /= total
	meanY /= total
	sxx, sxy := 0.0, 0.0
	for i, w := range m.weight {
		d := m.x[i] - meanX
		sxx += w * d * d
		sxy += w * d * (m.residual[i] - meanY)
	}
	if !(sxx > 1e-14*total*meanX*meanX) || !(sxx > 0) {
		return line, false
	}
	// The step is fitted to the residuals: small steps keep their digits.
	step := sxy / sxx
	return mmLine{line.level + meanY - step*meanX, line.slope + step}, true
}

func (m *mmSearch) setResiduals(line mmLine) {
	for i, v := range m.x {
		m.residual[i] = m.y[i] - line.level - line.slope*v
	}
}

// scaleOf returns the s at which the mean of rho(residual/s) is one half; 0
// when half of the residuals or more are 0 to rounding.
func (m *mmSearch) scaleOf(line mmLine) float64 {
	m.setResiduals(line)
	largest, size := 0.0, 0.0
	for i, r := range m.residual {
		m.weight[i] = math.Abs(r)
		largest = max(largest, math.Abs(r))
		size = max(size, math.Abs(m.y[i]))
	}
	zeros := 0
	for _, r := range m.residual {
		if math.Abs(r) <= 1e-10*size {
			zeros++
		}
	}
	if 2*zeros >= len(m.residual) || largest == 0 {
		return 0
	}
	// Newton's method in ln s, within a bracket: the mean of rho falls with s.
	low, high := 0.0, math.Inf(1)
	s := medianInPlace(m.weight) / 0.6745
	if s == 0 {
		s = largest
	}
	for range 200 {
		mean, slope := m.meanRho(s)
		if mean > breakdown {
			low = s
		} else {
			high = s
		}
		next := s * math.Exp((breakdown-mean)/slope)
		if !(next > low && next < high) {
			switch {
			case low == 0:
				next = s / 2
			case math.IsInf(high, 1):
				next = 2 * s
			default:
				next = low + (high-low)/2
			}
		}
		if math.Abs(next-s) <= 1e-15*s {
			return next
		}
		s = next
	}
	return s
}

// meanRho returns the mean of the bisquare rho, scaled to a largest value of 1,
// of residual/s, and its derivative by ln s.
func (m *mmSearch) meanRho(s float64) (mean, slope float64) {
	inverse := 1 / (s * resistant)
	for _, r := range m.residual {
		u := r * inverse
		u *= u
		if u >= 1 {
			mean++
			continue
		}
		rest := 1 - u
		mean += 1 - rest*rest*rest
		slope -= 6 * u * rest * rest
	}
	n := float64(len(m.residual))
	return mean / n, slope / n
}

// slopeError returns the standard error of the slope, by Huber's formula with
// the correction K = 1 + (2/n) var(psi')/mean(psi')².
func (m *mmSearch) slopeError(line mmLine, scale float64) float64 {
	m.setResiduals(line)
	n := float64(len(m.x))
	squares := 0.0
	derivative := m.weight
	for i, r := range m.residual {
		derivative[i] = 0
		u := r / (scale * efficient)
		if math.Abs(u) < 1 {
			rest := 1 - u*u
			psi := r / scale * rest * rest
			squares += psi * psi
			derivative[i] = rest * (1 - 5*u*u)
		}
	}
	mean := Mean(derivative)
	variance, _, _ := centralMoments(derivative)
	k := 1 + 2/n*variance/(mean*mean)
	return k * scale / math.Abs(mean) * math.Sqrt(squares/(n-2)/floats.Dot(m.x, m.x))
}
