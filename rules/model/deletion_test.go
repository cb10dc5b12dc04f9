package model

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"footing/rules/numeric"
)

// TestDiagnosticsAreRefits holds what is computed from the leverage to fits
// without the row.
func TestDiagnosticsAreRefits(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 3).fit(t)
		if !ok || f.DF < 3 {
			rt.Skip()
		}
		d := f.Diagnostics()
		terms := f.AnswerTerms()
		for i := range f.N() {
			if f.Leverage[i] > 0.99 {
				continue // a refit then has a nearly dependent column
			}
			without, err := NewFit(f.Design.Without([]int{i}, "left out"))
			if err != nil || !without.HasScatter() || without.P() != f.P() {
				continue
			}
			near(rt, "external", d.External[i], f.Residual[i]/(without.SD*math.Sqrt(1-f.Leverage[i])))
			moved := 0.0
			for k, fitted := range f.Fitted {
				at := k
				if k == i {
					continue
				} else if k > i {
					at--
				}
				moved += (fitted - without.Fitted[at]) * (fitted - without.Fitted[at])
			}
			own := f.Residual[i]/(1-f.Leverage[i]) - f.Residual[i] // how far the fit at the row itself moves
			near(rt, "Cook", d.Cook[i], (moved+own*own)/(float64(f.P())*f.SD*f.SD))
			for at, values := range d.DFBETAS {
				k := terms[max(0, d.SlopeOf[at])]
				near(rt, "DFBETAS", values[i], (f.Coef[k]-without.Coef[k])/(without.SD*f.Term(k).Length))
			}
		}
	})
}

// answered is the t of an answer by an ordinary fit of the rows that are left;
// a question is either the slope of a group or the difference of two.
type answered struct{ t, df float64 }

func ask(d *Design, group string) (answered, bool) {
	f, err := NewFit(d)
	if err != nil || !f.HasScatter() {
		return answered{}, false
	}
	if group == "difference" {
		terms := f.ComparedTerms()
		if len(terms) != 2 {
			return answered{}, false
		}
		c := f.Difference(terms[0], terms[1])
		return answered{c.Estimate / (f.SD * c.Length), float64(f.DF)}, true
	}
	g := slices.Index(f.Design.Groups, group)
	if f.Design.CommonSlope {
		g = 0
	}
	if g < 0 || f.SlopeTerms()[g] < 0 {
		return answered{}, false
	}
	var e Estimate
	f.joint(&e, f.Term(f.SlopeTerms()[g]), 0.95)
	if f.QuotesOwnLines() {
		f.ownLine(&e, g, 0.95)
	}
	return answered{e.T, e.DF}, !math.IsNaN(e.T)
}

func (a answered) clear() bool {
	return math.Abs(a.t) > numeric.StudentQuantile(0.975, a.df)
}

// TestGreedyAgainstRefits repeats the search with nothing but fits of the rows
// that are left: every step must take a row than which none lowers t more, and
// the answer must cease to be clear with the last of them and not before. A
// search through all subsets can never need more rows than the greedy one.
func TestGreedyAgainstRefits(t *testing.T) {
	found := 0
	rapid.Check(t, func(rt *rapid.T) {
		f, ok := drawTable(rt, 3).fit(t)
		if !ok {
			rt.Skip()
		}
		group := f.Design.Groups[rapid.IntRange(0, len(f.Design.Groups)-1).Draw(rt, "group")]
		if f.Design.CommonSlope {
			group = ""
		}
		q, ok := f.SlopeQuestion(max(0, slices.Index(f.Design.Groups, group)))
		if f.Design.CommonSlope {
			q, ok = f.SlopeQuestion(0)
		}
		if rapid.Bool().Draw(rt, "difference") {
			group = "difference"
			q, ok = f.DifferenceQuestion()
		}
		start, asked := ask(f.Design, group)
		if !ok || !asked || !start.clear() {
			rt.Skip()
		}
		got := q.Greedy(0.95, 4)
		if got.Flip == 0 {
			if len(got.Rows) > 0 {
				rt.Fatalf("no flip and yet rows %v", got.Rows)
			}
			return
		}
		if len(got.Rows) != got.Flip {
			rt.Fatalf("%d rows to flip, named are %v", got.Flip, got.Rows)
		}
		found++
		side := math.Copysign(1, start.t)
		for step := range got.Rows {
			before, after := got.Rows[:step], got.Rows[:step+1]
			now, ok := ask(f.Design.Without(after, "left out"), group)
			if !ok {
				return // the row left a design that the fit refuses
			}
			if step+1 < got.Flip && (!now.clear() || side*now.t <= 0) {
				rt.Fatalf("%v: not clear after %d of %d rows", got.Rows, step+1, got.Flip)
			}
			for i := range f.N() {
				if slices.Contains(before, i) {
					continue
				}
				other, ok := ask(f.Design.Without(append(slices.Clone(before), i), "left out"), group)
				if ok && other.df == now.df && side*other.t < side*now.t-1e-7*(1+math.Abs(now.t)) {
					rt.Fatalf("step %d takes row %d to t %v, row %d would take it to %v", step+1, got.Rows[step], now.t, i, other.t)
				}
			}
		}
		last, ok := ask(f.Design.Without(got.Rows, "left out"), group)
		if ok && last.clear() && side*last.t > 0 {
			rt.Fatalf("still clear without %v", got.Rows)
		}
		if least := fewest(f.Design, group, side, got.Flip); least > got.Flip {
			rt.Fatalf("%d rows are enough for the search, %d at least by all subsets", got.Flip, least)
		}
	})
	if found == 0 {
		t.Error("no answer was ever flipped")
	}
}

// fewest is the least number of rows, of all subsets up to most, without which
// the answer is not clear on its side; one more than most when there is none.
func fewest(d *Design, group string, side float64, most int) int {
	for size := 1; size <= min(most, 2); size++ { // larger ones are too many to fit
		for first := range d.N() {
			for second := first; second < d.N(); second++ {
				rows := []int{first, second}
				if size == 1 {
					rows = rows[:1]
					second = d.N()
				} else if first == second {
					continue
				}
				if a, ok := ask(d.Without(rows, "left out"), group); ok && (!a.clear() || side*a.t <= 0) {
					return size
				}
			}
		}
	}
	return min(most, 3)
}

// TestQuestionOf asks it of other responses without a change of the first.
func TestQuestionOf(t *testing.T) {
	f, ok := (drawnTable{
		rows:  []string{"a,p,1,1,0,p,2", "a,p,2,2,0,p,4", "a,p,3,3,0,p,5", "a,p,4,4,0,p,8", "a,p,5,5,0,p,9"},
		roles: Roles{Response: "y", Predictors: []string{"x"}},
	}).fit(t)
	if !ok {
		t.Fatal("no fit")
	}
	q, ok := f.SlopeQuestion(0)
	if !ok || !q.IsLine() || q.Len() != 5 {
		t.Fatalf("question %v of %d rows", ok, q.Len())
	}
	before := q.Greedy(0.95, 3)
	flat := q.Of([]float64{1, 2, 1, 2, 1}).Greedy(0.95, 3)
	if flat.Flip == before.Flip {
		t.Errorf("another response is answered alike: %v and %v", before, flat)
	}
	if again := q.Greedy(0.95, 3); !slices.Equal(again.Rows, before.Rows) {
		t.Error("the question has changed")
	}
	fitted, rss, _ := q.Answered()
	near(t, "RSS", rss, f.RSS)
	for i := range fitted {
		near(t, "fitted", fitted[i], f.Fitted[i])
	}
}
