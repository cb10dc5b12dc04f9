package audit

import (
	"fmt"
	"math"
	"strings"

	"footing/rules/wording"
)

// powerWords says of a pass what it could have caught, in the user's terms.
func powerWords(x *examined) string {
	j := x.joint
	if (x.state != Pass && x.state != Thin) || j == nil || j.Trouble == nil || math.IsNaN(j.Power) || j.Detectable() {
		return ""
	}
	if j.Power == 0 {
		return "; it cannot be asked of so few rows"
	}
	return fmt.Sprintf("; %s would have been seen %d times in 100", j.Trouble.Words, int(math.Round(100*j.Power)))
}

// missed says in one phrase what these rows would have missed: "a bend 7 times
// in 10, long tails and a wild row half the time".
func (e *examination) missed() string {
	var how []string
	what := map[string][]string{}
	for _, x := range e.findings {
		if x.state != Thin || !x.byPower || x.joint.Trouble == nil {
			continue
		}
		often := oftenMissed(1 - x.joint.Power)
		if what[often] == nil {
			how = append(how, often)
		}
		what[often] = append(what[often], x.joint.Trouble.Short)
	}
	var parts []string
	for _, often := range how {
		parts = append(parts, wording.List(what[often])+" "+often)
	}
	return strings.Join(parts, ", ")
}

// oftenMissed writes a chance in tenths.
func oftenMissed(chance float64) string {
	switch tenths := int(math.Round(10 * chance)); {
	case tenths >= 10:
		return "nearly always"
	case tenths == 5:
		return "half the time"
	case tenths <= 0:
		return "hardly ever"
	default:
		return fmt.Sprintf("%d times in 10", tenths)
	}
}
