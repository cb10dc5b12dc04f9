package readers

import "strings"

// columnNotes says what was taken for granted in the cells of the table.
func (b *body) columnNotes(t *Table) {
	var thousands, texts, results int
	var inThousands, inTexts, inResults []string
	for _, col := range t.Columns {
		th, tx, rs := 0, 0, 0
		for _, p := range col.store.pieces {
			if p == nil {
				continue
			}
			for _, f := range p.form {
				if f&formThousands != 0 {
					th++
				}
			}
			for _, k := range p.kind {
				if k&markText != 0 {
					tx++
				}
				if k&markResult != 0 {
					rs++
				}
			}
		}
		if th > 0 {
			thousands += th
			inThousands = append(inThousands, col.named())
		}
		if tx > 0 && tx == col.Count(Number) {
			texts += tx
			inTexts = append(inTexts, col.named())
		}
		if rs > 0 {
			results += rs
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
