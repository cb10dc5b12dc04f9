package remedy

import (
	"fmt"
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// LogResponse fits the logarithm of the response, where the rows ask for it.
var LogResponse = &Remedy{
	Name:   "log-response",
	Do:     "fit the logarithm of the response; a slope b then means a change by 100(e^b - 1) percent per unit of the predictor",
	Short:  "on the log scale, as a relative change",
	Source: "Box and Cox 1964, J. R. Stat. Soc. B 26:211",
	Edit: func(s Start) (*model.Design, error) {
		if s.Fit.IsTransformed() {
			return nil, &NotApplicable{Reason: "the rows are transformed already"}
		}
		profile, positive := numeric.BoxCoxProfile(s.Design.Y, s.Fit.Basis)
		switch {
		case !positive:
			return nil, &NotApplicable{Reason: "the response is not positive throughout"}
		case profile.Low <= 1 && 1 <= profile.High:
			return nil, &NotApplicable{Reason: "the rows do not ask for another scale of the response"}
		case profile.Low > 0 || profile.High < 0:
			return nil, &NotApplicable{Reason: fmt.Sprintf("the logarithm does not suit these rows%s", nearestPower(profile))}
		}
		return s.Design.OnLogScale(), nil
	},
}

// nearestPower names the ordinary power in the set of suitable ones that is
// nearest to the best.
func nearestPower(profile numeric.BoxCox) string {
	name, distance := "", math.Inf(1)
	for _, p := range []struct {
		power float64
		words string
	}{{-1, "the reciprocal"}, {-0.5, "the reciprocal square root"}, {0.5, "the square root"}, {2, "the square"}} {
		if d := math.Abs(p.power - profile.Best); p.power >= profile.Low && p.power <= profile.High && d < distance {
			name, distance = p.words, d
		}
	}
	if name == "" {
		return ""
	}
	return "; " + name + " would"
}
