// Package calibrate judges the rules with tests together, so that the whole of
// them alarms in a sound table no more often than one is willing to bear.
package calibrate

import (
	"footing/rules"
	"footing/rules/numeric"
)

// Judge holds the given rules' tests at one joint rate of false alarms. A rule
// with several tests has the smallest p times their number; over the rules the
// method is Holm's (1979), which holds whatever depends on what. The result
// has an entry for every rule with tests; those not asked say why.
func Judge(asked []*rules.Rule, p *rules.Pass) map[string]*rules.Joint {
	joint := map[string]*rules.Joint{}
	var family []*rules.Joint
	var ps []float64
	for _, r := range asked {
		if r.Tests == nil {
			continue
		}
		tests, reason := r.Tests(p)
		j := &rules.Joint{Tests: tests, Asked: len(tests) > 0, Reason: reason}
		joint[r.Name] = j
		if !j.Asked {
			continue
		}
		j.P = min(1, float64(len(tests))*j.Smallest().P)
		family = append(family, j)
		ps = append(ps, j.P)
	}
	for k, adjusted := range numeric.Holm(ps) {
		family[k].PJoint = adjusted
		family[k].Alarm = adjusted <= p.Settings.FalseAlarm
	}
	return joint
}
