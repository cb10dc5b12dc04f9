package numeric

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/floats"
	"pgregory.net/rapid"
)

const nistFolder = "../../testdata/reference/nist"

// nistFit holds NIST's certified values of a linear regression.
type nistFit struct {
	Coefficients   []float64 `json:"coefficients"`
	StandardErrors []float64 `json:"standard_errors"`
	ResidualSD     float64   `json:"residual_sd"`
	RSquared       float64   `json:"r_squared"`
}

// readNIST returns the response and the columns, the constant first.
func readNIST(t *testing.T, name string) (y []float64, columns [][]float64) {
	t.Helper()
	rows := readTable(t, filepath.Join(nistFolder, strings.ToLower(name)+".csv"), ',')[1:]
	columns = make([][]float64, len(rows[0]))
	for _, row := range rows {
		y = append(y, number(t, row[0]))
		columns[0] = append(columns[0], 1)
		for j := 1; j < len(row); j++ {
			columns[j] = append(columns[j], number(t, row[j]))
		}
	}
	return y, columns
}

func TestSolveAgainstNIST(t *testing.T) {
	text, err := os.ReadFile(filepath.Join(nistFolder, "certified.json"))
	if err != nil {
		t.Fatal(err)
	}
	var certified map[string]nistFit
	if err := json.Unmarshal(text, &certified); err != nil {
		t.Fatal(err)
	}
	// Certified values have 15 digits. Filip's powers are stored to 17 digits
	// where the certified values belong to the exact ones: that alone costs
	// what its tolerances allow.
	for _, c := range []struct {
		name                 string
		coefficients, errors float64
	}{
		{"Norris", 1e-13, 1e-12},
		{"Pontius", 1e-13, 1e-12},
		{"Longley", 1e-13, 1e-11},
		{"Wampler1", 1e-13, 1e-9},
		{"Wampler2", 1e-13, 1e-9},
		{"Wampler3", 1e-12, 1e-12},
		{"Wampler4", 1e-11, 1e-12},
		{"Wampler5", 1e-9, 1e-12},
		{"Filip", 1e-7, 1e-7},
	} {
		t.Run(c.name, func(t *testing.T) {
			want, ok := certified[c.name]
			if !ok {
				t.Fatal("not certified")
			}
			y, columns := readNIST(t, c.name)
			b := NewBasis(columns, len(y))
			if !b.FullRank() {
				t.Fatalf("rank %d of %d", b.Rank(), b.Columns())
			}
			beta := b.Solve(y)
			residual := make([]float64, len(y))
			b.Residual(residual, y)
			df := float64(b.Rows() - b.Rank())
			s := floats.Norm(residual, 2) / math.Sqrt(df)
			worst, worstSE := 0.0, 0.0
			for j := range beta {
				worst = max(worst, off(beta[j], want.Coefficients[j]))
				l := make([]float64, len(beta))
				l[j] = 1
				se := s * math.Sqrt(b.Covariance(l, l))
				worstSE = max(worstSE, off(se, want.StandardErrors[j]))
			}
			t.Logf("largest relative error: coefficients %.1g, standard errors %.1g", worst, worstSE)
			if worst > c.coefficients {
				t.Errorf("coefficients %v, want %v", beta, want.Coefficients)
			}
			if want.ResidualSD > 0 && worstSE > c.errors {
				t.Errorf("standard errors off by %.2g", worstSE)
			}
			// An exact polynomial leaves only rounding of the response.
			if scale := want.ResidualSD + 1e-15*floats.Norm(y, 2); math.Abs(s-want.ResidualSD) > c.errors*scale && s > scale {
				t.Errorf("residual SD %v, want %v", s, want.ResidualSD)
			}
		})
	}
}

// columnsOf draws p columns of n numbers with very different units and zeros.
func columnsOf(t *rapid.T, n, p int) [][]float64 {
	columns := make([][]float64, p)
	for j := range columns {
		unit := math.Pow(10, float64(rapid.IntRange(-6, 6).Draw(t, "unit")))
		stream := BlockStream(rapid.Uint64().Draw(t, "seed"), "columns", j)
		columns[j] = make([]float64, n)
		for i := range columns[j] {
			columns[j][i] = unit * (stream.NormFloat64() + 0.5)
		}
	}
	return columns
}

func deviates(t *rapid.T, n int) []float64 {
	stream := Stream(rapid.Uint64().Draw(t, "seed"), "values")
	v := make([]float64, n)
	for i := range v {
		v[i] = stream.NormFloat64()
	}
	return v
}

func TestBasisProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(3, 40).Draw(t, "n")
		p := rapid.IntRange(0, min(n, 8)).Draw(t, "p")
		columns := columnsOf(t, n, p)
		before := fmt.Sprint(columns)
		y := deviates(t, n)
		b := NewBasis(columns, n)
		if b.Rank() != p || !b.FullRank() || b.Dependences() != nil {
			t.Fatalf("rank %d of %d, dependences %v", b.Rank(), p, b.Dependences())
		}
		for i, q := range b.Q() {
			for j, r := range b.Q() {
				want := 0.0
				if i == j {
					want = 1
				}
				if d := math.Abs(floats.Dot(q, r) - want); d > 1e-14 {
					t.Fatalf("columns %d and %d of Q are off by %.2g", i, j, d)
				}
			}
		}
		if n > p && p > 0 && slices.Max(b.Leverage()) == 1 {
			// By chance a row is fitted to 1e-10; TestLeverageOne has that.
			t.Skip()
		}
		residual, once := make([]float64, n), make([]float64, n)
		b.Residual(residual, y)
		b.ResidualOnce(once, y)
		for i := range once {
			if math.Abs(once[i]-residual[i]) > 1e-13 {
				t.Fatalf("one projection gives %v, two %v", once[i], residual[i])
			}
		}
		for j, column := range columns {
			if d := math.Abs(floats.Dot(column, residual)); d > 1e-13*floats.Norm(column, 2) {
				t.Fatalf("residual is not orthogonal to column %d: %.2g", j, d)
			}
		}
		beta := b.Solve(y)
		for i := range y {
			fitted := 0.0
			for j, column := range columns {
				fitted += column[i] * beta[j]
			}
			if math.Abs(y[i]-fitted-residual[i]) > 1e-11 {
				t.Fatalf("row %d: %v less %v is not %v", i, y[i], fitted, residual[i])
			}
		}
		if sum := floats.Sum(b.Leverage()); math.Abs(sum-float64(p)) > 1e-9 {
			t.Fatalf("leverages add up to %v, want %d", sum, p)
		}
		l, m := make([]float64, p), make([]float64, p)
		for j := range l {
			// In the units of the coefficients, so that no one term rules.
			scale := floats.Norm(columns[j], 2)
			l[j], m[j] = scale*float64(j+1), scale*float64(j%3)
		}
		c, d := b.Catcher(l), b.Catcher(m)
		size := floats.Norm(c, 2)*floats.Norm(y, 2) + 1e-300
		if got, want := floats.Dot(c, y), floats.Dot(l, beta); math.Abs(got-want) > 1e-10*size {
			t.Fatalf("catcher gives %v, coefficients %v", got, want)
		}
		if got, want := b.Covariance(l, m), floats.Dot(c, d); math.Abs(got-want) > 1e-12*(1+math.Abs(want)) {
			t.Fatalf("Covariance is %v, catchers give %v", got, want)
		}
		if fmt.Sprint(columns) != before {
			t.Fatal("NewBasis changed its columns")
		}
	})
}

func TestResidualIsOrthogonalWhereYIsNearlyInTheSpan(t *testing.T) {
	columns := [][]float64{{1, 1, 1, 1, 1, 1}, {1, 2, 3, 4, 5, 7}}
	b := NewBasis(columns, 6)
	noise := []float64{1, -2, 1, 2, -1, 0.5}
	y := make([]float64, 6)
	for i := range y {
		y[i] = 1e9*columns[1][i] + 1e-3*noise[i]
	}
	e := make([]float64, 6)
	b.Residual(e, y)
	for j, column := range columns {
		if d := math.Abs(floats.Dot(column, e)) / floats.Norm(column, 2); d > 1e-15*floats.Norm(e, 2)+1e-18 {
			t.Errorf("residual of length %.2g has %.2g along column %d", floats.Norm(e, 2), d, j)
		}
	}
}

func TestDependences(t *testing.T) {
	one := []float64{1, 1, 1, 1, 1}
	x := []float64{1, 2, 3, 4, 6}
	z := []float64{2, 7, 1, 8, 2}
	mix := make([]float64, 5)
	for i := range mix {
		mix[i] = 1000 * (2*one[i] - z[i])
	}
	for _, c := range []struct {
		name    string
		columns [][]float64
		rank    int
		among   []int // the columns tied together
	}{
		{"twice the same", [][]float64{one, x, x}, 2, []int{1, 2}},
		{"a combination, a bystander between", [][]float64{one, x, z, mix}, 3, []int{0, 2, 3}},
		{"in other units", [][]float64{one, x, {1e9 + 1e9, 2e9 + 1e9, 3e9 + 1e9, 4e9 + 1e9, 6e9 + 1e9}}, 2, []int{0, 1, 2}},
		{"zeros", [][]float64{one, {0, 0, 0, 0, 0}, x}, 2, []int{1}},
		{"barely independent", [][]float64{one, x, {1, 2, 3, 4, 6 + 1e-8}}, 3, nil},
		{"barely dependent", [][]float64{one, x, {1, 2, 3, 4, 6 + 1e-10}}, 2, []int{1, 2}},
	} {
		t.Run(c.name, func(t *testing.T) {
			b := NewBasis(c.columns, 5)
			if b.Rank() != c.rank {
				t.Errorf("rank %d, want %d", b.Rank(), c.rank)
			}
			var tied []int
			for _, d := range b.Dependences() {
				for j := range c.columns {
					for _, on := range append([]int{d.Column}, d.On...) {
						if on == j {
							tied = append(tied, j)
						}
					}
				}
			}
			if diff := cmp.Diff(c.among, tied); diff != "" {
				t.Errorf("columns tied together (-want +got):\n%s", diff)
			}
		})
	}
}

func TestMoreColumnsThanRows(t *testing.T) {
	b := NewBasis([][]float64{{1, 1}, {1, 2}, {5, 3}}, 2)
	if b.Rank() != 2 || len(b.Dependences()) != 1 {
		t.Errorf("rank %d, dependences %v", b.Rank(), b.Dependences())
	}
}

func TestLeverageOne(t *testing.T) {
	// Row 4 is alone in its group: its level goes through it whatever y is.
	alone := []float64{0, 0, 0, 0, 1}
	others := []float64{1, 1, 1, 1, 0}
	b := NewBasis([][]float64{others, alone, {1, 2, 3, 5, 0}}, 5)
	if h := b.Leverage()[4]; h != 1 {
		t.Errorf("leverage %v, want 1", h)
	}
	for _, project := range []func(dst, y []float64){b.Residual, b.ResidualOnce} {
		e := make([]float64, 5)
		project(e, []float64{1, 2, 2, 3, math.Pi * 1e6})
		if e[4] != 0 {
			t.Errorf("residual %v, want exactly 0", e[4])
		}
		if floats.Norm(e, 2) == 0 {
			t.Error("all residuals are 0")
		}
	}
}

func TestBasisRefusesBrokenPromises(t *testing.T) {
	deficient := NewBasis([][]float64{{1, 1}, {2, 2}}, 2)
	for _, c := range []struct {
		want string
		call func()
	}{
		{"numeric.NewBasis: column 1 has length 2, want 3", func() { NewBasis([][]float64{{1, 2, 3}, {1, 2}}, 3) }},
		{"numeric.NewBasis: column 0 has length NaN", func() { NewBasis([][]float64{{1, math.NaN()}}, 2) }},
		{"numeric.Basis.Solve: rank 1 of 2 columns", func() { deficient.Solve([]float64{1, 2}) }},
		{"numeric.Basis.Catcher: rank 1 of 2 columns", func() { deficient.Catcher([]float64{1, 2}) }},
		{"numeric.Basis.Covariance: rank 1 of 2 columns", func() { deficient.Covariance([]float64{1, 2}, []float64{1, 2}) }},
		{"numeric.Basis.Residual: lengths 1 and 2, want 2", func() { deficient.Residual(make([]float64, 1), make([]float64, 2)) }},
	} {
		func() {
			defer func() {
				if got := recover(); got != c.want {
					t.Errorf("panic %v, want %q", got, c.want)
				}
			}()
			c.call()
		}()
	}
}
