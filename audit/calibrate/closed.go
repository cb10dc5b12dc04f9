package calibrate

import (
	"math"

	"footing/rules"
	"footing/rules/numeric"
)

// largestPowerTable is the number of rows up to which power is simulated.
const largestPowerTable = 20000

// closedPowerTables is how many breached tables are drawn of a large design.
const closedPowerTables = 200

// judgeClosed takes p-values from formulas: members by Bonferroni, rules by
// Holm 1979. No null is drawn.
func (f *family) judgeClosed(p *rules.Pass, joint map[string]*rules.Joint, o Options) {
	d := newDrawer(p, f, "")
	observed := d.observed()
	var ps []float64
	for k, name := range f.names {
		j := joint[name]
		j.Closed = true
		least := math.Inf(1)
		for m, member := range f.chances[k].Members {
			if !o.OnlyAlarms {
				j.Point = append(j.Point, pointOf(member.ClosedP, p.Settings.FalseAlarm))
			}
			pValue := member.ClosedP(observed[f.first[k]+m])
			if pValue < least {
				least, j.Strong = pValue, m
			}
		}
		j.P = min(1, least*float64(len(f.chances[k].Members)))
		ps = append(ps, j.P)
	}
	for k, adjusted := range numeric.Holm(ps) {
		joint[f.names[k]].PJoint = adjusted
	}
	if o.Power {
		f.closedPower(p, joint, p.Settings.FalseAlarm/float64(len(f.names)))
	}
}

// pointOf is the value of a member whose p is alpha, by bisection: p falls as
// the value rises.
func pointOf(p func(float64) float64, alpha float64) float64 {
	low, high := 0.0, 1e3
	for range 60 {
		if middle := (low + high) / 2; p(middle) > alpha {
			low = middle
		} else {
			high = middle
		}
	}
	return high
}

// closedPower tells the power of every rule in a large table.
func (f *family) closedPower(p *rules.Pass, joint map[string]*rules.Joint, critical float64) {
	d := newDrawer(p, f, "")
	var points []float64
	if p.Fit.N() <= largestPowerTable {
		points = f.criticalPoints(critical)
	}
	for k, name := range f.names {
		j := joint[name]
		trouble := f.chances[k].Breach()
		j.Trouble = &trouble
		if p.Fit.N() > largestPowerTable {
			j.Power = 1
			if trouble.ClosedPower != nil {
				j.Power = trouble.ClosedPower(critical)
			}
			j.AnyPower = j.Power
			continue
		}
		own, any := make([]bool, closedPowerTables), make([]bool, closedPowerTables)
		d.each("power/"+name, closedPowerTables, trouble.New, func(w *worker, r int) {
			own[r] = w.reaches(k, points)
			any[r] = own[r]
			for other := range f.names {
				any[r] = any[r] || w.reaches(other, points)
			}
		})
		j.Power, j.AnyPower = share(own), share(any)
	}
}

// criticalPoints gives for each member the value at which its rule's p, over
// its members by Bonferroni, comes down to critical.
func (f *family) criticalPoints(critical float64) []float64 {
	var points []float64
	for _, c := range f.chances {
		for _, m := range c.Members {
			points = append(points, pointOf(m.ClosedP, critical/float64(len(c.Members))))
		}
	}
	return points
}

// reaches reports whether a member of rule k reaches its point in the worker's
// sample. Statistics are computed only until one does: one of thousands of rows
// can cost more than the drawing of them.
func (w *worker) reaches(k int, points []float64) bool {
	for m := w.d.family.first[k]; m < w.d.family.first[k+1]; m++ {
		if w.statistics[m](w.sample) >= points[m] {
			return true
		}
	}
	return false
}

func share(of []bool) float64 {
	count := 0
	for _, yes := range of {
		if yes {
			count++
		}
	}
	return float64(count) / float64(len(of))
}
