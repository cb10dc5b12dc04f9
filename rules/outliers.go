package rules

import (
	"cmp"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Outliers asks whether a row lies far off its line.
var Outliers = &Rule{
	Name:     "outliers",
	Family:   OfModel,
	Asks:     "Does a row lie further off its line than chance would put it?",
	Why:      "Such a row is often a slip of the pen, and it can move a slope and widen every interval.",
	Method:   "largest externally studentized residual (Cook and Weisberg 1982, Residuals and Influence in Regression); Bonferroni's p is told beside it",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.SetAside, remedy.RobustLine},
	Chance:   outliersChance,
	Run:      outliers,
}

// wildShift is how far off, in SD, a row is moved in the consequential breach;
// large tables hold rows further out by chance.
const (
	wildShift      = 5.0
	wildShiftLarge = 8.0
)

func outliersChance(p *Pass) (*Chance, string) {
	d := p.Fit.Diagnostics()
	row, defined := d.LargestExternal()
	if row < 0 {
		return nil, "too few rows to judge one by the others"
	}
	df := float64(p.Fit.DF - 1)
	t := math.Abs(d.External[row])
	closed := func(t float64) float64 { return min(1, float64(defined)*numeric.StudentTwoSided(t, df)) }
	c := &Chance{Members: []Member{{
		Test: Test{Name: "largest studentized residual", Value: t, DF: []float64{df}, P: closed(t)},
		New: func() func(*Sample) float64 {
			return func(s *Sample) float64 { return math.Sqrt(slices.Max(s.Squares())) }
		},
		ClosedP: closed,
	}}}
	shift := wildShift
	if p.Fit.N() > LargestSimulated {
		shift = wildShiftLarge
		c.Floor = p.wildFloor(row)
	}
	c.Breach = func() Trouble { return p.wildBreach(shift, closed) }
	return c, ""
}

// wildBreach moves one row, drawn evenly, up or down.
func (p *Pass) wildBreach(shift float64, closed func(float64) float64) Trouble {
	var rows []int
	var free []float64
	for i, h := range p.Fit.Leverage {
		if h < 1 {
			rows = append(rows, i)
			free = append(free, math.Sqrt(1-h))
		}
	}
	df := float64(p.Fit.DF - 1)
	return Trouble{
		Short: "a wild row",
		Words: fmt.Sprintf("a row %s SD off its line", wording.Number(shift)),
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					z[i] = random.NormFloat64()
				}
				z[rows[random.IntN(len(rows))]] += either(random, shift)
			}
		},
		ClosedPower: func(critical float64) float64 {
			return numeric.NoncentralTTwoSided(criticalValue(closed, critical), df, shift*numeric.Median(free))
		},
	}
}

func either(random *rand.Rand, v float64) float64 {
	if random.IntN(2) == 0 {
		return -v
	}
	return v
}

// criticalValue is the value whose p is the given one, by bisection; p falls as
// the value rises.
func criticalValue(p func(float64) float64, at float64) float64 {
	low, high := 0.0, 1e3
	for range 60 {
		middle := (low + high) / 2
		if p(middle) > at {
			low = middle
		} else {
			high = middle
		}
	}
	return high
}

// wildFloor silences, in large tables only, a row that is neither very far out
// nor pulls a slope.
func (p *Pass) wildFloor(row int) *Floor {
	d := p.Fit.Diagnostics()
	pull := 0.0
	for _, v := range d.DFBETAS {
		pull = max(pull, math.Abs(v[row]))
	}
	t := math.Abs(d.External[row])
	return &Floor{
		Effect: max(t/wildShiftLarge, pull/0.1), Least: 1,
		Words: fmt.Sprintf("a row %s times the scatter off its line, as slightly long tails bring (floor %s)", wording.Figure(t, 2), wording.Number(wildShiftLarge)),
	}
}

func outliers(p *Pass) (Outcome, error) {
	d := p.Fit.Diagnostics()
	row, _ := d.LargestExternal()
	t := p.Joint.First()
	o := judged(p.Joint, "", "no row lies further off its line than chance puts one")
	o.Statistic = t.measure()
	o.Evidence = map[string]any{"largest_studentized": d.External[row], "bonferroni_p": t.P, "row": p.Table.Row(p.Design.Rows[row])}
	flagged := []int{row}
	if o.Answer == Breach {
		flagged = p.beyond(d.External, p.Joint.Point[0])
		o.Message = p.wildWords(flagged, d.External)
	}
	for _, i := range flagged {
		o.Where = append(o.Where, p.row(i))
	}
	o.Target.Rows = flagged
	o.Touches = p.ofRows(flagged)
	return o, nil
}

// beyond lists the rows whose value reaches the point that 5 % of sound tables
// reach, the worst first: at least one, at most a twentieth of all.
func (p *Pass) beyond(values []float64, point float64) []int {
	var rows []int
	worst := -1
	for i, v := range values {
		if math.IsNaN(v) {
			continue
		}
		if worst < 0 || math.Abs(v) > math.Abs(values[worst]) {
			worst = i
		}
		if math.Abs(v) >= point {
			rows = append(rows, i)
		}
	}
	if len(rows) == 0 {
		return []int{worst}
	}
	slices.SortStableFunc(rows, func(a, b int) int {
		return cmp.Compare(math.Abs(values[b]), math.Abs(values[a]))
	})
	return rows[:min(len(rows), max(1, p.Fit.N()/20))]
}

func (p *Pass) wildWords(rows []int, external []float64) string {
	var said []string
	for _, i := range rows {
		side := "above"
		if p.Fit.Residual[i] < 0 {
			side = "below"
		}
		at := fmt.Sprintf("row %d lies %s %s its line", p.Table.Row(p.Design.Rows[i]), p.inUnits(math.Abs(p.Fit.Residual[i])), side)
		if math.IsInf(external[i], 0) {
			at += ", and all other rows lie on theirs"
		} else {
			at += fmt.Sprintf(", %s times the scatter of the others", wording.Figure(math.Abs(external[i]), 2))
		}
		said = append(said, at)
	}
	return strings.Join(said, "; ")
}

// inUnits writes a value of the response with its unit.
func (p *Pass) inUnits(v float64) string {
	s := wording.Figure(v, 2)
	if u := p.Columns.Response.Unit; u != "" {
		s += " " + u
	}
	return s
}
