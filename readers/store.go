package readers

// pieceLen is the number of records in one piece of a column. Pieces are filled
// once and never copied: growing whole columns would touch the memory twice.
const pieceLen = 1 << 12

// store keeps the cells of one column by record. What is not filled costs
// nothing: pieces without a cell are nil, and each slice of a piece ends at the
// last record that needed it.
type store struct {
	pieces []*piece
	words  dictionary
	filled int  // cells that are not blank
	memory *int // bytes held by all columns of the grid
}

// piece holds up to pieceLen records; a slice that is shorter than the record's
// place in the piece stands for zeros.
type piece struct {
	kind  []uint8
	form  []uint8
	value []float64
	word  []uint32
	style []uint16
}

// cellAt is where one record lies in its column.
func (s *store) cellAt(record int) (p *piece, at int) {
	if i := record / pieceLen; i < len(s.pieces) {
		return s.pieces[i], record % pieceLen
	}
	return nil, 0
}

// grown lengthens x so that x[at] exists. Only the first piece grows by doubling:
// a column that has filled one will fill the next.
func grown[T any](x []T, at int, whole bool) []T {
	if at < len(x) {
		return x
	}
	if at < cap(x) {
		return x[:at+1]
	}
	n := max(16, 2*cap(x), at+1)
	if whole {
		n = pieceLen
	}
	y := make([]T, at+1, min(n, pieceLen))
	copy(y, x)
	return y
}

// pieceFor gives the piece of a record, made if need be.
func (s *store) pieceFor(record int) (p *piece, at int, whole bool) {
	i := record / pieceLen
	for i >= len(s.pieces) {
		s.pieces = append(s.pieces, nil)
	}
	if s.pieces[i] == nil {
		s.pieces[i] = &piece{}
	}
	whole = i > 0 && s.pieces[i-1] != nil && len(s.pieces[i-1].kind) == pieceLen
	return s.pieces[i], record % pieceLen, whole
}

// putNumber stores a number; word is a dictionary code when kind has markWord.
func (s *store) putNumber(record int, kind, form uint8, value float64, word uint32) {
	p, at, whole := s.pieceFor(record)
	if at >= len(p.kind) || at >= len(p.form) || at >= len(p.value) {
		if at < cap(p.kind) && at < cap(p.form) && at < cap(p.value) {
			p.kind, p.form, p.value = p.kind[:max(at+1, len(p.kind))], p.form[:max(at+1, len(p.form))], p.value[:max(at+1, len(p.value))]
		} else {
			before := p.bytes()
			p.kind, p.form, p.value = grown(p.kind, at, whole), grown(p.form, at, whole), grown(p.value, at, whole)
			*s.memory += p.bytes() - before
		}
	}
	p.kind[at], p.form[at], p.value[at] = kind, form, value
	if kind&markWord != 0 {
		s.putCode(p, at, false, word)
	}
	s.filled++
}

// putWord stores anything that is kept as text.
func (s *store) putWord(record int, kind, form uint8, word uint32) {
	p, at, whole := s.pieceFor(record)
	if at >= len(p.kind) {
		if at < cap(p.kind) {
			p.kind = p.kind[:at+1]
		} else {
			before := cap(p.kind)
			p.kind = grown(p.kind, at, whole)
			*s.memory += cap(p.kind) - before
		}
	}
	p.kind[at] = kind | markWord
	s.putCode(p, at, whole, word)
	if form != 0 || at < len(p.form) {
		before := cap(p.form)
		p.form = grown(p.form, at, whole)
		*s.memory += cap(p.form) - before
		p.form[at] = form
	}
	s.filled++
}

func (s *store) putCode(p *piece, at int, whole bool, word uint32) {
	if at >= len(p.word) {
		if at < cap(p.word) {
			p.word = p.word[:at+1]
		} else {
			before := cap(p.word)
			p.word = grown(p.word, at, whole)
			*s.memory += 4 * (cap(p.word) - before)
		}
	}
	p.word[at] = word
}

// putStyle notes the style of a cell; style 0 is the plain one.
func (s *store) putStyle(record int, style uint16) {
	if style == 0 {
		return
	}
	p, at, whole := s.pieceFor(record)
	p.style = grown(p.style, at, whole)
	p.style[at] = style
}

// bytes is what the column holds in memory, to hold it against a bound.
func (p *piece) bytes() int {
	return cap(p.kind) + cap(p.form) + 8*cap(p.value) + 4*cap(p.word) + 2*cap(p.style)
}

// kind gives the stored kind with its marks; 0 is blank.
func (s *store) kind(record int) uint8 {
	p, at := s.cellAt(record)
	if p == nil || at >= len(p.kind) {
		return 0
	}
	return p.kind[at]
}

func (s *store) form(record int) uint8 {
	p, at := s.cellAt(record)
	if p == nil || at >= len(p.form) {
		return 0
	}
	return p.form[at]
}

func (s *store) value(record int) float64 {
	p, at := s.cellAt(record)
	if p == nil || at >= len(p.value) {
		return 0
	}
	return p.value[at]
}

// word gives the dictionary code of a cell with markWord.
func (s *store) word(record int) uint32 {
	p, at := s.cellAt(record)
	if p == nil || at >= len(p.word) {
		return 0
	}
	return p.word[at]
}

func (s *store) style(record int) uint16 {
	p, at := s.cellAt(record)
	if p == nil || at >= len(p.style) {
		return 0
	}
	return p.style[at]
}

// kinds calls yield with the stored kinds of each piece that holds any, and the
// record of the first.
func (s *store) kinds(yield func(first int, kinds []uint8)) {
	for i, p := range s.pieces {
		if p != nil && len(p.kind) > 0 {
			yield(i*pieceLen, p.kind)
		}
	}
}
