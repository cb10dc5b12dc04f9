package readers

// sheetReading tells what a workbook hides, colours or shows otherwise.
func (b *body) sheetReading(t *Table) {
	if t.Format != Workbook {
		return
	}
	r := b.reading
	f := &b.g.facts
	if len(f.hiddenRows) > 0 {
		for i := range t.length {
			if f.hides(t.Row(i)) {
				r.Hidden.Records = append(r.Hidden.Records, i)
			}
		}
	}
	for _, c := range t.Columns {
		if c.Hidden {
			r.Hidden.Columns = append(r.Hidden.Columns, c)
		}
	}
	r.Hidden.Filter = f.filter
	if len(b.g.styles) < 2 {
		return
	}
	for _, c := range t.Columns {
		percent, numbers := 0, 0
		for i := range t.length {
			at := t.at(i)
			st := b.g.styles[c.store.style(at)]
			if st.Struck && c.store.kind(at) != 0 {
				r.Hidden.Struck++
			}
			if st.Fill != "" || st.Ink != "" {
				r.Colored = true
			}
			if CellKind(c.store.kind(at)&kindMask) == Number {
				numbers++
				if st.Percent {
					percent++
				}
			}
		}
		if percent > 0 {
			b.note("%s of column %s shown as per cent; the values are the stored fractions, as 0.35 for 35 %%", cellsOfAre(percent, numbers), c.named())
		}
	}
}

func cellsOfAre(n, all int) string {
	if n == all {
		return "the cells"
	}
	return count(n) + " of " + count(all) + " cells"
}
