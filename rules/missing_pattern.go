package rules

import (
	"fmt"
	"math"
	"slices"

	"footing/readers"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MissingPattern asks whether values are missing at random.
var MissingPattern = &Rule{
	Name:   "missing-pattern",
	Family: OfTable,
	Asks:   "Do missing values go with the predictor, the group or the order?",
	Why:    "What is missing in one part of the range or in one group is not missing by accident, and the rows that are left do not stand for it.",
	Method: "for each fitted column with three or more missing cells: the rank sum of the missing rows along each predictor and along the rows of the file " +
		"(Wilcoxon 1945, exact for few missing), their share in each group (hypergeometric), and how few stretches of the file they fill (exact, Wald and Wolfowitz 1940)",
	Limit:    "the smallest p, times the number of tests, is at most 0.2 %",
	Needs:    NeedsDesign,
	Remedies: []*remedy.Remedy{remedy.ExplainGaps},
	Run:      missingPattern,
}

// tableChance is the rate of false alarms of each table rule that involves
// chance, so that all of them together stay below 2 %.
const tableChance = 0.002

// patternTest is one way in which values may be missing.
type patternTest struct {
	col   *readers.Column
	where []Place
	said  string
	p     float64
}

func missingPattern(p *Pass) (Outcome, error) {
	var tests []patternTest
	for _, col := range p.Columns.Fitted() {
		if n := col.Count(readers.Blank) + col.Count(readers.Code); n >= 3 && n < col.Len() {
			tests = append(tests, p.patternsOf(col)...)
		}
	}
	if len(tests) == 0 {
		return sound("too few values are missing to show a pattern"), nil
	}
	worst := slices.MinFunc(tests, func(a, b patternTest) int {
		switch {
		case a.p < b.p:
			return -1
		case a.p > b.p:
			return 1
		}
		return 0
	})
	joint := min(1, worst.p*float64(len(tests)))
	o := sound("what is missing shows no pattern along the predictor, the group or the rows")
	if joint <= tableChance {
		o = breach(fmt.Sprintf("missing values of %s go %s (%s)", worst.col.Title(), worst.said, wording.P(joint)))
		o.Where = worst.where
	}
	o.Statistic = &Measure{Name: "smallest p of the patterns, times their number", Value: joint, P: joint}
	return o, nil
}

// patternsOf asks whether the missing cells of a column go with anything.
func (p *Pass) patternsOf(col *readers.Column) []patternTest {
	var rows []int
	var missing []bool
	var where []Place
	for i := range col.Len() {
		if p.Table.RowFault(i) != "" {
			continue
		}
		kind := col.CellKind(i)
		lost := kind == readers.Blank || kind == readers.Code
		rows, missing = append(rows, i), append(missing, lost)
		if lost {
			where = append(where, Place{Row: i, Column: col})
		}
	}
	if len(where) < 3 || len(where) > len(rows)-3 {
		return nil
	}
	var tests []patternTest
	add := func(said string, chance float64) {
		tests = append(tests, patternTest{col, where, said, chance})
	}
	order := make([]float64, len(rows))
	for k, i := range rows {
		order[k] = float64(i)
	}
	above, chance := rankSum(order, missing)
	add("with the order of the rows: they lie "+towards(above, "the end", "the start"), chance)
	add("with the order of the rows: they follow each other", fewStretches(missing))
	for _, x := range p.Columns.Predictors {
		if x == col {
			continue
		}
		values, lost := []float64{}, []bool{}
		for k, i := range rows {
			if v, ok := x.Number(i); ok {
				values, lost = append(values, v), append(lost, missing[k])
			}
		}
		above, chance := rankSum(values, lost)
		add(fmt.Sprintf("with %s: they lie %s", x.Title(), towards(above, "high", "low")), chance)
	}
	if g := p.Columns.Group; g != nil && g != col {
		names, codes := g.Levels()
		if len(names) <= len(rows)/2 {
			group, size, chance := p.unevenGroups(rows, missing, codes, len(names))
			if group >= 0 {
				add(fmt.Sprintf("with %s: %s", g.Title(), fmt.Sprintf("%d of %d are %s", size, len(where), names[group])), chance)
			}
		}
	}
	return tests
}

func towards(above bool, up, down string) string {
	if above {
		return "mostly towards " + up
	}
	return "mostly towards " + down
}

// unevenGroups finds the group with the least likely share of the missing
// cells; the chance is times the number of groups, as any could have been it.
func (p *Pass) unevenGroups(rows []int, missing []bool, codes []int32, groups int) (group, lost int, chance float64) {
	size, gone := make([]int, groups), make([]int, groups)
	n, m := 0, 0
	for k, i := range rows {
		if codes[i] < 0 {
			continue
		}
		n++
		size[codes[i]]++
		if missing[k] {
			m++
			gone[codes[i]]++
		}
	}
	group, chance = -1, 1
	for g := range groups {
		// Too many missing here; too few here is too many elsewhere.
		c := 0.0
		for k := gone[g]; k <= min(size[g], m); k++ {
			c += math.Exp(logChoose(size[g], k) + logChoose(n-size[g], m-k) - logChoose(n, m))
		}
		if c = min(1, c*float64(groups)); c < chance {
			group, lost, chance = g, gone[g], c
		}
	}
	return group, lost, chance
}

func logChoose(n, k int) float64 {
	if k < 0 || k > n {
		return math.Inf(-1)
	}
	a, _ := math.Lgamma(float64(n + 1))
	b, _ := math.Lgamma(float64(k + 1))
	c, _ := math.Lgamma(float64(n - k + 1))
	return a - b - c
}

// fewStretches is the chance that so many missing rows fill no more stretches
// of neighbours than they do: m of n rows fill r stretches in
// C(m-1, r-1) C(n-m+1, r) of C(n, m) ways.
func fewStretches(missing []bool) float64 {
	m, stretches := 0, 0
	for k, lost := range missing {
		if lost {
			m++
			if k == 0 || !missing[k-1] {
				stretches++
			}
		}
	}
	n := len(missing)
	chance := 0.0
	for r := 1; r <= stretches; r++ {
		chance += math.Exp(logChoose(m-1, r-1) + logChoose(n-m+1, r) - logChoose(n, m))
	}
	return min(1, chance)
}

// rankSum is the two-sided chance of a rank sum as far from its mean as that of
// the marked values, ties at their mean rank: exact while that is cheap, else by
// the normal curve, whose tails are the longer ones.
func rankSum(values []float64, marked []bool) (above bool, chance float64) {
	n := len(values)
	ranks := doubledRanks(values)
	m, sum, total := 0, 0, 0
	for k, r := range ranks {
		total += r
		if marked[k] {
			m++
			sum += r
		}
	}
	if m == 0 || m == n {
		return false, 1
	}
	mean := float64(total) * float64(m) / float64(n)
	above = float64(sum) > mean
	if m > n/2 { // the other side is the same question
		m, sum = n-m, total-sum
		mean = float64(total) - mean
	}
	far := math.Abs(float64(sum) - mean)
	if float64(n)*float64(m)*2*float64(n)*float64(m) <= 5e7 {
		return above, exactRankSum(ranks, m, mean, far)
	}
	ss := 0.0
	for _, r := range ranks {
		d := float64(r) - float64(total)/float64(n)
		ss += d * d
	}
	variance := ss / float64(n-1) * float64(m) * float64(n-m) / float64(n)
	if variance == 0 {
		return above, 1
	}
	return above, numeric.NormalTwoSided(max(0, far-1) / math.Sqrt(variance))
}

// doubledRanks gives twice the rank of each value, ties at their mean.
func doubledRanks(values []float64) []int {
	at := make([]int, len(values))
	for k := range at {
		at[k] = k
	}
	slices.SortFunc(at, func(a, b int) int {
		switch {
		case values[a] < values[b]:
			return -1
		case values[a] > values[b]:
			return 1
		}
		return a - b
	})
	ranks := make([]int, len(values))
	for from := 0; from < len(at); {
		to := from + 1
		for to < len(at) && values[at[to]] == values[at[from]] {
			to++
		}
		for k := from; k < to; k++ {
			ranks[at[k]] = from + 1 + to
		}
		from = to
	}
	return ranks
}

// exactRankSum counts the choices of m ranks by their sum.
func exactRankSum(ranks []int, m int, mean, far float64) float64 {
	most := 0
	sorted := slices.Clone(ranks)
	slices.Sort(sorted)
	for _, r := range sorted[len(sorted)-m:] {
		most += r
	}
	ways := make([][]float64, m+1)
	for k := range ways {
		ways[k] = make([]float64, most+1)
	}
	ways[0][0] = 1
	for done, r := range sorted {
		for k := min(m, done+1); k > 0; k-- {
			from, to := ways[k-1], ways[k]
			for s := most; s >= r; s-- {
				to[s] += from[s-r]
			}
		}
	}
	all, extreme := 0.0, 0.0
	for s, w := range ways[m] {
		all += w
		if math.Abs(float64(s)-mean) >= far-1e-9 {
			extreme += w
		}
	}
	return extreme / all
}
