// Package calibrate gives the rules whose alarms could be chance exact p-values
// in this very design, holds them together at one rate of false alarms, and
// tells the power of each. It knows no rule by name and prints nothing.
//
// With Gaussian errors and a fixed design the residuals, up to their scale, have
// a distribution that depends on nothing unknown: they are drawn by projecting
// normal deviates off the design (Dufour, Khalaf, Bernard and Genest 2004,
// J. Econometrics 122:317).
package calibrate

import (
	"math"
	"math/rand/v2"
	"slices"

	"footing/rules"
)

// Options say how much is simulated.
type Options struct {
	Power bool   // tell the power of every rule
	Name  string // of the random streams, "" for the audit itself

	// OnlyAlarms leaves out what is needed to tell of an alarm, but not to know
	// of it: Point may be nil.
	OnlyAlarms bool
}

// Replicates is how many tables are drawn for the null of a design of n rows at
// the rate alpha of false alarms; asked overrides it when positive. It is
// rounded up so that alpha times one more than it is a whole number.
func Replicates(n, asked int, alpha float64) int {
	r := 1999
	if n > 500 {
		r = 999
	}
	if asked > 0 {
		r = asked
	}
	for k := r; k <= r+10000; k++ {
		if whole := alpha * float64(k+1); math.Abs(whole-math.Round(whole)) < 1e-9 && math.Round(whole) >= 1 {
			return k
		}
	}
	return r
}

// family is the rules that are asked of a design, with their members in one
// row.
type family struct {
	names   []string
	chances []*rules.Chance
	first   []int // position of each rule's first member; one more than rules
}

func (f *family) members() int { return f.first[len(f.first)-1] }

// Judge asks the rules that have a Chance, all of one pass, and judges them
// together. The result has an entry for every such rule; those that are not
// asked say why.
func Judge(asked []*rules.Rule, p *rules.Pass, o Options) map[string]*rules.Joint {
	f, joint := gather(asked, p)
	if len(f.names) == 0 {
		return joint
	}
	if p.Fit.N() > rules.LargestSimulated {
		f.judgeClosed(p, joint, o)
	} else {
		f.judgeSimulated(p, joint, o)
	}
	for k, name := range f.names {
		j := joint[name]
		small := j.PJoint <= p.Settings.FalseAlarm
		j.BelowFloor = small && f.chances[k].Floor.Below()
		j.Alarm = small && !j.BelowFloor
	}
	return joint
}

// gather asks the rules for what they have to be judged by.
func gather(asked []*rules.Rule, p *rules.Pass) (*family, map[string]*rules.Joint) {
	joint := map[string]*rules.Joint{}
	f := &family{first: []int{0}}
	for _, r := range asked {
		if r.Chance == nil {
			continue
		}
		chance, reason := r.Chance(p)
		joint[r.Name] = &rules.Joint{
			Chance: chance, Asked: chance != nil, Reason: reason, P: 1, PJoint: 1, Power: math.NaN(), AnyPower: math.NaN(),
		}
		if chance == nil {
			continue
		}
		f.names = append(f.names, r.Name)
		f.chances = append(f.chances, chance)
		f.first = append(f.first, f.members()+len(chance.Members))
	}
	return f, joint
}

// judgeSimulated reads p-values off simulated tables, and power where asked.
func (f *family) judgeSimulated(p *rules.Pass, joint map[string]*rules.Joint, o Options) {
	d := newDrawer(p, f, o.Name)
	null := d.simulate(Replicates(p.Fit.N(), p.Settings.Replicates, p.Settings.FalseAlarm))
	pJoint := null.stepDown()
	for k, name := range f.names {
		j := joint[name]
		j.P, j.PJoint = null.rule[k][0], pJoint[k]
		members := null.member[f.first[k]:f.first[k+1]]
		j.Strong = strongest(members)
		for m := f.first[k]; m < f.first[k+1]; m++ {
			j.Point = append(j.Point, null.point(m))
		}
	}
	if !o.Power {
		return
	}
	for k, name := range f.names {
		trouble := f.chances[k].Breach()
		rates := null.Rates("power/"+name, powerTables, trouble.New)
		joint[name].Trouble = &trouble
		joint[name].Power, joint[name].AnyPower = rates.Rule[name], rates.Any
	}
}

// powerTables is how many breached tables tell the power of a rule: its
// standard error is at most 0.025.
const powerTables = 400

// strongest is the member whose observed p is smallest, the first at a tie.
func strongest(members [][]float64) int {
	best := 0
	for m := range members {
		if members[m][0] < members[best][0] {
			best = m
		}
	}
	return best
}

// Null is the simulated null of a design: the observed table is row 0.
type Null struct {
	family   *family
	drawer   *drawer
	sorted   [][]float64 // per member the statistics in ascending order
	member   [][]float64 // per member, per row the p-value
	rule     [][]float64 // per rule, per row the p-value
	least    [][]float64 // per rule with several members the smallest member p in ascending order; nil for one
	critical float64     // the largest rule p at which the whole family keeps its rate
	alpha    float64
}

// newNull takes the statistics of the observed table and of every replicate,
// each a row over the members.
func newNull(d *drawer, observed []float64, replicates [][]float64) *Null {
	f := d.family
	rows := len(replicates) + 1
	n := &Null{family: f, drawer: d, alpha: d.pass.Settings.FalseAlarm}
	for m := range f.members() {
		values := make([]float64, rows)
		values[0] = observed[m]
		for r, row := range replicates {
			values[r+1] = row[m]
		}
		sorted := slices.Clone(values)
		slices.Sort(sorted)
		n.sorted = append(n.sorted, sorted)
		p := make([]float64, rows)
		for r, v := range values {
			p[r] = exceeding(sorted, v)
		}
		n.member = append(n.member, p)
	}
	for k := range f.names {
		p, least := n.rulePs(n.member[f.first[k]:f.first[k+1]])
		n.rule = append(n.rule, p)
		n.least = append(n.least, least)
	}
	n.critical = n.largestCritical()
	return n
}

// tied is how nearly two statistics must agree to count as equal. One that is
// the same whatever the responses differs by rounding only, and must not be told
// apart by it.
const tied = 1e-10

// exceeding is the share of the sorted values that are at least v; ties count.
func exceeding(sorted []float64, v float64) float64 {
	if !math.IsInf(v, 0) {
		v -= tied * math.Abs(v)
	}
	at, _ := slices.BinarySearch(sorted, v)
	return float64(len(sorted)-at) / float64(len(sorted))
}

// notAbove is the share of the sorted values that are at most v.
func notAbove(sorted []float64, v float64) float64 {
	at, _ := slices.BinarySearchFunc(sorted, v, func(e, target float64) int {
		if e <= target {
			return -1
		}
		return 1
	})
	return float64(at) / float64(len(sorted))
}

// rulePs makes one p-value of several members: the smallest, against its own
// null.
func (n *Null) rulePs(members [][]float64) (p, sortedLeast []float64) {
	if len(members) == 1 {
		return members[0], nil
	}
	least := slices.Clone(members[0])
	for _, m := range members[1:] {
		for r, v := range m {
			least[r] = min(least[r], v)
		}
	}
	sortedLeast = slices.Clone(least)
	slices.Sort(sortedLeast)
	p = make([]float64, len(least))
	for r, v := range least {
		p[r] = notAbove(sortedLeast, v)
	}
	return p, sortedLeast
}

// stepDown is the joint p of each rule: the chance that the smallest p of the
// rules not yet passed over is as small as observed (Westfall and Young 1993,
// step-down min-p), never smaller than that of a rule before.
func (n *Null) stepDown() []float64 {
	rules := len(n.rule)
	order := make([]int, rules)
	for k := range order {
		order[k] = k
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case n.rule[a][0] < n.rule[b][0]:
			return -1
		case n.rule[a][0] > n.rule[b][0]:
			return 1
		}
		return 0
	})
	rows := len(n.rule[0])
	least := slices.Repeat([]float64{math.Inf(1)}, rows)
	share := make([]float64, rules)
	for at := rules - 1; at >= 0; at-- {
		k := order[at]
		count := 0
		for r, v := range n.rule[k] {
			least[r] = min(least[r], v)
			if least[r] <= n.rule[k][0] {
				count++
			}
		}
		share[at] = float64(count) / float64(rows)
	}
	joint := make([]float64, rules)
	so := 0.0
	for at, k := range order {
		so = max(so, share[at])
		joint[k] = so
	}
	return joint
}

// largestCritical is the largest attained rule p for which the share of rows
// with any rule p at most that is within alpha.
func (n *Null) largestCritical() float64 {
	rows := len(n.rule[0])
	least := slices.Clone(n.rule[0])
	for _, p := range n.rule[1:] {
		for r, v := range p {
			least[r] = min(least[r], v)
		}
	}
	slices.Sort(least)
	allowed := n.alpha * float64(rows) * (1 + 1e-12)
	critical := 0.0
	for i := 0; i < rows; {
		next := i
		for next < rows && least[next] == least[i] {
			next++
		}
		if float64(next) > allowed {
			break
		}
		critical = least[i]
		i = next
	}
	return critical
}

// point is the smallest simulated value of a member that at most alpha of the
// rows reach.
func (n *Null) point(m int) float64 {
	sorted := n.sorted[m]
	rows := len(sorted)
	allowed := int(n.alpha * float64(rows) * (1 + 1e-12))
	if allowed < 1 {
		return math.Inf(1)
	}
	at := rows - allowed
	for at > 0 && at < rows && sorted[at] == sorted[at-1] {
		at++ // ties would let more reach it
	}
	if at == rows {
		return math.Inf(1)
	}
	return sorted[at]
}

// ruleP reads the p of rule k for a new row of member statistics.
func (n *Null) ruleP(k int, row []float64) float64 {
	f := n.family
	least := math.Inf(1)
	for m := f.first[k]; m < f.first[k+1]; m++ {
		least = min(least, exceeding(n.sorted[m], row[m]))
	}
	if n.least[k] == nil {
		return least
	}
	return notAbove(n.least[k], least)
}

// Simulate draws the null of a pass's design for the given rules; nil when none
// of them is asked. It is what Judge reads its p-values from, for those who want
// to know how often the rules alarm at errors of their own making.
func Simulate(asked []*rules.Rule, p *rules.Pass) *Null {
	f, _ := gather(asked, p)
	if len(f.names) == 0 {
		return nil
	}
	return newDrawer(p, f, "").simulate(Replicates(p.Fit.N(), p.Settings.Replicates, p.Settings.FalseAlarm))
}

// simulate draws the null.
func (d *drawer) simulate(replicates int) *Null {
	return newNull(d, d.observed(), d.null(replicates))
}

// Critical is the largest p of a rule at which the whole family keeps its rate
// of false alarms.
func (n *Null) Critical() float64 { return n.critical }

// Rates are shares of tables.
type Rates struct {
	Any    float64            // in which some rule reaches the critical p
	Rule   map[string]float64 // in which this rule does
	AnyOwn float64            // in which some rule's own p is at most the rate of false alarms
	Own    map[string]float64 // in which this rule's is
}

// Rates draws tables with the errors of newErrors' functions, one for each
// goroutine, from the named stream, and tells how often rules alarm, floors
// aside.
func (n *Null) Rates(stream string, tables int, newErrors func() func(*rand.Rand, []float64)) Rates {
	r := Rates{Rule: map[string]float64{}, Own: map[string]float64{}}
	share := 1 / float64(tables)
	for _, row := range n.drawer.draw(n.drawer.name+stream, tables, newErrors) {
		joint, own := false, false
		for k, name := range n.family.names {
			p := n.ruleP(k, row)
			if p <= n.critical {
				joint = true
				r.Rule[name] += share
			}
			if p <= n.alpha {
				own = true
				r.Own[name] += share
			}
		}
		if joint {
			r.Any += share
		}
		if own {
			r.AnyOwn += share
		}
	}
	return r
}
