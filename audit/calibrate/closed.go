package calibrate

import (
	"math"
	"slices"

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
			j.Point = append(j.Point, pointOf(member.ClosedP, p.Settings.FalseAlarm))
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
		own, any := 0, 0
		for _, row := range d.draw("power/"+name, closedPowerTables, trouble.New) {
			var ps []float64
			for at := range f.names {
				ps = append(ps, f.closedP(at, row))
			}
			if ps[k] <= critical {
				own++
			}
			if slices.Min(ps) <= critical {
				any++
			}
		}
		j.Power, j.AnyPower = float64(own)/closedPowerTables, float64(any)/closedPowerTables
	}
}

func (f *family) closedP(k int, row []float64) float64 {
	least := math.Inf(1)
	for m, member := range f.chances[k].Members {
		least = min(least, member.ClosedP(row[f.first[k]+m]))
	}
	return min(1, least*float64(len(f.chances[k].Members)))
}
