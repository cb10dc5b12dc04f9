package numeric

import "math"

// mostPairs is how many pairs of rows a robust slope is taken from; beyond it
// they are drawn.
const mostPairs = 50000

// TheilSen returns the median of the slopes of pairs of rows within one group
// (Theil 1950, Sen 1968), which stands while fewer than 29 % of the rows are
// wild. group gives each row a code from 0 to groups - 1; other rows are left
// out. Of many pairs a part is drawn, the same in each run. It is NaN when no
// pair of one group differs in x.
func TheilSen(x, y []float64, group []int, groups int) float64 {
	members := make([][]int, groups)
	pairs := 0
	for i, g := range group {
		if g >= 0 && g < groups {
			members[g] = append(members[g], i)
		}
	}
	for _, rows := range members {
		pairs += len(rows) * (len(rows) - 1) / 2
	}
	var slopes []float64
	add := func(i, k int) {
		if d := x[k] - x[i]; d != 0 {
			slopes = append(slopes, (y[k]-y[i])/d)
		}
	}
	if pairs <= mostPairs {
		for _, rows := range members {
			for a, i := range rows {
				for _, k := range rows[a+1:] {
					add(i, k)
				}
			}
		}
	} else {
		random := Stream(1, "theil-sen")
		for _, rows := range members {
			share := float64(len(rows)) / float64(pairs) * float64(len(rows)-1) / 2
			for range int(math.Ceil(share * mostPairs)) {
				if len(rows) > 1 {
					add(rows[random.IntN(len(rows))], rows[random.IntN(len(rows))])
				}
			}
		}
	}
	return medianInPlace(slopes)
}
