package numeric

import (
	"math"
	"testing"
)

// BenchmarkReplicate is one replicate of a simulated null at n 200, p 4: draw,
// project, sort, W.
func BenchmarkReplicate(b *testing.B) {
	const n = 200
	group, x := design(n, 2)
	basis := NewBasis(ownLines(group, x, 2), n)
	weights := ShapiroWeights(n)
	stream := BlockStream(1, "null", 0)
	e, sorted := make([]float64, n), make([]float64, n)
	var sorter Sorter
	draw := func() {
		for i := range e {
			e[i] = stream.NormFloat64()
		}
	}
	b.Run("draw", func(b *testing.B) {
		for b.Loop() {
			draw()
		}
	})
	b.Run("project", func(b *testing.B) {
		for b.Loop() {
			basis.ResidualOnce(sorted, e)
		}
	})
	b.Run("sort", func(b *testing.B) {
		for b.Loop() {
			sorter.Sort(sorted, e, 1)
		}
	})
	b.Run("W", func(b *testing.B) {
		for b.Loop() {
			ShapiroW(sorted, weights)
		}
	})
	spread, u := NewGroupSpread(group, 2), make([]float64, n)
	b.Run("spread", func(b *testing.B) {
		for b.Loop() {
			spread.F(e)
		}
	})
	b.Run("score", func(b *testing.B) {
		for b.Loop() {
			KoenkerLM(u, e, basis.Q())
		}
	})
	b.Run("whole", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			draw()
			basis.ResidualOnce(e, e)
			sorter.Sort(sorted, e, 1)
			ShapiroW(sorted, weights)
		}
	})
}

// BenchmarkBasis factors and solves a table of a million rows and six columns.
func BenchmarkBasis(b *testing.B) {
	const n, p = 1_000_000, 6
	stream := Stream(1, "columns")
	columns := make([][]float64, p)
	y := make([]float64, n)
	for j := range columns {
		columns[j] = make([]float64, n)
		for i := range columns[j] {
			columns[j][i] = stream.NormFloat64()
		}
	}
	for i := range y {
		y[i] = stream.NormFloat64()
	}
	basis := NewBasis(columns, n)
	b.Run("factor", func(b *testing.B) {
		for b.Loop() {
			NewBasis(columns, n)
		}
	})
	b.Run("residual", func(b *testing.B) {
		e := make([]float64, n)
		for b.Loop() {
			basis.Residual(e, y)
		}
	})
	b.Run("solve", func(b *testing.B) {
		for b.Loop() {
			basis.Solve(y)
		}
	})
}

func BenchmarkDistributions(b *testing.B) {
	b.Run("t", func(b *testing.B) {
		for b.Loop() {
			StudentTwoSided(2.1, 46)
		}
	})
	b.Run("t of a million", func(b *testing.B) {
		for b.Loop() {
			StudentTwoSided(8, 1e6)
		}
	})
	b.Run("detectable", func(b *testing.B) {
		for b.Loop() {
			DetectableNCP(46, 0.8, 2.0129)
		}
	})
	b.Run("range", func(b *testing.B) {
		for b.Loop() {
			TukeyUpper(3.5, 4, 96)
		}
	})
	b.Run("range quantile", func(b *testing.B) {
		for b.Loop() {
			TukeyQuantile(0.95, 4, 96)
		}
	})
}

func BenchmarkMMLine(b *testing.B) {
	x, y := sampleOf(100, 1), sampleOf(100, 3)
	for b.Loop() {
		MMLine(x, y, Stream(1, "bench"))
	}
}

func BenchmarkMedian(b *testing.B) {
	x := sampleOf(1000, 1)
	work := make([]float64, len(x))
	for b.Loop() {
		copy(work, x)
		if math.IsNaN(medianInPlace(work)) {
			b.Fatal("no median")
		}
	}
}
