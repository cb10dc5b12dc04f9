package numeric

import "math"

func share(i int) float64 { return float64((i*7919)%10007) / 10007 }

// sampleOf is the twin of sample_of in testdata/samples.R: kind 1 is near the
// normal shape, 2 skewed, 3 long-tailed.
func sampleOf(n, kind int) []float64 {
	x := make([]float64, n)
	for k := range x {
		i := k + 1
		u := share(i)
		switch kind {
		case 1:
			x[k] = u + share(2*i) + share(3*i) + share(5*i)
		case 2:
			x[k] = u * u
		case 3:
			// The conversion keeps product and sum apart, as R has them.
			x[k] = (u - 0.5) / (float64(u*(1-u)) + 0.01)
		}
	}
	return x
}

// design is the twin of design in testdata/samples.R.
func design(n, groups int) (group []int, x []float64) {
	for i := 1; i <= n; i++ {
		g := i % groups
		group = append(group, g)
		x = append(x, float64((i*13)%29+10*g))
	}
	return group, x
}

// ownLines returns the columns of one straight line per group: its level and,
// right after it, its slope.
func ownLines(group []int, x []float64, groups int) [][]float64 {
	columns := make([][]float64, 2*groups)
	for j := range columns {
		columns[j] = make([]float64, len(x))
	}
	for i, g := range group {
		columns[2*g][i] = 1
		columns[2*g+1][i] = x[i]
	}
	return columns
}

// linesFit returns the basis of one straight line per group through
// sampleOf(n, kind), and the residuals.
func linesFit(n, kind, groups int) (b *Basis, y, e []float64, group []int) {
	group, x := design(n, groups)
	b = NewBasis(ownLines(group, x, groups), n)
	y = sampleOf(n, kind)
	e = make([]float64, n)
	b.Residual(e, y)
	return b, y, e, group
}

// subjectsOf numbers rows 1 to n by the whole part of their square root, less one.
func subjectsOf(n int) (subject []int, k int) {
	for i := 1; i <= n; i++ {
		s := int(math.Sqrt(float64(i))) - 1
		subject = append(subject, s)
		k = max(k, s+1)
	}
	return subject, k
}
