package numeric

import "math"

// AndersonDarlingStatistic returns the distance of x from the normal shape with
// its own mean and standard deviation, A² (Anderson and Darling 1954) times
// 1 + 0.75/n + 2.25/n² (Stephens 1986): the number that AndersonDarlingP takes.
// x need not be sorted. Values that are all equal, or fewer than two, give NaN.
func AndersonDarlingStatistic(x []float64) float64 {
	return AndersonDarlingOfSorted(Sorted(x))
}

// AndersonDarlingOfSorted is AndersonDarlingStatistic of values in rising order.
func AndersonDarlingOfSorted(sorted []float64) float64 {
	n := len(sorted)
	if n < 2 {
		return math.NaN()
	}
	m, rest := meanParts(sorted)
	sd := SampleSD(sorted)
	sum := 0.0
	for i, v := range sorted {
		z := (v - m - rest) / sd
		mirrored := (sorted[n-1-i] - m - rest) / sd
		sum += float64(2*i+1) * (normalLogUpper(-z) + normalLogUpper(mirrored))
	}
	size := float64(n)
	return (-size - sum/size) * (1 + 0.75/size + 2.25/(size*size))
}

// AndersonDarlingP returns the p of that statistic, by the curves of D'Agostino
// and Stephens (1986, table 4.9) for estimated mean and standard deviation.
// Above 13, where the curve has left its data, it is 0.
func AndersonDarlingP(a float64) float64 {
	switch {
	case a > 13:
		return 0
	case a >= 0.6:
		return math.Exp(1.2937 - 5.709*a + 0.0186*a*a)
	case a > 0.34:
		return math.Exp(0.9177 - 4.279*a - 1.38*a*a)
	case a > 0.2:
		return -math.Expm1(-8.318 + 42.796*a - 59.938*a*a)
	}
	return -math.Expm1(-13.436 + 101.14*a - 223.73*a*a)
}
