package audit

import (
	"cmp"
	"math"
	"slices"

	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/numeric"
)

// Drawing is what figures show and the rest of a result does not hold. What is
// not defined is NaN. Residuals are divided by sqrt(1 - leverage), so that all
// scatter alike in a sound table, and are in units of the response unless said
// otherwise.
type Drawing struct {
	Response  DrawnAxis
	Predictor DrawnAxis // without a name in a model of means
	Groups    []string  // one empty label without groups
	Rows      int       // used, of which Points holds some or all
	Points    []DrawnRow
	Aside     []DrawnAside
	Lines     []DrawnLine
	SD        float64 // residual standard deviation

	Inside    float64    // share of sound tables that stay inside each band
	Limit     float64    // that no residual passes in this share of sound tables
	Beyond    int        // residuals that pass it here
	Trend     *DrawnBand // means of residuals along the fitted values; nil for too few rows
	Size      *DrawnBand // means of their size along the predictor, in residual SD
	Scores    *DrawnBand // sorted residuals over normal scores, in residual SD
	Groupwise *DrawnBand // mean size in each group, in the order of Groups; nil for fewer than two
	Pull      float64    // |DFBETAS| that no row passes in this share of sound tables
	Pulled    []string   // the slopes that DrawnRow.Pulls runs over
	Order     DrawnAxis  // without a name when no order is known
	Sequence  []int      // positions in Points, in order
	Serial    *DrawnBand // means of residuals along the order

	Trials []DrawnTrial
}

// DrawnAxis is a column with its unit, which may be empty.
type DrawnAxis struct{ Name, Unit string }

// DrawnRow is a used row.
type DrawnRow struct {
	Row, Group int
	X, Y       float64 // X is NaN in a model of means
	Fitted     float64
	Residual   float64
	Scaled     float64   // residual in residual SD
	Score      float64   // expected place in a normal sample of this size
	Place      float64   // in the order, from 1
	Pulls      []float64 // DFBETAS per slope
}

// DrawnAside is a row that was not used, with what it has of the two values.
type DrawnAside struct {
	Row    int
	X, Y   float64
	Reason string
}

// DrawnLine is the line of one group from its least to its greatest predictor
// value, with the interval of the line; a mean has a single place, which is the
// group's number.
type DrawnLine struct {
	Group             int
	X, Y, Low, High   []float64
	Clear, HasBand    bool // Clear: the interval of the slope excludes zero
	FromX, ToX, Slope float64
}

// DrawnBand is what sound tables stay inside at several places, with what was
// seen there.
type DrawnBand struct {
	At, Low, High, Seen []float64
	Rows                int // averaged at each place, at most; 0 for single rows
}

// Outside counts the places at which what was seen leaves the band.
func (b *DrawnBand) Outside() int {
	n := 0
	for k, v := range b.Seen {
		if v < b.Low[k] || v > b.High[k] {
			n++
		}
	}
	return n
}

// DrawnTrial is a remedy that was tried, with the answers under it.
type DrawnTrial struct {
	Rule, Remedy, Words string
	Log                 bool // the slopes are of the logarithm of the response
	Changes             bool
	Slopes              []TrialSlope
	Difference          *TrialDifference
	Judged              map[string]string
}

// drawnRows is the number of rows above which only some are drawn.
const drawnRows = 2000

func (e *examination) drawing() *Drawing {
	nan := math.NaN()
	p := e.pass
	d := &Drawing{
		Response: axisOf(p.Columns.Response), Groups: p.Design.Groups, Rows: p.Design.N(),
		Inside: 1 - p.Settings.FalseAlarm, Limit: nan, Pull: nan, SD: nan,
	}
	if x := p.Columns.Predictors; len(x) > 0 {
		d.Predictor = axisOf(x[0])
	}
	e.drawAside(d)
	e.drawTrials(d)
	s := e.scaled()
	shown := e.shown(s)
	e.drawPoints(d, s, shown)
	if p.Fit == nil {
		return d
	}
	d.Lines = e.lines()
	if s == nil {
		return d
	}
	d.SD = p.Fit.SD
	e.drawBands(d, s)
	if x := e.named(rules.Influence.Name); x != nil && x.joint != nil && len(x.joint.Point) > 0 {
		d.Pull = x.joint.Point[0]
	}
	return d
}

func axisOf(c *readers.Column) DrawnAxis { return DrawnAxis{Name: c.Title(), Unit: c.Unit} }

func (e *examination) drawAside(d *Drawing) {
	number := func(c *readers.Column, i int) float64 {
		if v, ok := c.Number(i); ok {
			return v
		}
		return math.NaN()
	}
	for _, s := range e.pass.Design.SetAside {
		a := DrawnAside{Row: e.pass.Table.Row(s.Row), Reason: s.Reason, X: math.NaN(), Y: number(e.pass.Columns.Response, s.Row)}
		if x := e.pass.Columns.Predictors; len(x) > 0 {
			a.X = number(x[0], s.Row)
		}
		d.Aside = append(d.Aside, a)
	}
}

func (e *examination) drawTrials(d *Drawing) {
	say := e.speaker()
	for _, head := range e.orderedHeads() {
		for _, x := range e.findings {
			if x != head && x.root != head.rule.Name || x.state == Skip || x.state == Pass && !x.rule.AlwaysTry {
				continue
			}
			for _, t := range x.trials {
				if !t.tried {
					continue
				}
				r := Remedy{Judged: map[string]string{}}
				e.fillTrial(&r, t)
				d.Trials = append(d.Trials, DrawnTrial{
					Rule: x.rule.Name, Remedy: t.remedy.Name, Words: say.trialWords(x, t), Log: t.answers.Scale != e.pass.Answers.Scale,
					Changes: r.AnswerChanges, Slopes: r.Slopes, Difference: r.Difference, Judged: r.Judged,
				})
			}
		}
	}
}

// scaled gives the residuals over their own standard deviations; nil where
// there is no scatter to judge from. Rows of leverage 1 are NaN.
func (e *examination) scaled() []float64 {
	if e.pass.Fit == nil || !e.pass.Fit.HasScatter() {
		return nil
	}
	return e.pass.Fit.Diagnostics().Internal
}

// shown picks the rows that are drawn, in file order: all of a small table, of a
// large one those that a finding names, the extreme ones, and others by lot.
func (e *examination) shown(scaled []float64) []int {
	d := e.pass.Design
	n := d.N()
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	if n <= drawnRows {
		return all
	}
	chosen := make([]bool, n)
	e.chooseNamed(chosen)
	chooseEnds(chosen, d.Y)
	if x := d.X(); x != nil {
		chooseEnds(chosen, x)
	}
	if scaled != nil {
		chooseEnds(chosen, scaled)
		for _, v := range e.pass.Fit.Diagnostics().DFBETAS {
			chooseEnds(chosen, v)
		}
	}
	random := numeric.Stream(e.pass.Settings.Seed, "figure/shown")
	for k := range drawnRows {
		at := k + random.IntN(n-k)
		all[k], all[at] = all[at], all[k]
		chosen[all[k]] = true
	}
	var rows []int
	for i, yes := range chosen {
		if yes {
			rows = append(rows, i)
		}
	}
	return rows
}

// mostNamed is how many rows of one finding are sure to be drawn.
const mostNamed = 100

func (e *examination) chooseNamed(chosen []bool) {
	at := map[int]int{}
	for i, row := range e.pass.Design.Rows {
		at[row] = i
	}
	for _, x := range e.findings {
		for k, w := range x.outcome.Where {
			if i, used := at[w.Row]; used && k < mostNamed {
				chosen[i] = true
			}
		}
	}
}

// chooseEnds chooses the rows with the ten least and the ten greatest values.
func chooseEnds(chosen []bool, v []float64) {
	const ends = 10
	var rows []int
	for i, x := range v {
		if !math.IsNaN(x) {
			rows = append(rows, i)
		}
	}
	slices.SortStableFunc(rows, func(a, b int) int { return cmp.Compare(v[a], v[b]) })
	for k, i := range rows {
		if k < ends || k >= len(rows)-ends {
			chosen[i] = true
		}
	}
}

func (e *examination) drawPoints(d *Drawing, scaled []float64, shown []int) {
	design, f := e.pass.Design, e.pass.Fit
	nan := math.NaN()
	var scores []float64
	if scaled != nil {
		scores = normalScores(scaled)
		for k, g := range f.Diagnostics().SlopeOf {
			label := ""
			if g >= 0 {
				label = design.Groups[g]
			}
			if len(f.Diagnostics().DFBETAS[k]) > 0 {
				d.Pulled = append(d.Pulled, label)
			}
		}
	}
	place := e.places(d)
	inOrder := map[int]int{}
	for k, i := range shown {
		r := DrawnRow{
			Row: e.pass.Table.Row(design.Rows[i]), Group: design.Group[i], X: nan, Y: design.Y[i],
			Fitted: nan, Residual: nan, Scaled: nan, Score: nan, Place: nan,
		}
		if x := design.X(); x != nil {
			r.X = x[i]
		}
		if f != nil {
			r.Fitted = f.Fitted[i]
		}
		if scaled != nil {
			r.Scaled, r.Residual, r.Score = scaled[i], scaled[i]*f.SD, scores[i]
			for _, v := range f.Diagnostics().DFBETAS {
				r.Pulls = append(r.Pulls, v[i])
			}
		}
		if place != nil && place[i] > 0 {
			r.Place = float64(place[i])
			inOrder[place[i]] = k
		}
		d.Points = append(d.Points, r)
	}
	for _, at := range sortedKeys(inOrder) {
		d.Sequence = append(d.Sequence, inOrder[at])
	}
}

// places gives each used row its place in the order, from 1; 0 for none. It is
// nil when no order is known.
func (e *examination) places(d *Drawing) []int {
	if e.pass.Design.Order == nil {
		return nil
	}
	d.Order = axisOf(e.pass.Columns.Order)
	place := make([]int, e.pass.Design.N())
	rows, _ := e.pass.Design.Sequence()
	for k, i := range rows {
		place[i] = k + 1
	}
	return place
}

func sortedKeys(m map[int]int) []int {
	var keys []int
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}

// normalScores are the expected values of a sorted normal sample, by Blom 1958,
// (i - 3/8)/(n + 1/4), at each value's rank; NaN for NaN.
func normalScores(v []float64) []float64 {
	rows := definedRows(v)
	slices.SortStableFunc(rows, func(a, b int) int { return cmp.Compare(v[a], v[b]) })
	scores := slices.Repeat([]float64{math.NaN()}, len(v))
	for k, i := range rows {
		scores[i] = blom(k, len(rows))
	}
	return scores
}

func blom(k, n int) float64 {
	return numeric.NormalQuantile((float64(k) + 0.625) / (float64(n) + 0.25))
}

func definedRows(v []float64) []int {
	var rows []int
	for i, x := range v {
		if !math.IsNaN(x) && !math.IsInf(x, 0) {
			rows = append(rows, i)
		}
	}
	return rows
}

// lineSteps is how many places of a line carry its interval.
const lineSteps = 24

// lines are those of the answers: each group's own line with its own scatter
// where that is what is quoted, else the joint model's at the mean of the
// covariates.
func (e *examination) lines() []DrawnLine {
	f := e.pass.Fit
	d := f.Design
	terms := f.SlopeTerms()
	var all []DrawnLine
	for g := range d.Groups {
		line := DrawnLine{Group: g, Slope: math.NaN()}
		level := make([]float64, f.P())
		level[g] = 1
		if d.X() == nil {
			e.fillLine(&line, f.Term(g).Estimate, []float64{float64(g)}, f.SD, float64(f.DF), level, nil)
			all = append(all, line)
			continue
		}
		k, own := terms[0], 0
		if len(terms) > 1 || !d.CommonSlope && d.HasGroup() {
			k, own = terms[g], g
		}
		if k < 0 {
			continue
		}
		slope := make([]float64, f.P())
		slope[k] = 1
		x := d.OfGroup(d.X(), g)
		line.FromX, line.ToX = slices.Min(x), slices.Max(x)
		line.Slope = f.Coef[k]
		estimate := e.pass.Answers.Slopes[own]
		line.Clear = estimate.Clear()
		sd, df := f.SD, float64(f.DF)
		if f.QuotesOwnLines() {
			df = estimate.DF
			sd = 0
			if estimate.PooledSE > 0 {
				sd = f.SD * estimate.SE / estimate.PooledSE
			}
		}
		var at []float64
		for step := range lineSteps + 1 {
			at = append(at, line.FromX+(line.ToX-line.FromX)*float64(step)/lineSteps)
		}
		e.fillLine(&line, f.Coef[g], at, sd, df, level, &slopePart{k: k, weights: slope, centre: f.Terms[k].Centre})
		all = append(all, line)
	}
	return all
}

// slopePart is the part of a line that changes with the predictor.
type slopePart struct {
	k       int
	weights []float64
	centre  float64
}

// fillLine computes a line and its interval at the given places. The variance
// is a square of the distance from the centre, so three covariances do.
func (e *examination) fillLine(line *DrawnLine, level float64, at []float64, sd, df float64, weights []float64, slope *slopePart) {
	f := e.pass.Fit
	v00 := f.Basis.Covariance(weights, weights)
	v01, v11, b, centre := 0.0, 0.0, 0.0, 0.0
	if slope != nil {
		v01, v11 = f.Basis.Covariance(weights, slope.weights), f.Basis.Covariance(slope.weights, slope.weights)
		b, centre = f.Coef[slope.k], slope.centre
	}
	t := math.NaN()
	if df > 0 && !math.IsNaN(sd) {
		line.HasBand = true
		t = numeric.StudentQuantile(1-(1-e.pass.Settings.Confidence)/2, df)
	}
	for _, x := range at {
		y := level + b*(x-centre)
		half := t * sd * math.Sqrt(max(0, v00+2*(x-centre)*v01+(x-centre)*(x-centre)*v11))
		line.X, line.Y = append(line.X, x), append(line.Y, y)
		line.Low, line.High = append(line.Low, y-half), append(line.High, y+half)
	}
}

// drawBands finds what sound tables of this design stay inside. Residuals of a
// sound table are independent of its fitted values, so these keep their places.
func (e *examination) drawBands(d *Drawing, scaled []float64) {
	f := e.pass.Fit
	trend := newWindows(f.Fitted, definedRows(scaled))
	along := f.Design.X()
	if along == nil {
		along = make([]float64, f.N())
		for i, g := range f.Design.Group {
			along[i] = float64(g)
		}
	}
	runs := runs{trend: trend, size: newWindows(along, definedRows(scaled)), groups: e.byGroup(scaled)}
	if place := e.places(d); place != nil {
		at := make([]float64, len(place))
		var rows []int
		for i, k := range place {
			at[i] = float64(k)
			if k > 0 && !math.IsNaN(scaled[i]) {
				rows = append(rows, i)
			}
		}
		runs.serial = newWindows(at, rows)
	}
	if f.N() > rules.LargestSimulated {
		e.closedBands(d, scaled, runs)
	} else {
		e.simulatedBands(d, scaled, runs)
	}
	for _, r := range scaled {
		if math.Abs(r)*f.SD > d.Limit {
			d.Beyond++
		}
	}
}

// byGroup makes a window of each group; none when a group has no residual to
// speak of or there is one group.
func (e *examination) byGroup(scaled []float64) windows {
	d := e.pass.Design
	w := windows{rows: make([][]int, len(d.Groups))}
	for i, g := range d.Group {
		if !math.IsNaN(scaled[i]) {
			w.rows[g] = append(w.rows[g], i)
		}
	}
	for g, rows := range w.rows {
		if len(rows) < leastWindow {
			return windows{}
		}
		w.at = append(w.at, float64(g))
	}
	if len(d.Groups) < 2 {
		return windows{}
	}
	return w
}

// drawnTables is how many sound tables the bands are found from.
func drawnTables(n int) int {
	if n > 500 {
		return 499
	}
	return 999
}

func (e *examination) simulatedBands(d *Drawing, scaled []float64, w runs) {
	f := e.pass.Fit
	root := make([]float64, f.N())
	for i, h := range f.Leverage {
		root[i] = math.Sqrt(1 - h)
	}
	rows := definedRows(scaled)
	places := scorePlaces(len(rows))
	var largest []float64
	var trends, sizes, groups, serials, sorted [][]float64
	r, sizeOf, ordered := make([]float64, f.N()), make([]float64, f.N()), make([]float64, len(rows))
	var sorter numeric.Sorter
	calibrate.Sound(e.pass, "figure/sound", drawnTables(f.N()), func(s *rules.Sample) {
		sd := math.Sqrt(s.RSS / float64(f.DF))
		most := 0.0
		for k, i := range rows {
			r[i] = s.E[i] / (sd * root[i])
			sizeOf[i] = math.Abs(r[i])
			most = max(most, sizeOf[i])
			ordered[k] = r[i]
		}
		largest = append(largest, most)
		trends, serials = append(trends, w.trend.means(r)), append(serials, w.serial.means(r))
		sizes, groups = append(sizes, w.size.means(sizeOf)), append(groups, w.groups.means(sizeOf))
		into := make([]float64, len(rows))
		sorter.Sort(into, ordered, 1)
		sorted = append(sorted, at(into, places))
	})
	slices.Sort(largest)
	d.Limit = largest[reached(len(largest), d.Inside)] * f.SD
	d.Trend = w.trend.band(trends, scaled, d.Inside, f.SD)
	d.Serial = w.serial.band(serials, scaled, d.Inside, f.SD)
	d.Size = w.size.band(sizes, absolute(scaled), d.Inside, 1)
	d.Groupwise = w.groups.band(groups, absolute(scaled), d.Inside, 1)
	d.Scores = scoreBand(sorted, scaled, places, d.Inside)
}

// reached is the position among n sorted values that the given share stays at
// or under.
func reached(n int, share float64) int {
	return min(n-1, int(math.Ceil(share*float64(n+1)-1e-9))-1)
}

func absolute(v []float64) []float64 {
	out := make([]float64, len(v))
	for i, x := range v {
		out[i] = math.Abs(x)
	}
	return out
}

func at(v []float64, places []int) []float64 {
	out := make([]float64, len(places))
	for k, i := range places {
		out[k] = v[i]
	}
	return out
}

// scorePlaces are the ranks at which the band of the quantile plot is found: all
// of few rows, of many every one near the ends and some between.
func scorePlaces(n int) []int {
	const ends, between = 40, 160
	var places []int
	for k := range n {
		if n <= 2*ends+between || k < ends || k >= n-ends || k%(n/between) == 0 {
			places = append(places, k)
		}
	}
	return places
}

func scoreBand(tables [][]float64, scaled []float64, places []int, inside float64) *DrawnBand {
	var seen []float64
	for _, i := range definedRows(scaled) {
		seen = append(seen, scaled[i])
	}
	slices.Sort(seen)
	b := &DrawnBand{Seen: at(seen, places)}
	b.Low, b.High = envelope(tables, inside)
	for _, k := range places {
		b.At = append(b.At, blom(k, len(seen)))
	}
	return b
}

// closedBands does without simulation of residuals: in a large table they are
// all but independent.
func (e *examination) closedBands(d *Drawing, scaled []float64, w runs) {
	f := e.pass.Fit
	outside := 1 - d.Inside
	df := float64(f.DF)
	t := numeric.StudentQuantile(1-outside/2/float64(f.N()), df-1)
	d.Limit = f.SD * t * math.Sqrt(df/(df-1+t*t))
	d.Trend = w.trend.closedBand(scaled, 0, 1, outside, f.SD)
	d.Serial = w.serial.closedBand(scaled, 0, 1, outside, f.SD)
	// |z| has mean sqrt(2/pi) and variance 1 - 2/pi.
	middle, spread := math.Sqrt(2/math.Pi), math.Sqrt(1-2/math.Pi)
	d.Size = w.size.closedBand(absolute(scaled), middle, spread, outside, 1)
	d.Groupwise = w.groups.closedBand(absolute(scaled), middle, spread, outside, 1)
	n := len(definedRows(scaled))
	places := scorePlaces(n)
	var tables [][]float64
	for b := range 199 {
		// Sums of exponential deviates over their total are sorted uniform ones.
		random := numeric.BlockStream(e.pass.Settings.Seed, "figure/sorted", b)
		sum := 0.0
		sums := make([]float64, 0, len(places))
		for k, next := 0, 0; k < n; k++ {
			sum += random.ExpFloat64()
			if next < len(places) && places[next] == k {
				sums = append(sums, sum)
				next++
			}
		}
		sum += random.ExpFloat64()
		for k := range sums {
			sums[k] = numeric.NormalQuantile(sums[k] / sum)
		}
		tables = append(tables, sums)
	}
	d.Scores = scoreBand(tables, scaled, places, d.Inside)
}

// envelope gives at each place the limits that the given share of tables stays
// within at every place at once. The distance from the mean counts in that of
// the 2.5 % and 97.5 % points, so that skew at a place widens one side only
// (Myllymäki et al. 2017, J. R. Stat. Soc. B 79:381, directional quantiles).
func envelope(tables [][]float64, inside float64) (low, high []float64) {
	places := len(tables[0])
	mean, down, up := make([]float64, places), make([]float64, places), make([]float64, places)
	column := make([]float64, len(tables))
	for k := range places {
		for r, v := range tables {
			column[r] = v[k]
		}
		slices.Sort(column)
		mean[k] = numeric.Mean(column)
		last := float64(len(column) - 1)
		down[k] = mean[k] - column[int(math.Round(0.025*last))]
		up[k] = column[int(math.Round(0.975*last))] - mean[k]
	}
	largest := make([]float64, len(tables))
	for r, v := range tables {
		for k, x := range v {
			switch away := x - mean[k]; {
			case away > 0 && up[k] > 0:
				largest[r] = max(largest[r], away/up[k])
			case away < 0 && down[k] > 0:
				largest[r] = max(largest[r], -away/down[k])
			}
		}
	}
	slices.Sort(largest)
	c := largest[reached(len(largest), inside)]
	for k := range places {
		low, high = append(low, mean[k]-c*down[k]), append(high, mean[k]+c*up[k])
	}
	return low, high
}

// runs are the windows whose means are drawn.
type runs struct{ trend, size, groups, serial windows }

// windows are runs of rows that are neighbours along some values.
type windows struct {
	rows [][]int
	at   []float64
}

const (
	fewestWindows = 3
	mostWindows   = 15
	leastWindow   = 3 // rows
)

// newWindows cuts the rows along v into about as many runs as the root of their
// number; rows of one value stay together when there are few values. There is
// none when they would be of fewer than three rows.
func newWindows(v []float64, rows []int) windows {
	rows = slices.Clone(rows)
	slices.SortStableFunc(rows, func(a, b int) int { return cmp.Compare(v[a], v[b]) })
	count := min(mostWindows, max(fewestWindows, int(math.Round(math.Sqrt(float64(len(rows)))))))
	var w windows
	values := make([]float64, len(rows))
	for k, i := range rows {
		values[k] = v[i]
	}
	if numeric.Distinct(values) <= count {
		for from := 0; from < len(rows); {
			to := from
			for to < len(rows) && values[to] == values[from] {
				to++
			}
			w.rows = append(w.rows, rows[from:to])
			from = to
		}
	} else if len(rows) >= count*leastWindow {
		for k := range count {
			w.rows = append(w.rows, rows[k*len(rows)/count:(k+1)*len(rows)/count])
		}
	}
	if len(w.rows) < 2 {
		return windows{}
	}
	for _, run := range w.rows {
		w.at = append(w.at, meanOver(v, run))
	}
	return w
}

func meanOver(v []float64, rows []int) float64 {
	sum := 0.0
	for _, i := range rows {
		sum += v[i]
	}
	return sum / float64(len(rows))
}

// means averages v over each window.
func (w windows) means(v []float64) []float64 {
	out := make([]float64, len(w.rows))
	for k, rows := range w.rows {
		out[k] = meanOver(v, rows)
	}
	return out
}

func (w windows) most() int {
	most := 0
	for _, rows := range w.rows {
		most = max(most, len(rows))
	}
	return most
}

// band makes the band from simulated means; nil without windows.
func (w windows) band(tables [][]float64, v []float64, inside, unit float64) *DrawnBand {
	if len(w.rows) == 0 {
		return nil
	}
	b := &DrawnBand{At: w.at, Seen: w.means(v), Rows: w.most()}
	b.Low, b.High = envelope(tables, inside)
	widest := 0.0
	for k := range b.At {
		widest = max(widest, b.High[k]-b.Low[k])
	}
	if widest < 1e-6 {
		return nil // the fit makes every mean zero
	}
	return b.times(unit)
}

// closedBand makes the band of independent values of the given mean and SD,
// shared out evenly over the windows.
func (w windows) closedBand(v []float64, mean, sd, outside, unit float64) *DrawnBand {
	if len(w.rows) == 0 {
		return nil
	}
	b := &DrawnBand{At: w.at, Seen: w.means(v), Rows: w.most()}
	z := numeric.NormalQuantile(1 - outside/2/float64(len(w.rows)))
	for _, rows := range w.rows {
		half := z * sd / math.Sqrt(float64(len(rows)))
		b.Low, b.High = append(b.Low, mean-half), append(b.High, mean+half)
	}
	return b.times(unit)
}

func (b *DrawnBand) times(unit float64) *DrawnBand {
	for k := range b.At {
		b.Low[k], b.High[k], b.Seen[k] = b.Low[k]*unit, b.High[k]*unit, b.Seen[k]*unit
	}
	return b
}
