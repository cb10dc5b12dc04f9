package audit

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"

	"footing/audit/calibrate"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
)

// cure is a candidate for the one cause of several alarms: a design in which it
// is allowed for, with its score, -2 log likelihood up to a constant plus a
// penalty for what it estimates besides.
type cure struct {
	name   string
	rules  []*rules.Rule // that it stands for, the first to be the root
	design *model.Design
	rows   []int // set aside
	score  float64
	still  map[string]bool // rules in alarm after it
}

// findCause looks for one cause of several alarms, and places the findings that
// it explains under that of the cause.
func (e *examination) findCause() {
	alarmed := e.alarmed()
	if len(alarmed) < 2 || e.pass.Fit == nil {
		return
	}
	if alarmed[rules.RepeatedSubjects.Name] {
		// Pairs of neighbours then lie within subjects and see the same thing.
		e.under(rules.Independence, rules.RepeatedSubjects, remedy.SubjectErrors.Name)
		delete(alarmed, rules.Independence.Name)
		delete(alarmed, rules.RepeatedSubjects.Name)
		if len(alarmed) < 2 {
			return
		}
	}
	cures := e.cures(alarmed)
	if len(cures) == 0 {
		return
	}
	best := slices.MinFunc(cures, func(a, b *cure) int {
		switch {
		case a.score < b.score:
			return -1
		case a.score > b.score:
			return 1
		}
		return 0
	})
	e.explainBy(best, alarmed)
}

// alarmed names the rules held together that are in alarm and not explained
// yet.
func (e *examination) alarmed() map[string]bool {
	names := map[string]bool{}
	for _, x := range e.findings {
		if x.joint != nil && x.joint.Alarm && x.root == "" {
			names[x.rule.Name] = true
		}
	}
	return names
}

func (e *examination) explainBy(c *cure, alarmed map[string]bool) {
	root := c.rules[0]
	if c.name == remedy.SetAside.Name && c.still[rules.Normality.Name] && !c.still[rules.Linearity.Name] && !c.still[rules.ConstantVariance.Name] {
		// The tail goes on behind the rows set aside: they are its end.
		for _, r := range c.rules {
			e.under(r, rules.Normality, c.name)
		}
		root = rules.Normality
	}
	for _, r := range rules.All {
		if alarmed[r.Name] && r != root && (!c.still[r.Name] || slices.Contains(c.rules, r)) {
			e.under(r, root, c.name)
		}
	}
	e.noteLog(root)
}

// under puts a finding in alarm under its root.
func (e *examination) under(of, root *rules.Rule, by string) {
	x, r := e.named(of.Name), e.named(root.Name)
	if x == nil || r == nil || x.joint == nil || !x.joint.Alarm || x.root != "" {
		return
	}
	x.root, x.cure = root.Name, by
	if r.root != "" { // a root that follows from another finding passes it on
		x.root = r.root
	}
}

// noteLog adds to the message of the root that the logarithm of the response
// leaves no alarm at all.
func (e *examination) noteLog(root *rules.Rule) {
	d, err := remedy.LogResponse.Edit(e.start(remedy.Target{}))
	if err != nil {
		return
	}
	if still, ok := e.alarmsIn(d, remedy.LogResponse.Name); ok && len(still) == 0 {
		e.named(root.Name).outcome.Message += "; on the log scale nothing of this is left"
	}
}

// cures makes the candidates that the alarms call for, each with its score and
// the alarms that remain.
func (e *examination) cures(alarmed map[string]bool) []*cure {
	f := e.pass.Fit
	n, p := float64(f.N()), float64(f.P())
	var all []*cure
	add := func(c *cure, score func(after *model.Fit) float64) {
		after, err := model.NewFit(c.design)
		if err != nil || !after.HasScatter() {
			return
		}
		c.score = score(after)
		var ok bool
		if c.still, ok = e.alarmsIn(c.design, c.name); ok {
			all = append(all, c)
		}
	}
	rows := e.flagged()
	if len(rows) > 0 {
		c := &cure{name: remedy.SetAside.Name, rows: rows, design: e.pass.Design.Without(rows, "set aside for the trial")}
		for _, r := range []*rules.Rule{rules.Outliers, rules.Influence} {
			if alarmed[r.Name] {
				c.rules = append(c.rules, r)
			}
		}
		add(c, func(after *model.Fit) float64 {
			return n*math.Log(after.RSS/n) + 2*float64(len(rows))*math.Log(n)
		})
	}
	if alarmed[rules.Linearity.Name] && !e.oneRowBends(all) {
		if d, err := remedy.Curve.Edit(e.start(remedy.Target{})); err == nil {
			add(&cure{name: remedy.Curve.Name, rules: []*rules.Rule{rules.Linearity}, design: d}, func(after *model.Fit) float64 {
				return n*math.Log(after.RSS/n) + (float64(after.P())-p)*math.Log(n)
			})
		}
	}
	if alarmed[rules.ConstantVariance.Name] {
		variance := numeric.LogLinearVariance(f.Residual, f.Leverage, f.RegressorColumns())
		add(&cure{name: weightsName, rules: []*rules.Rule{rules.ConstantVariance}, design: e.pass.Design.WithVariances(variance)}, func(after *model.Fit) float64 {
			logs := 0.0
			for _, v := range variance {
				logs += math.Log(v)
			}
			return logs + n*math.Log(after.RSS/n) + (p-1)*math.Log(n)
		})
	}
	if alarmed[rules.Independence.Name] {
		all = append(all, e.orderCures()...)
	}
	return all
}

// orderCures are the two causes of alike neighbours: serial errors, and a
// drift.
func (e *examination) orderCures() []*cure {
	f := e.pass.Fit
	n := float64(f.N())
	var all []*cure
	add := func(name string, d *model.Design, penalty float64) {
		after, err := model.NewFit(d)
		if err != nil || !after.HasScatter() {
			return
		}
		still, ok := e.alarmsIn(d, name)
		if ok {
			all = append(all, &cure{name: name, rules: []*rules.Rule{rules.Independence}, design: d, score: n*math.Log(after.RSS/n) + penalty, still: still})
		}
	}
	if d, err := remedy.SerialErrors.Edit(e.start(remedy.Target{})); err == nil {
		r1, mean := f.LagOne()
		rho := max(-0.9, min(0.9, r1-mean))
		add(remedy.SerialErrors.Name, d, math.Log(n)-math.Log(1-rho*rho))
	}
	if rank := e.pass.Design.OrderRank(); f.HasRoomFor(rank, 0.3) {
		add(remedy.OrderTerm.Name, e.pass.Design.With("order", rank), math.Log(n))
	}
	return all
}

// flagged lists the rows that outliers and influence name in alarm.
func (e *examination) flagged() []int {
	var rows []int
	for _, r := range []*rules.Rule{rules.Outliers, rules.Influence} {
		x := e.named(r.Name)
		if x == nil || x.joint == nil || !x.joint.Alarm || x.root != "" {
			continue
		}
		for _, i := range x.outcome.Target.Rows {
			if !slices.Contains(rows, i) {
				rows = append(rows, i)
			}
		}
	}
	slices.Sort(rows)
	return rows
}

// weightsName names the cure that lets the scatter vary; it is no remedy, since
// its interval does not hold where the scatter grows both ways.
const weightsName = "weights"

// ownBend is the share of a row's freedom that a bend takes up from which the
// row alone makes the bend.
const ownBend = 0.8

// oneRowBends reports whether a flagged row alone makes the bend: it takes up
// nearly all of linearity's largest column, and without it no bend is left. The
// scores cannot tell the two, so the row is named.
func (e *examination) oneRowBends(cures []*cure) bool {
	if len(cures) == 0 || cures[0].still[rules.Linearity.Name] {
		return false
	}
	q := e.pass.LargestShape()
	if q == nil {
		return false
	}
	for _, i := range cures[0].rows {
		if free := 1 - e.pass.Fit.Leverage[i]; free > 0 && q[i]*q[i]/free > ownBend {
			return true
		}
	}
	return false
}

// alarmsIn names the rules held together that are in alarm in another design of
// the same rows; false when that design leaves nothing to judge from.
func (e *examination) alarmsIn(d *model.Design, name string) (map[string]bool, bool) {
	p := e.passOf(d)
	if p.Fit == nil || !p.Fit.HasScatter() || floats.HasNaN(p.Fit.Residual) {
		return nil, false
	}
	var asked []*rules.Rule
	for _, x := range e.findings {
		if x.joint != nil && x.joint.Asked {
			asked = append(asked, x.rule)
		}
	}
	still := map[string]bool{}
	for rule, j := range calibrate.Judge(asked, p, calibrate.Options{Name: "cause/" + name + "/", OnlyAlarms: true}) {
		if j.Alarm {
			still[rule] = true
		}
	}
	return still, true
}

// cureWords says of a consequence which cure of its root made it go.
func (e *examination) cureWords(x *examined) string {
	if x.root == "" || x.cure == "" {
		return ""
	}
	words := map[string]string{
		remedy.SetAside.Name:      "without the rows named there",
		remedy.Curve.Name:         "with a curve in each group",
		weightsName:               "with the scatter allowed to vary",
		remedy.SerialErrors.Name:  "with neighbours allowed to be alike",
		remedy.OrderTerm.Name:     "with the order as a covariate",
		remedy.SubjectErrors.Name: "within subjects",
	}[x.cure]
	return "; gone " + words
}
