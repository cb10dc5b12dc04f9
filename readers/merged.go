package readers

import "slices"

// fillMerged lets the value of cells that are merged down a column of labels hold
// for all their rows; the grid is changed, and each cell marked. Cells merged
// across columns or in a column of numbers stay as they are.
func (b *body) fillMerged() {
	for _, m := range b.g.facts.merged {
		if b.header < 0 || m.bottom <= b.g.lines.at(b.header) {
			if b.header >= 0 && b.touches(m) {
				b.reading.Merged = append(b.reading.Merged, mergedOf(m, true))
			}
			continue
		}
		if !b.touches(m) || m.top > b.g.lines.at(b.g.records-1) {
			continue
		}
		out := mergedOf(m, false)
		if m.left == m.right && m.top > b.g.lines.at(b.header) && b.isLabel(m.left) {
			if n := b.fillDown(m); n > 0 {
				out.Filled = true
				b.note("%s are merged; the value holds for all their rows", out.Range)
			}
		}
		b.reading.Merged = append(b.reading.Merged, out)
	}
}

// touches tells whether a range has a column of the table.
func (b *body) touches(m box) bool {
	for _, c := range b.columns {
		if c >= m.left && c <= m.right {
			return true
		}
	}
	return false
}

func (b *body) isLabel(column int) bool {
	return slices.Contains(b.labels, column)
}

// fillDown copies the first cell of a range into the blank cells under it.
func (b *body) fillDown(m box) (filled int) {
	s := b.g.seek(m.left)
	top, ok := b.g.recordOf(m.top)
	if s == nil || !ok || s.kind(top)&markWord == 0 {
		return 0
	}
	kind, form, word := s.kind(top), s.form(top), s.word(top)
	for r := top + 1; r < b.g.records && b.g.lines.at(r) <= m.bottom; r++ {
		if s.kind(r) != 0 {
			continue
		}
		if CellKind(kind&kindMask) == Number {
			s.putNumber(r, kind|markFilled, form, s.value(top), word)
		} else {
			s.putWord(r, kind|markFilled, form, word)
		}
		filled++
	}
	return filled
}

func mergedOf(m box, title bool) Merged {
	return Merged{Range: m.String(), Top: m.top, Bottom: m.bottom, Left: m.left, Right: m.right, Title: title}
}
