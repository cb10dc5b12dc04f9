package rules

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

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
	Limit:    "copies whose chance of coming about by rounding is below 0.2 %, so that sound tables are suspected in fewer than 1 in 500",
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
		if role == "label" || role == "order" || (role == "" && countsRows(col)) {
			continue
		}
		all = append(all, col)
	}
	return all
}

// countsRows tells identifiers: texts that are all different, or whole numbers
// that rise by one.
func countsRows(col *readers.Column) bool {
	seen := map[string]bool{}
	rising := true
	previous, have := 0.0, false
	for i := range col.Len() {
		label, ok := col.Label(i)
		if !ok {
			continue
		}
		if seen[label] {
			return false
		}
		seen[label] = true
		if v, number := col.Number(i); number {
			if have && v != previous+1 {
				rising = false
			}
			previous, have = v, true
		}
	}
	return len(seen) > 1 && (col.Kind() != readers.NumberColumn || rising)
}

// equalRows groups the rows that are equal in all columns and hold a number in
// at least one, in file order.
func equalRows(t *readers.Table, columns []*readers.Column) [][]int {
	at := map[string]int{}
	var sets [][]int
	for i := range t.Len() {
		if t.RowFault(i) != "" {
			continue
		}
		var key strings.Builder
		numbers := 0
		for _, col := range columns {
			if v, ok := col.Number(i); ok {
				numbers++
				key.WriteString(strconv.FormatUint(math.Float64bits(v), 16))
			} else {
				key.WriteString(strconv.Quote(col.Cell(i).Text))
			}
			key.WriteByte(';')
		}
		if numbers == 0 {
			continue
		}
		k, seen := at[key.String()]
		if !seen {
			k = len(sets)
			at[key.String()] = k
			sets = append(sets, nil)
		}
		sets[k] = append(sets[k], i)
	}
	return slices.DeleteFunc(sets, func(s []int) bool { return len(s) < 2 })
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
	expected := pairsAlike(labels, rows)
	strata := strataOf(labels, rows)
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
	at := map[string]int{}
	code := make([]int, len(rows))
	for k, i := range rows {
		var key strings.Builder
		for _, col := range labels {
			label, _ := col.Label(i)
			key.WriteString(strconv.Quote(label))
		}
		c, seen := at[key.String()]
		if !seen {
			c = len(at)
			at[key.String()] = c
		}
		code[k] = c
	}
	return code
}

func pairsAlike(labels []*readers.Column, rows []int) float64 {
	size := map[int]float64{}
	for _, c := range strataOf(labels, rows) {
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
	var design [][]float64
	if groups*2 < n {
		for g := range groups {
			d := make([]float64, n)
			for i, s := range strata {
				if s == g {
					d[i] = 1
				}
			}
			design = append(design, d)
		}
	} else {
		one := make([]float64, n)
		for i := range one {
			one[i] = 1
		}
		design = append(design, one)
	}
	for _, b := range before {
		if len(design) < n-2 {
			design = append(design, centred(b))
		}
	}
	basis := numeric.NewBasis(design, n)
	rest := make([]float64, n)
	basis.Residual(rest, centred(values))
	ss := 0.0
	for _, r := range rest {
		ss += r * r
	}
	sd := math.Sqrt(ss / float64(max(1, n-basis.Rank())))
	byRounding := 1.0
	if sd > 0 {
		byRounding = min(1, resolution(values)/(2*math.Sqrt(math.Pi)*sd))
	}
	return max(byRounding, observedAgreement(values, strata))
}

func centred(v []float64) []float64 {
	mean := numeric.Mean(v)
	out := make([]float64, len(v))
	for i := range v {
		out[i] = v[i] - mean
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

// resolution is the step to which values were rounded: the smallest power of
// ten of which all are multiples, no finer than 1e-12 of the largest.
func resolution(values []float64) float64 {
	largest := 0.0
	for _, v := range values {
		largest = max(largest, math.Abs(v))
	}
	if largest == 0 {
		return 0
	}
	step := math.Pow(10, math.Floor(math.Log10(largest)))
	for step > largest*1e-12 {
		fits := true
		for _, v := range values {
			k := v / step
			if math.Abs(k-math.Round(k)) > 1e-6 {
				fits = false
				break
			}
		}
		if fits {
			return step
		}
		step /= 10
	}
	return step
}
