package numeric

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// BoxCox is the profile of the power of a response.
type BoxCox struct {
	// Lambda runs from -2 to 2 in steps of 0.01: 1 leaves the response as it is,
	// 0 is the logarithm.
	Lambda []float64
	// LogLikelihood at each lambda, short of a constant.
	LogLikelihood []float64
	// Best is the lambda of the largest likelihood; Low and High are the ends of
	// its 95 % set, the lambdas within 1.9207 of that likelihood.
	Best, Low, High float64
}

// boxCoxDrop is half the 0.95 point of chi-squared with one degree of freedom.
const boxCoxDrop = 1.9207

// BoxCoxProfile returns the profile log likelihood of the power lambda of y,
// -(n/2) ln RSS of (y^lambda - 1)/(lambda gm^(lambda-1)), gm the geometric mean
// of y (Box and Cox 1964). The span of the basis must contain the constant. ok
// is false, and the profile empty, when a y is not above 0.
func BoxCoxProfile(y []float64, b *Basis) (profile BoxCox, ok bool) {
	logs := make([]float64, len(y))
	for i, v := range y {
		if !(v > 0) || math.IsInf(v, 1) {
			return BoxCox{}, false
		}
		logs[i] = math.Log(v)
	}
	// In units of gm the divisor is lambda alone, and nothing overflows.
	centre := Mean(logs)
	floats.AddConst(-centre, logs)
	z := make([]float64, len(y))
	half := float64(len(y)) / 2
	best := 0
	for k := range 401 {
		lambda := float64(k-200) / 100
		for i, l := range logs {
			if k == 200 {
				z[i] = l
			} else {
				z[i] = math.Expm1(lambda*l) / lambda
			}
		}
		b.Residual(z, z)
		value := -half * (math.Log(floats.Dot(z, z)) + 2*centre)
		profile.Lambda = append(profile.Lambda, lambda)
		profile.LogLikelihood = append(profile.LogLikelihood, value)
		if value > profile.LogLikelihood[best] {
			best = k
		}
	}
	low, high := best, best
	limit := profile.LogLikelihood[best] - boxCoxDrop
	for k, value := range profile.LogLikelihood {
		if value >= limit {
			low, high = min(low, k), max(high, k)
		}
	}
	profile.Best, profile.Low, profile.High = profile.Lambda[best], profile.Lambda[low], profile.Lambda[high]
	return profile, true
}
