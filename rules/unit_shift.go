package rules

import (
	"fmt"
	"math"
	"slices"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// UnitShift asks for rows in another unit.
var UnitShift = &Rule{
	Name:   "unit-shift",
	Family: OfTable,
	Asks:   "Is a stretch or a group of rows in another unit?",
	Why:    "Rows in another unit look like a real and very large difference, and turn slopes and groups upside down.",
	Method: "looks for three or more consecutive rows, or all rows of a label, that lie more than three robust standard deviations off the others (off their median by group, or off a robust line, Theil 1950 and Sen 1968), " +
		"apart from them by a gap of one, and among them once brought from another unit: a factor of 10, 100, 1000, 2.54, 25.4, degrees Fahrenheit or Celsius, radians or degrees",
	Limit: "a chance of at most 0.2 %: the number of rows times the share of rows that lie off elsewhere, once for each row of the stretch. For the rows of one label only factors of ten or more and degrees are asked. " +
		"In rows sorted by the column or the predictor the gap must be of three, and only factors of ten or more and degrees are asked. Columns set by design are not asked",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.MendUnits, remedy.WithoutDoubted},
	Run:      unitShift,
}

// conversion brings a number from the unit that it may be in to that of its
// column.
type conversion struct {
	said   string
	mend   func(v float64) float64
	coarse bool // so large a step that it can be told from a true difference of labels
}

func conversions() []conversion {
	var all []conversion
	times := func(factor float64, up, down string, coarse bool) {
		all = append(all,
			conversion{up, func(v float64) float64 { return v / factor }, coarse},
			conversion{down, func(v float64) float64 { return v * factor }, coarse})
	}
	times(10, "10 times too large, as mm for cm", "10 times too small, as cm for mm", true)
	times(100, "100 times too large, as cm for m or % for shares", "100 times too small, as m for cm or shares for %", true)
	times(1000, "1000 times too large, as g for kg", "1000 times too small, as kg for g", true)
	times(2.54, "2.54 times too large, as cm for inches", "2.54 times too small, as inches for cm", false)
	times(25.4, "25.4 times too large, as mm for inches", "25.4 times too small, as inches for mm", true)
	times(180/math.Pi, "57.3 times too large, as degrees for radians", "57.3 times too small, as radians for degrees", true)
	return append(all,
		conversion{"in °F, where the others are in °C", func(v float64) float64 { return (v - 32) * 5 / 9 }, true},
		conversion{"in °C, where the others are in °F", func(v float64) float64 { return v*9/5 + 32 }, true})
}

// shift is one set of rows that may be in another unit, as positions in the
// profile of its column.
type shift struct {
	col    *readers.Column
	at     []int
	by     conversion
	also   []conversion
	of     string // words for the rows
	chance float64
	off    float64 // median distance from the others once mended
}

func unitShift(p *Pass) (Outcome, error) {
	found := p.tally()
	var changes []model.Change
	var doubted []Place
	for _, col := range p.measured() {
		s, ok := p.shiftOf(col)
		if !ok {
			continue
		}
		f := p.Profile(col)
		var where []Place
		for _, k := range s.at {
			where = append(where, Place{Row: f.Rows[k], Column: col})
			changes = append(changes, model.Change{Row: f.Rows[k], Column: col, Value: s.by.mend(f.Values[k])})
		}
		if p.Uses(col) {
			doubted = append(doubted, where...)
		}
		said := fmt.Sprintf("%s is %s in %s", col.Title(), s.by.said, s.of)
		for k, c := range s.also {
			if k == 0 {
				said += " (or " + c.said
			} else {
				said += "; or " + c.said
			}
		}
		if len(s.also) > 0 {
			said += ")"
		}
		found.set(col, where, said)
	}
	o := found.outcome("no stretch of rows fits better in another unit", func(words string, _ int) string {
		return "perhaps another unit: " + words + "; there these rows would lie among the others. Or do they truly differ so?"
	})
	if o.Answer == Breach {
		o.Target.Values = p.changes(changes)
		o.Target.Rows = p.target(doubted)
	}
	return o, nil
}

// shiftOf finds the least likely shift of a column.
func (p *Pass) shiftOf(col *readers.Column) (shift, bool) {
	f := p.Profile(col)
	if p.mayBeSet(col) || len(f.Values) < 8 || f.Distinct < 5 {
		return shift{}, false
	}
	var all []shift
	for _, v := range p.views(col) {
		all = append(all, v.stretches()...)
	}
	all = append(all, p.labelShifts(col)...)
	var likely []shift
	for _, s := range all {
		if s.chance <= tableChance {
			likely = append(likely, s)
		}
	}
	if len(likely) == 0 {
		return shift{}, false
	}
	// The longest of the unlikely ones; at a tie the one that mends best.
	best := slices.MinFunc(likely, func(a, b shift) int {
		if d := len(b.at) - len(a.at); d != 0 {
			return d
		}
		if a.off < b.off {
			return -1
		}
		return 1
	})
	best.col = col
	for _, s := range likely {
		if slices.Equal(s.at, best.at) && s.by.said != best.by.said && !slices.ContainsFunc(best.also, func(c conversion) bool { return c.said == s.by.said }) {
			best.also = append(best.also, s.by)
		}
	}
	return best, true
}

// view is a column seen about a centre: where each of its numbers would be
// expected, and how far they scatter about that.
type view struct {
	p      *Pass
	f      *Profile
	centre []float64
	scale  float64
}

// views sees a column about its median, about the medians of its groups, and
// about a robust line on the predictor.
func (p *Pass) views(col *readers.Column) []view {
	f := p.Profile(col)
	one := make([]int32, len(f.Values))
	centre, scale := aboutMedians(f.Values, one, 1)
	all := []view{{p, f, centre, scale}}
	b := p.bulkOf(col)
	if p.Columns.Group != nil {
		all = append(all, view{p, f, b.centre, b.scale})
	}
	if col == p.Columns.Response && len(p.Columns.Predictors) > 0 {
		all = append(all, p.lineView(f, p.Columns.Predictors[0])...)
	}
	return slices.DeleteFunc(all, func(v view) bool { return !(v.scale > 0) })
}

// lineView sees the response about lines of one slope in each group.
func (p *Pass) lineView(f *Profile, x *readers.Column) []view {
	var values, at []float64
	var keep []int
	for k, i := range f.Rows {
		if v, ok := x.Number(i); ok {
			values, at, keep = append(values, f.Values[k]), append(at, v), append(keep, k)
		}
	}
	if len(keep) < 8 {
		return nil
	}
	group := make([]int, len(keep))
	codes32 := make([]int32, len(keep))
	groups := 1
	if g := p.Columns.Group; g != nil {
		names, codes := g.Levels()
		if 4*len(names) <= len(keep) {
			groups = len(names) + 1
			for j, k := range keep {
				group[j], codes32[j] = int(codes[f.Rows[k]])+1, codes[f.Rows[k]]+1
			}
		}
	}
	slope := numeric.TheilSen(at, values, group, groups)
	if math.IsNaN(slope) {
		return nil
	}
	rest := make([]float64, len(keep))
	for j := range keep {
		rest[j] = values[j] - slope*at[j]
	}
	level, scale := aboutMedians(rest, codes32, groups)
	sub := &Profile{}
	centre := make([]float64, len(keep))
	for j, k := range keep {
		sub.Rows, sub.Values = append(sub.Rows, f.Rows[k]), append(sub.Values, values[j])
		centre[j] = level[j] + slope*at[j]
	}
	if len(keep) != len(f.Values) {
		return nil // gaps in the predictor would shift the positions
	}
	return []view{{p, f, centre, scale}}
}

// z is the signed distance of a number from where the k-th would be expected.
func (v view) z(k int, value float64) float64 { return (value - v.centre[k]) / v.scale }

const (
	offLine = 3.0 // robust standard deviations from which a number lies off
	onLine  = 2.5 // and up to which a mended one lies among the others
)

// stretches finds consecutive rows that lie off and are mended by one
// conversion.
func (v view) stretches() []shift {
	var all []shift
	offAt := make([]float64, len(v.f.Values))
	any := false
	ordered := v.p.ordered(v.f)
	for k, x := range v.f.Values {
		offAt[k] = v.z(k, x)
		any = any || math.Abs(offAt[k]) > offLine
	}
	if !any {
		return nil
	}
	for _, c := range conversions() {
		if ordered && !c.coarse {
			continue
		}
		for from := 0; from < len(offAt); {
			if !v.sure(offAt, c, from) {
				from++
				continue
			}
			to, last := from+1, from
			for to < len(offAt) && to-last <= 2 && math.Abs(v.z(to, c.mend(v.f.Values[to]))) < onLine {
				if v.sure(offAt, c, to) && (offAt[to] > 0) == (offAt[from] > 0) {
					last = to
				}
				to++
			}
			if s, ok := v.stretch(offAt, c, from, last, ordered); ok {
				all = append(all, s)
			}
			from = last + 1
		}
	}
	return all
}

// ordered reports whether the rows stand sorted by the column itself or by the
// predictor: neighbours are alike then, and so are neighbours far off.
func (p *Pass) ordered(f *Profile) bool {
	return sorted(f.Values) || p.Design != nil && p.sortedByPredictor()
}

// sure tells a number that lies off as it is and among the others once mended.
func (v view) sure(offAt []float64, c conversion, k int) bool {
	return math.Abs(offAt[k]) > offLine && math.Abs(v.z(k, c.mend(v.f.Values[k]))) < onLine
}

// stretch judges the positions from to last.
func (v view) stretch(offAt []float64, c conversion, from, last int, ordered bool) (shift, bool) {
	n := len(offAt)
	var at []int
	var mended []float64
	sure := 0
	for k := from; k <= last; k++ {
		at = append(at, k)
		mended = append(mended, v.z(k, c.mend(v.f.Values[k])))
		if v.sure(offAt, c, k) {
			sure++
		}
	}
	if sure < 3 || 10*sure < 7*len(at) || 5*len(at) > 2*n {
		return shift{}, false
	}
	// Rows of the right unit lie about the centre, not all on one side of it: a
	// long tail divided by 1000 lies near 0, and there nothing else may.
	off := math.Abs(numeric.Median(mended))
	if off > 2.8/math.Sqrt(float64(len(at)))+0.1 {
		return shift{}, false
	}
	gap := 1.0
	if ordered {
		gap = 3
	}
	chance, ok := apart(offAt, at, sure, gap)
	if !ok {
		return shift{}, false
	}
	first, end := v.p.Table.Row(v.f.Rows[from]), v.p.Table.Row(v.f.Rows[last])
	return shift{at: at, by: c, of: fmt.Sprintf("rows %d to %d", first, end), chance: chance * float64(n), off: off}, true
}

// apart gives the chance that so many given rows lie off when as many do as do
// elsewhere; ok is false when no gap parts them from the others.
func apart(offAt []float64, at []int, sure int, gap float64) (chance float64, ok bool) {
	side := math.Copysign(1, offAt[at[0]])
	nearest := math.Inf(1)
	for _, k := range at {
		if z := side * offAt[k]; z > offLine {
			nearest = min(nearest, z)
		}
	}
	n := len(offAt)
	elsewhere, close := 0, 0
	inside := 0
	for k, z := range offAt {
		if inside < len(at) && at[inside] == k {
			inside++
			continue
		}
		if math.Abs(z) > offLine {
			elsewhere++
		}
		if side*z > nearest-gap {
			close++
		}
	}
	share := float64(elsewhere+1) / float64(n)
	return math.Pow(share, float64(sure)), 50*close <= max(50, n)
}

// labelShifts compares the rows of each label with all others.
func (p *Pass) labelShifts(col *readers.Column) []shift {
	f := p.Profile(col)
	var all []shift
	for _, labels := range p.Table.Columns {
		names, codes := labels.Levels()
		if labels == col || labels.Kind() == readers.NumberColumn && labels != p.Columns.Group && labels != p.Columns.Subject || len(names) < 2 || len(names) > 20 || 4*len(names) > len(f.Values) {
			continue
		}
		for level := range names {
			all = append(all, p.labelShift(f, codes, int32(level), labels.Title(), names[level], len(names))...)
		}
	}
	return all
}

func (p *Pass) labelShift(f *Profile, codes []int32, level int32, column, name string, levels int) []shift {
	var at []int
	var others, own []float64
	for k, i := range f.Rows {
		if codes[i] == level {
			at = append(at, k)
			own = append(own, f.Values[k])
		} else {
			others = append(others, f.Values[k])
		}
	}
	if len(at) < 3 || len(others) < 5 || len(at) > len(others) {
		return nil
	}
	// A label in another unit has its middle beyond nearly all others.
	middle, below := numeric.Median(own), 0
	for _, x := range others {
		if x < middle {
			below++
		}
	}
	if 10*below > len(others) && 10*below < 9*len(others) {
		return nil
	}
	centre := numeric.Median(others)
	scale := 1.4826 * numeric.MAD(others)
	if !(scale > 0) {
		return nil
	}
	offAt := make([]float64, len(f.Values))
	for k, x := range f.Values {
		offAt[k] = (x - centre) / scale
	}
	var all []shift
	for _, c := range conversions() {
		if !c.coarse {
			continue
		}
		fits := 0
		mended := make([]float64, len(own))
		for j, k := range at {
			mended[j] = c.mend(own[j])
			if math.Abs(offAt[k]) > offLine && math.Abs(mended[j]-centre)/scale < onLine {
				fits++
			}
		}
		spread := 1.4826 * numeric.MAD(mended) / scale
		if 10*fits < 9*len(at) || math.Abs(numeric.Median(mended)-centre) > scale || spread < 0.4 || spread > 2.5 {
			continue
		}
		chance, ok := apart(offAt, at, fits, 1)
		if !ok {
			continue
		}
		words := fmt.Sprintf("the %s of %s %s", wording.Count(len(at), "row"), column, name)
		all = append(all, shift{at: at, by: c, of: words, chance: chance * float64(levels), off: math.Abs(numeric.Median(mended)-centre) / scale})
	}
	return all
}
