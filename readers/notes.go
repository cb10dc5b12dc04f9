package readers

import "strings"

// columnNotes says what was taken for granted in the cells of the table.
func (b *body) columnNotes(t *Table) {
	var thousands, texts, results int
	var inThousands, inTexts, inResults []string
	for _, col := range t.Columns {
		m := col.markCounts()
		if m.thousands > 0 {
			thousands += m.thousands
			inThousands = append(inThousands, col.named())
		}
		if m.texts > 0 && m.texts == col.Count(Number) {
			texts += m.texts
			inTexts = append(inTexts, col.named())
		}
		if m.results > 0 {
			results += m.results
			inResults = append(inResults, col.named())
		}
	}
	if thousands > 0 {
		b.note("%s written with signs between thousands, in %s", cellsAre(thousands), list(inThousands, "and"))
	}
	if texts > 0 {
		b.note("all numbers of %s are stored as text; they were read as numbers", list(inTexts, "and"))
	}
	if results > 0 {
		b.note("%s results of formulas, in %s; the stored values were used", cellsAre(results), list(inResults, "and"))
	}
	var unnamed []string
	for _, col := range t.Columns {
		if col.Header == "" && b.header >= 0 {
			unnamed = append(unnamed, col.Letter())
		}
	}
	switch len(unnamed) {
	case 0:
	case 1:
		b.note("column %s has no name; it goes by its letter", unnamed[0])
	default:
		b.note("columns %s have no names; they go by their letters", strings.Join(unnamed, ", "))
	}
}

func cellsAre(n int) string {
	if n == 1 {
		return "1 cell is"
	}
	return count(n) + " cells are"
}

// markCount counts the marks of a column's cells.
type markCount struct{ thousands, texts, results int }

func (c *Column) markCounts() (m markCount) {
	if c.marked&(Thousands|TextNumber|Formula) == 0 {
		return m
	}
	for i := range c.table.length {
		marks := c.Marks(i)
		if marks&Thousands != 0 {
			m.thousands++
		}
		if marks&TextNumber != 0 {
			m.texts++
		}
		if marks&Formula != 0 && c.CellKind(i) != Uncached {
			m.results++
		}
	}
	return m
}
