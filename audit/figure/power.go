package figure

import (
	"fmt"
	"math"

	"footing/audit"
	"footing/rules/wording"
)

// drawPower draws as bars how often each check would have caught the trouble
// that is worth acting on, in a table of this very shape.
func drawPower(s *sheet) bool {
	var checks []audit.Finding
	for _, f := range s.result.Findings {
		if f.Power.Defined() {
			checks = append(checks, f)
		}
	}
	if len(checks) == 0 {
		return false
	}
	s.title = "What each check would have caught in a table of this shape"
	const row = 46.0
	left, right := 12.0, width-62
	s.height = 10 + row*float64(len(checks)) + 38
	bottom := 6 + row*float64(len(checks))
	x := scale{0, 1, left, right}
	for _, v := range []float64{0, 0.25, 0.5, 0.75, 1} {
		s.line("r", x.at(v), 8, x.at(v), bottom)
		s.text(x.at(v), bottom+15, "middle", "q", fmt.Sprintf("%.0f", 100*v))
	}
	s.line("h", x.at(0.5), 8, x.at(0.5), bottom)
	s.text((left+right)/2, bottom+31, "middle", "q", "times in 100")
	weak := false
	for k, f := range checks {
		y := 8 + row*float64(k)
		power := float64(f.Power)
		name := f.Rule
		switch f.State {
		case audit.Warn, audit.Stop:
			name += " (in alarm here)"
		}
		s.text(left+4, y+14, "start", "b v", name)
		class, ink := "f0", "g0"
		if power < 0.5 {
			class, ink = "p", "g1"
			weak = true
		}
		fmt.Fprintf(&s.body, `<rect class="%s %s" stroke-width="2" x="%s" y="%s" width="%s" height="14"/>`, class, ink, num(left), num(y+20), num(max(1, x.at(power)-left)))
		s.text(right+10, y+32, "start", "b", fmt.Sprintf("%.0f", math.Round(100*power)))
		breach := "its breach"
		if f.Breach != nil {
			breach = *f.Breach
		}
		s.say("%s: %s would have been caught %.0f times in 100", f.Rule, breach, math.Round(100*power))
	}
	if weak {
		s.say("hollow bars lie below one in two: such a pass says little")
	}
	if c := s.result.Calibration; c != nil && c.CaughtLeast.Defined() {
		s.say("by any of the checks a trouble worth acting on would have been caught %s to %s times in 100",
			wording.To(100*float64(c.CaughtLeast), 0), wording.To(100*float64(c.CaughtMost), 0))
	}
	return true
}
