package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/floats"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Linearity asks whether a straight line is the right shape.
var Linearity = &Rule{
	Name:   "linearity",
	Family: OfModel,
	Asks:   "Is a straight line the right shape?",
	Why:    "The slope of a line drawn through a curve depends on where the predictor was measured, and no interval covers that.",
	Method: "largest score of a common bend, a common wave, a bend in each group and a bend over each further predictor; where predictor values are replicated also " +
		"the lack-of-fit F against pure error (Fisher 1922, J. R. Stat. Soc. 85:597); F of a square in each group and RESET (Ramsey 1969, J. R. Stat. Soc. B 31:350) are told beside them",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.Curve, remedy.LogResponse, remedy.LevelErrors},
	Chance:   linearityChance,
	Run:      linearity,
}

// jointLimit is when rules with a simulated null count as breached.
const jointLimit = "the rule's simulated p-value, held together with those of the other rules of this kind by step-down over the smallest " +
	"(Westfall and Young 1993, Resampling-Based Multiple Testing), is at most 5 %, and the effect is one that matters: " +
	"a sound table of the same design raises any of these alarms in at most 5 of 100"

// column is a shape that the residuals may follow.
type column struct {
	words string
	unit  []float64 // off the design, unit length
	rows  int       // that it runs over
}

const bendWord = "bend"

// shapes lists the columns of the linearity score.
func (p *Pass) shapes() []column {
	var all []column
	bends := p.bends()
	add := func(words string, v []float64, rows int, cleared ...column) {
		if q, ok := p.offDesign(v, cleared); ok {
			all = append(all, column{words: words, unit: q, rows: rows})
		}
	}
	common, cubes := make([]float64, p.Fit.N()), make([]float64, p.Fit.N())
	for _, b := range bends {
		floats.Add(common, b)
	}
	for i, d := range p.fromGroupMean() {
		cubes[i] = d * d * d
	}
	add(bendWord, common, p.Fit.N())
	add("wave", cubes, p.Fit.N(), all...)
	if len(bends) > 1 && !p.Design.CommonSlope {
		sizes := p.Design.GroupSizes()
		var earlier []column
		for g, b := range bends {
			add(bendWord+" in "+p.Design.Groups[g], b, sizes[g], earlier...)
			if q, ok := p.offDesign(b, earlier); ok {
				earlier = append(earlier, column{unit: q})
			}
		}
	}
	for k, v := range p.furtherNumbers() {
		square := make([]float64, len(v))
		mean := numeric.Mean(v)
		for i := range v {
			square[i] = (v[i] - mean) * (v[i] - mean)
		}
		add(bendWord+" over "+p.furtherNames()[k], square, p.Fit.N())
	}
	return all
}

// fromGroupMean is the distance of the main predictor from its group's mean.
func (p *Pass) fromGroupMean() []float64 {
	d := p.Design
	x := d.X()
	out := make([]float64, d.N())
	for g := range d.Groups {
		mean := numeric.Mean(d.OfGroup(x, g))
		for i, code := range d.Group {
			if code == g {
				out[i] = x[i] - mean
			}
		}
	}
	return out
}

// bends has a column for each group: the squared distance of the predictor from
// the group's mean, 0 elsewhere.
func (p *Pass) bends() [][]float64 {
	distance := p.fromGroupMean()
	columns := make([][]float64, len(p.Design.Groups))
	for g := range columns {
		columns[g] = make([]float64, len(distance))
	}
	for i, g := range p.Design.Group {
		columns[g][i] = distance[i] * distance[i]
	}
	return columns
}

// furtherNumbers are the numeric predictors and covariates after the main one.
func (p *Pass) furtherNumbers() [][]float64 {
	values, _ := p.numericPredictors()
	return values[1:]
}

func (p *Pass) furtherNames() []string {
	_, names := p.numericPredictors()
	return names[1:]
}

// offDesign takes the projection on the design and on earlier columns off v
// and scales it to unit length; false when no more than rounding is left.
func (p *Pass) offDesign(v []float64, cleared []column) ([]float64, bool) {
	v = p.Fit.Transformed(v)
	q := make([]float64, len(v))
	p.Fit.Basis.Residual(q, v)
	for range 2 { // twice is enough for orthogonality to rounding
		for _, c := range cleared {
			floats.AddScaled(q, -floats.Dot(q, c.unit), c.unit)
		}
	}
	length := floats.Norm(q, 2)
	if length == 0 || length < 1e-8*floats.Norm(v, 2) {
		return nil, false
	}
	floats.Scale(1/length, q)
	return q, true
}

func linearityChance(p *Pass) (*Chance, string) {
	if p.Design.X() == nil {
		return nil, "no predictor"
	}
	if p.Fit.DF < 2 {
		return nil, "one row is left to judge from"
	}
	columns := p.shapes()
	if len(columns) == 0 {
		return nil, "fewer than three distinct predictor values in every group"
	}
	c := &Chance{Members: []Member{p.scoreMember(columns)}, Breach: p.bendBreach, Floor: p.bendFloor(columns)}
	if lack, ok := p.lackOfFit(); ok && lack.isMember {
		c.Members = append(c.Members, lack.member())
		c.Floor = p.lackFloor(c.Floor, lack)
	}
	return c, ""
}

// scoreMember is the largest |t(q)| over the columns; every column is compared
// on one scale, so the largest |q'e| decides.
func (p *Pass) scoreMember(columns []column) Member {
	df := float64(p.Fit.DF - 1)
	units := make([][]float64, len(columns))
	for k, c := range columns {
		units[k] = c.unit
	}
	best, along := largestAlong(units, p.Fit.Residual)
	t := scoreT(along, p.Fit.RSS, df)
	return Member{
		Test: Test{Name: "score t of a " + columns[best].words, Value: t, DF: []float64{df}, P: min(1, float64(len(columns))*numeric.StudentTwoSided(t, df))},
		New: func() func(*Sample) float64 {
			return func(s *Sample) float64 {
				_, along := largestAlong(units, s.E)
				return along * along / s.RSS
			}
		},
		ClosedP: func(share float64) float64 {
			return min(1, float64(len(columns))*numeric.StudentTwoSided(math.Sqrt(share*df/(1-share)), df))
		},
	}
}

// largestAlong gives the column with the largest |q'e|, and that with its sign
// dropped.
func largestAlong(columns [][]float64, e []float64) (at int, along float64) {
	for k, q := range columns {
		if v := math.Abs(floats.Dot(q, e)); v > along*(1+1e-9) { // at a tie the first, whatever rounding says
			at, along = k, v
		}
	}
	return at, along
}

// scoreT is the t of a column q off the design: q'e over the scatter that the
// others leave.
func scoreT(along, rss, df float64) float64 {
	return along / math.Sqrt((rss-along*along)/df)
}

// lack is the lack-of-fit test of replicated predictor values.
type lack struct {
	level    []int // of each row
	levels   int
	df1, df2 float64
	f        float64
	pure     float64 // sum of squares about the level means
	rss      float64
	isMember bool
}

// lackOfFit compares the scatter of level means about the lines with that
// within levels; false when no level is replicated or none lies off the design.
func (p *Pass) lackOfFit() (lack, bool) {
	level, levels := p.levels()
	n := p.Fit.N()
	l := lack{level: level, levels: levels, df1: float64(levels - p.Fit.P()), df2: float64(n - levels), rss: p.Fit.RSS}
	if levels <= p.Fit.P() || n <= levels || p.Fit.IsTransformed() {
		return l, false
	}
	l.pure = newPure(level, levels)(p.Fit.Residual)
	l.f = l.fisher(l.pure, l.rss)
	l.isMember = n >= 3*levels && !p.subjectsSetLevels(level) && l.pure > 1e-12*l.rss
	return l, true
}

func (l lack) fisher(pure, rss float64) float64 {
	return (rss - pure) / l.df1 / (pure / l.df2)
}

func (l lack) p() float64 { return numeric.FUpper(l.f, l.df1, l.df2) }

func (l lack) member() Member {
	return Member{
		Test: Test{Name: "lack-of-fit F", Value: l.f, DF: []float64{l.df1, l.df2}, P: l.p()},
		New: func() func(*Sample) float64 {
			pure := newPure(l.level, l.levels)
			return func(s *Sample) float64 { return l.fisher(pure(s.E), s.RSS) }
		},
		ClosedP: func(f float64) float64 { return numeric.FUpper(f, l.df1, l.df2) },
	}
}

// newPure makes the sum of squares about level means, which is the same for
// residuals as for responses.
func newPure(level []int, levels int) func(e []float64) float64 {
	sum, size := make([]float64, levels), make([]float64, levels)
	for _, l := range level {
		size[l]++
	}
	return func(e []float64) float64 {
		clear(sum)
		for i, l := range level {
			sum[l] += e[i]
		}
		ss := 0.0
		for i, l := range level {
			d := e[i] - sum[l]/size[l]
			ss += d * d
		}
		return ss
	}
}

// levels numbers the distinct combinations of group, predictors and covariates.
func (p *Pass) levels() (level []int, levels int) {
	d := p.Design
	at := map[string]int{}
	level = make([]int, d.N())
	for i := range level {
		var key strings.Builder
		write := func(v float64) {
			key.WriteString(strconv.FormatUint(math.Float64bits(v+0), 16)) // +0 makes one of the two zeros
			key.WriteByte(';')
		}
		write(float64(d.Group[i]))
		for _, x := range d.Predictors {
			write(x[i])
		}
		for _, c := range d.Covariates {
			if c.Number != nil {
				write(c.Number[i])
			} else {
				write(float64(c.Code[i]))
			}
		}
		k, seen := at[key.String()]
		if !seen {
			k = len(at)
			at[key.String()] = k
		}
		level[i] = k
	}
	return level, len(at)
}

// subjectsSetLevels reports whether all rows of each subject share one level:
// then repeated-subjects asks what the lack-of-fit test would.
func (p *Pass) subjectsSetLevels(level []int) bool {
	if p.Design.Subject == nil {
		return false
	}
	of := map[int]int{}
	for i, s := range p.Design.Subject {
		if first, seen := of[s]; seen && first != level[i] {
			return false
		}
		of[s] = level[i]
	}
	return true
}

// bendBreach bends every group off its line in the square of the predictor by a
// root mean square of half the scatter.
func (p *Pass) bendBreach() Trouble {
	shift := make([]float64, p.Fit.N())
	d := p.Design
	for g := range d.Groups {
		rows := d.Members(g)
		q, ok := ownBend(d.OfGroup(d.X(), g))
		if !ok {
			continue
		}
		for k, i := range rows {
			shift[i] = 0.5 * math.Sqrt(float64(len(rows))) * q[k]
		}
	}
	return Trouble{
		Short: "a bend",
		Words: fmt.Sprintf("a bend that misses the ends of the line by %s SD", wording.Figure(p.missAtEnds(shift), 2)),
		New: func() func(*rand.Rand, []float64) {
			return func(random *rand.Rand, z []float64) {
				for i := range z {
					z[i] = random.NormFloat64() + shift[i]
				}
			}
		},
	}
}

// ownBend is the square of x off its level and line, at unit length.
func ownBend(x []float64) ([]float64, bool) {
	n := len(x)
	mean := numeric.Mean(x)
	one, line, square := make([]float64, n), make([]float64, n), make([]float64, n)
	for i, v := range x {
		one[i], line[i], square[i] = 1, v-mean, (v-mean)*(v-mean)
	}
	q := make([]float64, n)
	numeric.NewBasis([][]float64{one, line}, n).Residual(q, square)
	length := floats.Norm(q, 2)
	if length == 0 || length < 1e-8*floats.Norm(square, 2) {
		return nil, false
	}
	floats.Scale(1/length, q)
	return q, true
}

// missAtEnds is the mean distance of the bend at the least and greatest
// predictor value of each group.
func (p *Pass) missAtEnds(shift []float64) float64 {
	x := p.Design.X()
	total, ends := 0.0, 0.0
	for g := range p.Design.Groups {
		rows := p.Design.Members(g)
		low, high := rows[0], rows[0]
		for _, i := range rows {
			if x[i] < x[low] {
				low = i
			}
			if x[i] > x[high] {
				high = i
			}
		}
		if shift[low] == 0 && shift[high] == 0 {
			continue
		}
		total += math.Abs(shift[low]) + math.Abs(shift[high])
		ends += 2
	}
	if ends == 0 {
		return math.NaN()
	}
	return total / ends
}

// leastBend is the root mean square of a bend, in residual SD, that matters.
const leastBend = 0.15

func (p *Pass) bendFloor(columns []column) *Floor {
	s := p.Fit.SD
	largest := 0.0
	for _, c := range columns {
		along := floats.Dot(c.unit, p.Fit.Residual)
		largest = max(largest, math.Sqrt(max(0, along*along-s*s)/float64(c.rows))/s)
	}
	return bendFloorOf(largest)
}

func bendFloorOf(effect float64) *Floor {
	return &Floor{Effect: effect, Least: leastBend, Words: fmt.Sprintf("a bend of %s SD (floor %s)", wording.Figure(effect, 2), wording.Number(leastBend))}
}

func (p *Pass) lackFloor(f *Floor, l lack) *Floor {
	v := l.pure / l.df2
	effect := math.Sqrt(max(0, l.rss-l.pure-l.df1*v) / (float64(p.Fit.N()) * v))
	return bendFloorOf(max(f.Effect, effect))
}

func linearity(p *Pass) (Outcome, error) {
	response, predictor := p.Columns.Response.Title(), p.Columns.Predictors[0].Title()
	o := judged(p.Joint, "", "no bend of "+response+" over "+predictor+" was found")
	o.Statistic = p.Joint.First().measure()
	bend, reset := p.Fit.Added(p.bends()...), p.Fit.Added(p.powersOfFit()...)
	o.Evidence = map[string]any{
		"quadratic_f": bend.F, "quadratic_p": bend.P,
		"reset_f": reset.F, "reset_p": reset.P,
		"lack_of_fit_f": math.NaN(), "lack_of_fit_p": math.NaN(),
	}
	if l, ok := p.lackOfFit(); ok {
		o.Evidence["lack_of_fit_f"], o.Evidence["lack_of_fit_p"] = l.f, l.p()
	}
	if o.Answer == Breach {
		o.Message = response + " bends away from a straight line over " + predictor + " (" + p.strongest() + ")" + p.bendWords()
		if p.Joint.Strong == 1 {
			o.Message += "; or the readings of one level share an error: if so, name the level with --subject"
			o.Target.Subjects, _ = p.levels()
		}
	}
	return o, nil
}

// powersOfFit has the second and third power of the fitted values, which are
// centred and scaled first: that changes no F and keeps the digits.
func (p *Pass) powersOfFit() [][]float64 {
	fitted := p.Fit.Fitted
	mean, sd := numeric.Mean(fitted), numeric.SampleSD(fitted)
	second, third := make([]float64, len(fitted)), make([]float64, len(fitted))
	if !(sd > 0) {
		return nil
	}
	for i, v := range fitted {
		z := (v - mean) / sd
		second[i], third[i] = z*z, z*z*z
	}
	return [][]float64{second, third}
}

// strongest writes the test with the smallest p-value and its p.
func (p *Pass) strongest() string {
	t := p.Joint.Strongest()
	return t.Name + " " + wording.Figure(t.Value, 3) + ", joint " + wording.P(p.Joint.PJoint)
}

// bendWords says which way the common bend goes: positive residuals at both
// ends are a curve that opens upward.
func (p *Pass) bendWords() string {
	sum := make([]float64, p.Fit.N())
	for _, c := range p.bends() {
		floats.Add(sum, c)
	}
	q, ok := p.offDesign(sum, nil)
	if !ok {
		return ""
	}
	along := floats.Dot(q, p.Fit.Residual)
	if math.Abs(along) < 0.2*math.Sqrt(p.Fit.RSS) {
		return ""
	}
	if along > 0 {
		return ": the line lies below the rows at both ends and above them in the middle"
	}
	return ": the line lies above the rows at both ends and below them in the middle"
}

// LargestShape is the column of the linearity score that the residuals follow
// most, off the design and of unit length; nil when there is none.
func (p *Pass) LargestShape() []float64 {
	if p.Design.X() == nil {
		return nil
	}
	columns := p.shapes()
	if len(columns) == 0 {
		return nil
	}
	units := make([][]float64, len(columns))
	for k, c := range columns {
		units[k] = c.unit
	}
	best, _ := largestAlong(units, p.Fit.Residual)
	return units[best]
}
