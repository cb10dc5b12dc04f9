package rules

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"time"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// DatesAmongNumbers asks for numbers that a spreadsheet turned into dates.
var DatesAmongNumbers = &Rule{
	Name:   "dates-among-numbers",
	Family: OfTable,
	Asks:   "Did a number turn into a date?",
	Why:    "Spreadsheets turn 6.4 or 6/4 into a date while it is typed; the measurement is lost, or stays behind as a number near 45,000.",
	Method: "lists dates and date-like texts in columns of numbers, which are not used; and whole numbers from 20,000 to 60,000 " +
		"(days of the years 1954 to 2064) where all others lie below 10,000 and within a tenth of that distance, which are used",
	Limit:    "one such cell; the numbers are a guess, so answers without them are told",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.WithoutDoubted},
	Run:      datesAmongNumbers,
}

func datesAmongNumbers(p *Pass) (Outcome, error) {
	found, guessed := p.tally(), p.tally()
	for _, col := range p.asNumbers() {
		for _, i := range p.strangers(col, aDate) {
			found.cell(col, i, func() string { return p.dateWords(col, i) })
		}
		for _, i := range serials(p.Profile(col)) {
			guessed.cell(col, i, func() string {
				v, _ := col.Number(i)
				return fmt.Sprintf("%s %s (day number of %s?)", p.Table.Address(col, i), wording.Number(v), dayOf(v).Format("2 January 2006"))
			})
		}
	}
	o := found.outcome("no number has turned into a date", func(words string, n int) string {
		return fmt.Sprintf("%s a date in a column of numbers: %s; such a row is set aside", wording.Count(n, "cell")+holdOrHolds(n), words)
	})
	if guessed.used.total+guessed.unused.total == 0 {
		return o, nil
	}
	g := guessed.outcome("", func(words string, _ int) string {
		return "perhaps dates that lost their format, far from all other values, used as numbers here: " + words
	})
	if len(o.Where) > 0 {
		g.Message = o.Message + "; " + g.Message
		g.Where = slices.Concat(o.Where, g.Where)
		if o.Answer == Breach {
			g.Answer = Breach
		}
	}
	g.Target.Rows = p.target(guessed.used.where)
	return g, nil
}

// serials lists whole numbers that may be days, alone far from the rest.
func serials(f *Profile) []int {
	n := len(f.Sorted)
	low, _ := slices.BinarySearch(f.Sorted, 20000)
	high, _ := slices.BinarySearch(f.Sorted, 60001)
	if low == high || 10*(high-low) > n || high < n || n-(high-low) < 5 {
		return nil
	}
	// All others must lie together, far below.
	if f.Sorted[low-1] >= 10000 || 10*(f.Sorted[low-1]-f.Sorted[0]) > f.Sorted[low]-f.Sorted[low-1] {
		return nil
	}
	var rows []int
	for k, v := range f.Values {
		if v >= 20000 && v <= 60000 {
			if v != math.Trunc(v) {
				return nil
			}
			rows = append(rows, f.Rows[k])
		}
	}
	return rows
}

// dayOf is the day that a serial number stands for.
func dayOf(serial float64) time.Time {
	return time.Date(1899, time.December, 30, 0, 0, 0, 0, time.UTC).AddDate(0, 0, int(serial))
}

// dateWords shows a date with the numbers that may have become it.
func (p *Pass) dateWords(col *readers.Column, i int) string {
	cell := col.Cell(i)
	said := p.Table.Address(col, i) + " " + strconv.Quote(cell.Text)
	if math.IsNaN(cell.Number) || cell.Number < 1 {
		return said
	}
	day := dayOf(cell.Number)
	sign := string(rune(p.decimal()))
	return fmt.Sprintf("%s (%s: %d%s%d or %d%s%d?)", said, day.Format("2 January"), day.Day(), sign, int(day.Month()), int(day.Month()), sign, day.Day())
}
