package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Influence asks whether one row pulls a slope.
var Influence = &Rule{
	Name:   "influence",
	Family: OfModel,
	Asks:   "Does one row pull a slope further than chance would?",
	Why:    "A slope that one row makes is that row's, not the table's.",
	Method: "largest change of a slope by leaving a row out, in standard errors (DFBETAS; Belsley, Kuh and Welsch 1980, Regression Diagnostics); " +
		"Cook's distance (1977, Technometrics 19:15) is told beside it",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.SetAside, remedy.RobustLine},
	Chance:   influenceChance,
	Run:      influence,
}

// pull is the largest |DFBETAS| of a row over all slopes.
type pull struct {
	value float64
	row   int
	group int // -1 for a slope that all share
}

func largestPull(d *model.Diagnostics) (pull, bool) {
	best := pull{row: -1}
	for k, v := range d.DFBETAS {
		for i, b := range v {
			if !math.IsNaN(b) && (best.row < 0 || math.Abs(b) > best.value) {
				best = pull{value: math.Abs(b), row: i, group: d.SlopeOf[k]}
			}
		}
	}
	return best, best.row >= 0
}

func influenceChance(p *Pass) (*Chance, string) {
	best, ok := largestPull(p.Fit.Diagnostics())
	if !ok {
		return nil, "no slope and no mean, or too few rows to leave one out"
	}
	reach := p.reach()
	bounded := reach
	rows := slices.Repeat([]float64{1}, len(reach))
	if len(reach) > LargestSimulated {
		bounded, rows = heaped(reach)
	}
	closed := func(t float64) float64 { return unionBound(p.Fit, bounded, rows, t) }
	return &Chance{
		Members: []Member{{
			Test: Test{Name: "largest DFBETAS of a " + p.answerWord(), Value: best.value, P: closed(best.value)},
			New: func() func(*Sample) float64 {
				return func(s *Sample) float64 {
					largest := 0.0
					for i, square := range s.Squares() {
						if v := square * reach[i] * reach[i]; v > largest {
							largest = v
						}
					}
					return math.Sqrt(largest)
				}
			},
			ClosedP: closed,
		}},
		Breach: func() Trouble { return p.pullBreach(closed) },
		Floor:  &Floor{Effect: best.value, Least: leastPull, Words: fmt.Sprintf("a pull of %s standard errors (floor %s)", wording.Figure(best.value, 2), wording.Number(leastPull))},
	}, ""
}

// answerWord is what the first question is about.
func (p *Pass) answerWord() string {
	if p.Design.X() == nil {
		return "mean"
	}
	return "slope"
}

const (
	leastPull = 0.25 // standard errors by which a row must move a slope to matter
	pullShift = 2.0  // standard errors by which the breach moves it: its half-width
)

// reach is |w_gi| / sqrt(1-h_i), the largest over the slopes: a row's |DFBETAS|
// is that times its externally studentized residual. It is 0 at leverage 1.
func (p *Pass) reach() []float64 {
	f := p.Fit
	reach := make([]float64, f.N())
	for _, w := range p.shares() {
		for i, v := range w {
			if f.Leverage[i] < 1 {
				reach[i] = max(reach[i], math.Abs(v)/math.Sqrt(1-f.Leverage[i]))
			}
		}
	}
	return reach
}

// shares gives for each slope that exists the unit catcher w: w_i² is row i's
// share of it.
func (p *Pass) shares() [][]float64 {
	var all [][]float64
	for _, k := range p.Fit.AnswerTerms() {
		if k < 0 {
			continue
		}
		c := p.Fit.Term(k)
		w := make([]float64, len(c.Catcher))
		for i, v := range c.Catcher {
			w[i] = v / c.Length
		}
		all = append(all, w)
	}
	return all
}

// heaped rounds the rows' reach up to steps of a thousandth, so that a large
// table needs a tail for each step and not for each row: the bound holds all the
// same. What is below a twentieth of the largest is rounded up to that.
func heaped(reach []float64) (steps, rows []float64) {
	const step = 1e-3
	largest := slices.Max(reach)
	count := make([]float64, int(math.Log(20)/step)+2)
	for _, a := range reach {
		if a > 0 {
			count[min(len(count)-1, int(math.Log(largest/a)/step))]++
		}
	}
	for k, n := range count {
		if n > 0 {
			steps = append(steps, largest*math.Exp(-step*float64(k)))
			rows = append(rows, n)
		}
	}
	return steps, rows
}

// unionBound is the chance that any row of a sound table reaches a DFBETAS of
// t, bounded by the sum over the rows of the chance that its externally
// studentized residual reaches t over the row's reach; rows counts how many share
// a reach. It holds at every n.
func unionBound(f *model.Fit, reach, rows []float64, t float64) float64 {
	total := 0.0
	for k, a := range reach {
		if a > 0 {
			total += rows[k] * numeric.StudentTwoSided(t/a, float64(f.DF-1))
		}
	}
	return min(1, total)
}

// pullBreach moves the row with the largest share of a slope so far that it
// shifts that slope by two of its standard errors.
func (p *Pass) pullBreach(closed func(float64) float64) Trouble {
	row, share := 0, 0.0
	for _, w := range p.shares() {
		for i, v := range w {
			if p.Fit.Leverage[i] < 1 && math.Abs(v) > share*(1+1e-12) {
				row, share = i, math.Abs(v)
			}
		}
	}
	h := p.Fit.Leverage[row]
	df := float64(p.Fit.DF - 1)
	return Trouble{
		Short: "a row that pulls a " + p.answerWord(),
		Words: "one row that pulls a " + p.answerWord() + " by its whole half-width",
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					z[i] = random.NormFloat64()
				}
				z[row] += either(random, pullShift/share)
			}
		},
		ClosedPower: func(critical float64) float64 {
			point := criticalValue(closed, critical) * math.Sqrt(1-h) / share
			return numeric.NoncentralTTwoSided(point, df, pullShift*math.Sqrt(1-h)/share)
		},
	}
}

func influence(p *Pass) (Outcome, error) {
	d := p.Fit.Diagnostics()
	best, _ := largestPull(d)
	at := p.Table.Row(p.Design.Rows[best.row])
	o := judged(p.Joint,
		fmt.Sprintf("row %d moves the %s%s by %s standard errors", at, p.answerWord(), ofGroup(p, best.group), wording.Figure(best.value, 2)),
		"no row pulls a "+p.answerWord()+" further than chance lets one")
	o.Statistic = p.Joint.First().measure()
	cook, cookRow := largestCook(d.Cook)
	o.Evidence = map[string]any{"largest_dfbetas": best.value, "row": at, "largest_cook": cook}
	if cookRow >= 0 {
		o.Evidence["largest_cook_row"] = p.Table.Row(p.Design.Rows[cookRow])
	}
	o.Target.Rows = []int{best.row}
	if o.Answer == Breach {
		o.Target.Rows = p.beyond(p.pulls(), p.Joint.Point[0])
	}
	o.Touches = p.ofRows(o.Target.Rows)
	for _, i := range o.Target.Rows {
		o.Where = append(o.Where, p.row(i))
	}
	return o, nil
}

// pulls is each row's largest |DFBETAS| over the slopes.
func (p *Pass) pulls() []float64 {
	pulls := make([]float64, p.Fit.N())
	for i := range pulls {
		pulls[i] = math.NaN()
		for _, v := range p.Fit.Diagnostics().DFBETAS {
			if b := math.Abs(v[i]); !(b <= pulls[i]) {
				pulls[i] = b
			}
		}
	}
	return pulls
}

func largestCook(cook []float64) (float64, int) {
	at := -1
	for i, v := range cook {
		if !math.IsNaN(v) && (at < 0 || v > cook[at]) {
			at = i
		}
	}
	if at < 0 {
		return math.NaN(), -1
	}
	return cook[at], at
}

func ofGroup(p *Pass, g int) string {
	if g < 0 || !p.Design.HasGroup() {
		return ""
	}
	return " of " + p.Design.Groups[g]
}
