package rules

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"footing/readers"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// CopiedRows asks for rows that repeat another row in every value.
var CopiedRows = &Rule{
	Name:   "copied-rows",
	Family: OfTable,
	Asks:   "Are rows copies of other rows?",
	Why:    "A row that stands twice counts twice, and makes intervals narrower than the measurements allow.",
	Method: "rows equal in every column but label, order and running numbers, against the chance that rounded measurements coincide: " +
		"pairs alike in labels and set values, times the share of pairs that agree in each measured column by its resolution and scatter",
	Limit:    "so many copies whose chance of coming about by rounding is below 0.2 %, so that sound tables are suspected in fewer than 1 in 500",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.DropCopies},
	Run:      copiedRows,
}

// copyChance is the chance of coincidence below which copies are suspected.
const copyChance = 0.002

func copiedRows(p *Pass) (Outcome, error) {
	columns := p.comparable()
	measured := 0
	for _, col := range columns {
		if col.Kind() == readers.NumberColumn {
			measured++
		}
	}
	if measured == 0 {
		return notAsked("no column of measurements"), nil
	}
	sets := equalRows(p.Table, columns)
	if len(sets) == 0 {
		return sound("no row repeats another"), nil
	}
	chance := coincidence(p.Table, columns, sets)
	chance = ofSoMany(chance, sets)
	if chance >= copyChance {
		o := sound(fmt.Sprintf("%s alike in every value, as rounded measurements may well be", wording.Count(len(sets), "pair or set of rows")))
		o.Evidence = map[string]any{"chance": chance}
		return o, nil
	}
	var said []string
	var where []Place
	var later []int
	for _, set := range sets {
		var rows []string
		for k, i := range set {
			rows = append(rows, strconv.Itoa(p.Table.Row(i)))
			where = append(where, Place{Row: i})
			if k > 0 {
				later = append(later, i)
			}
		}
		said = append(said, "rows "+wording.Some(rows, 5))
	}
	o := breach(fmt.Sprintf("%s hold the same values, more than rounding would bring about (chance %s)",
		wording.Some(said, 4), wording.Figure(chance, 1)))
	o.Where = where
	o.Evidence = map[string]any{"chance": chance, "copies": len(later)}
	if p.Design != nil {
		o.Target.Rows = p.Design.RowsAt(later)
	}
	return o, nil
}

// comparable lists the columns that copies share: all but label, order and
// columns that only count the rows.
func (p *Pass) comparable() []*readers.Column {
	var all []*readers.Column
	for _, col := range p.Table.Columns {
		role := p.Columns.RoleOf(col)
		if role == "label" || role == "order" || p.counts(col) {
			continue
		}
		all = append(all, col)
	}
	return all
}

// equalRows groups the rows that are equal in all columns and hold a number in
// at least one, in file order.
func equalRows(t *readers.Table, columns []*readers.Column) [][]int {
	first := map[uint64]int{}
	at := map[int]int{}
	var sets [][]int
	for i := range t.Len() {
		if t.RowFault(i) != "" {
			continue
		}
		key, numbers := rowKey(columns, i)
		if numbers == 0 {
			continue
		}
		head, seen := first[key]
		if !seen {
			first[key] = i
			continue
		}
		if !sameRow(columns, head, i) {
			continue // two keys met by chance, once in 2^64
		}
		k, known := at[head]
		if !known {
			k = len(sets)
			at[head] = k
			sets = append(sets, []int{head})
		}
		sets[k] = append(sets[k], i)
	}
	slices.SortFunc(sets, func(a, b []int) int { return a[0] - b[0] })
	return sets
}

// rowKey mixes the cells of a row into one number (FNV-1a over whole words),
// and counts its numbers.
func rowKey(columns []*readers.Column, i int) (key uint64, numbers int) {
	key = 14695981039346656037
	for _, col := range columns {
		word := uint64(0xffff)
		if v, ok := col.Number(i); ok {
			numbers++
			word = math.Float64bits(v)
		} else if kind := col.CellKind(i); kind != readers.Blank {
			_, codes := col.Levels()
			word = uint64(kind)<<32 | uint64(uint32(codes[i]))
		}
		key = (key ^ word) * 1099511628211
		key ^= key >> 29
	}
	return key, numbers
}

func sameRow(columns []*readers.Column, i, k int) bool {
	for _, col := range columns {
		v, ok := col.Number(i)
		w, too := col.Number(k)
		switch {
		case ok != too, ok && v != w:
			return false
		case !ok && (col.CellKind(i) != col.CellKind(k) || col.CellKind(i) != readers.Blank && col.Cell(i).Text != col.Cell(k).Text):
			return false
		}
	}
	return true
}

// coincidence is the chance of at least one pair of equal rows among honest
// ones: the pairs that agree in all labels, times the share of pairs that
// agree in each column of numbers given those before it.
func coincidence(t *readers.Table, columns []*readers.Column, sets [][]int) float64 {
	rows := withoutCopies(t, sets)
	var labels, numbers []*readers.Column
	for _, col := range columns {
		if col.Kind() == readers.NumberColumn {
			numbers = append(numbers, col)
		} else if !mostlyBlankText(col) {
			labels = append(labels, col)
		}
	}
	strata := strataOf(labels, rows)
	expected := pairsAlike(strata)
	var before [][]float64
	for _, col := range numbers {
		values, ok := complete(col, rows)
		if !ok {
			continue
		}
		expected *= agreement(values, strata, before)
		before = append(before, values)
	}
	return -math.Expm1(-expected)
}

// ofSoMany turns the chance of any copy into that of as many as there are, by
// Poisson's law; where coincidences are common, copies come in heaps and the law
// does not hold.
func ofSoMany(chance float64, sets [][]int) float64 {
	expected := -math.Log1p(-chance)
	if expected > 0.2 {
		return chance
	}
	copies := 0
	for _, set := range sets {
		copies += len(set) - 1
	}
	fewer, term := 0.0, math.Exp(-expected)
	for k := range copies {
		fewer += term
		term *= expected / float64(k+1)
	}
	// The first term left out stands for the rest when the difference is lost.
	return max(1-fewer, min(term, chance))
}

func withoutCopies(t *readers.Table, sets [][]int) []int {
	copyOf := map[int]bool{}
	for _, set := range sets {
		for _, i := range set[1:] {
			copyOf[i] = true
		}
	}
	var rows []int
	for i := range t.Len() {
		if !copyOf[i] && t.RowFault(i) == "" {
			rows = append(rows, i)
		}
	}
	return rows
}

// strataOf numbers the combinations of labels.
func strataOf(labels []*readers.Column, rows []int) []int {
	code := make([]int, len(rows))
	for _, col := range labels {
		type pair struct {
			stratum int
			label   int32
		}
		_, of := col.Levels()
		at := map[pair]int{}
		for k, i := range rows {
			key := pair{code[k], of[i]}
			c, seen := at[key]
			if !seen {
				c = len(at)
				at[key] = c
			}
			code[k] = c
		}
	}
	return code
}

func pairsAlike(strata []int) float64 {
	size := map[int]float64{}
	for _, c := range strata {
		size[c]++
	}
	pairs := 0.0
	for _, n := range size {
		pairs += n * (n - 1) / 2
	}
	return max(pairs, 1)
}

// complete gives the numbers of a column, with gaps filled by the mean so that
// a row more or less does not matter; false when it has no numbers.
func complete(col *readers.Column, rows []int) ([]float64, bool) {
	values := make([]float64, len(rows))
	var present []float64
	for k, i := range rows {
		v, ok := col.Number(i)
		if !ok {
			values[k] = math.NaN()
			continue
		}
		values[k] = v
		present = append(present, v)
	}
	if len(present) == 0 {
		return nil, false
	}
	mean := numeric.Mean(present)
	for k, v := range values {
		if math.IsNaN(v) {
			values[k] = mean
		}
	}
	return values, true
}

// agreement is the chance that two rows of one stratum agree in a column: as
// often as they do, or as often as values of this resolution would that
// scatter normally about a line on the columns before (u over 2 sqrt(pi) s).
func agreement(values []float64, strata []int, before [][]float64) float64 {
	n := len(values)
	groups := 0
	for _, s := range strata {
		groups = max(groups, s+1)
	}
	// The levels of the strata are taken off by their means, which leaves the
	// same residuals as a column for each would.
	level := strata
	if groups*2 >= n {
		level, groups = make([]int, n), 1
	}
	var design [][]float64
	for _, b := range before {
		if len(design)+groups < n-2 && len(design) < mostBefore {
			design = append(design, within(b, level, groups))
		}
	}
	basis := numeric.NewBasis(design, n)
	rest := make([]float64, n)
	basis.Residual(rest, within(values, level, groups))
	ss := 0.0
	for _, r := range rest {
		ss += r * r
	}
	sd := math.Sqrt(ss / float64(max(1, n-groups-basis.Rank())))
	byRounding := 1.0
	if sd > 0 {
		byRounding = min(1, resolution(values)/(2*math.Sqrt(math.Pi)*sd))
	}
	return max(byRounding, observedAgreement(values, strata))
}

// mostBefore bounds how many columns the others are seen beside, so that a wide
// table costs no more than its cells.
const mostBefore = 8

// within takes the mean of its level off each value.
func within(v []float64, level []int, levels int) []float64 {
	sum, size := make([]float64, levels), make([]float64, levels)
	for i, x := range v {
		sum[level[i]] += x
		size[level[i]]++
	}
	out := make([]float64, len(v))
	for i, x := range v {
		out[i] = x - sum[level[i]]/size[level[i]]
	}
	return out
}

// observedAgreement is the share of pairs of one stratum that are equal.
func observedAgreement(values []float64, strata []int) float64 {
	type cell struct {
		stratum int
		value   float64
	}
	same, size := map[cell]float64{}, map[int]float64{}
	for i, v := range values {
		same[cell{strata[i], v}]++
		size[strata[i]]++
	}
	var equal, pairs float64
	for _, n := range same {
		equal += n * (n - 1) / 2
	}
	for _, n := range size {
		pairs += n * (n - 1) / 2
	}
	if pairs == 0 {
		return 0
	}
	return equal / pairs
}
