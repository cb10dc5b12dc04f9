package readers

import (
	"fmt"
	"slices"
)

// build makes the table from the records that were kept.
func (b *body) build() (*Table, error) {
	g := b.g
	t := &Table{File: g.file, Sheet: g.sheet, grid: g, faults: map[int]string{}}
	if g.sheet != "" {
		t.Format = Workbook
	}
	if b.header >= 0 {
		t.HeaderRow = g.lines.at(b.header)
	}
	b.collect(t)
	if t.length == 0 {
		at := Pos{File: g.file, Sheet: g.sheet, Row: t.HeaderRow}
		if b.header < 0 {
			return nil, refuse(at, "has no rows")
		}
		return nil, refuse(at, "has a header and no rows")
	}
	for _, c := range b.columns {
		col := &Column{Header: b.name(c), Index: c, table: t, store: g.column(c), Hidden: g.facts.hiddenColumns[c]}
		col.Name, col.Unit = splitUnit(col.Header)
		if unit := b.units[c]; unit != "" && col.Unit == "" {
			col.Unit = unit
		}
		t.Columns = append(t.Columns, col)
	}
	if err := b.uneven(t); err != nil {
		return nil, err
	}
	for _, col := range t.Columns {
		b.stripUnits(t, col)
		col.settle()
	}
	b.columnNotes(t)
	b.sheetReading(t)
	t.Reading = *b.reading
	return t, nil
}

// collect lists the kept records: by their first when they lie together, else by
// index.
func (b *body) collect(t *Table) {
	last, gaps := -1, false
	for r := b.first; r < b.end; r++ {
		if b.fate[r] == drop {
			continue
		}
		if t.length == 0 {
			t.first = r
		} else if r != last+1 {
			gaps = true
		}
		t.length++
		last = r
	}
	if !gaps {
		return
	}
	t.index = make([]int32, 0, t.length)
	for r := b.first; r < b.end; r++ {
		if b.fate[r] != drop {
			t.index = append(t.index, int32(r))
		}
	}
}

// fault marks a record as not to be used.
func (t *Table) fault(record int, why string) {
	if t.isFault == nil {
		t.isFault = make([]uint64, (t.length+63)/64)
	}
	t.isFault[record>>6] |= 1 << (uint(record) & 63)
	t.faults[record] = why
}

// uneven compares the fields of each record with those of the header.
func (b *body) uneven(t *Table) error {
	g := b.g
	if g.sheet != "" {
		return nil
	}
	want := b.usualFields(t)
	if b.header >= 0 {
		want = g.fields.at(b.header)
	}
	faults, harmless := 0, 0
	var list []Uneven
	next := 0 // the run of g.fields that the record lies in
	for i := range t.length {
		at := t.at(i)
		for next+1 < len(g.fields.from) && int(g.fields.from[next+1]) <= at {
			next++
		}
		n := int(g.fields.base[next])
		if n == want {
			continue
		}
		u := Uneven{Record: i, Row: t.Row(i), Fields: n, Want: want, Kind: b.unevenKind(at, n, want)}
		list = append(list, u)
		if u.Kind.Used() {
			harmless++
			continue
		}
		faults++
		t.fault(i, fmt.Sprintf("has %d of %d fields", n, want))
	}
	if faults > 1 && 10*faults > t.length {
		u := firstFault(list)
		return refuse(Pos{File: g.file, Row: u.Row},
			"%s of %s rows have more or fewer fields than the header, first row %d with %d of %d: check --delimiter, and whether fields that hold it are quoted",
			count(faults), count(t.length), u.Row, u.Fields, u.Want)
	}
	if harmless == t.length && alike(list) {
		if list[0].Kind == ExtraVoid {
			b.note("every row has %d fields, %d of them blank and beyond the header", list[0].Fields, list[0].Fields-want)
		} else {
			b.note("every row has %d fields of %d; the rest counts as blank", list[0].Fields, want)
		}
		return nil
	}
	b.reading.Uneven = list
	return nil
}

// alike tells whether all rows are uneven in the same way.
func alike(list []Uneven) bool {
	for _, u := range list {
		if u.Fields != list[0].Fields || u.Kind != list[0].Kind {
			return false
		}
	}
	return true
}

func firstFault(list []Uneven) Uneven {
	for _, u := range list {
		if !u.Kind.Used() {
			return u
		}
	}
	return list[0]
}

// usualFields is the number of fields that most records have.
func (b *body) usualFields(t *Table) int {
	counts := map[int]int{}
	best := 0
	for i := range t.length {
		n := b.g.fields.at(t.at(i))
		counts[n]++
		if counts[n] > counts[best] {
			best = n
		}
	}
	return best
}

// unevenKind tells what is wrong with a record of n fields.
func (b *body) unevenKind(record, n, want int) UnevenKind {
	if n > want {
		for c := want; c < len(b.g.columns); c++ {
			if b.g.kind(c, record) != Blank {
				return TooMany
			}
		}
		return ExtraVoid
	}
	for _, c := range b.numeric {
		if c < n && class(b.g.column(c).kind(record)) == asWord {
			return TooFew
		}
	}
	for _, c := range b.labels {
		s := b.g.column(c)
		if c < n && class(s.kind(record)) == asNumber && !b.holdsNumbers(c, record) {
			return TooFew
		}
	}
	return CutShort
}

// holdsNumbers tells whether a column of labels has numbers in other records.
func (b *body) holdsNumbers(c, except int) bool {
	found := false
	b.g.seek(c).kinds(func(first int, kinds []uint8) {
		for r := max(b.first, first); r < min(b.end, first+len(kinds)) && !found; r++ {
			found = r != except && b.fate[r] != drop && class(kinds[r-first]) == asNumber
		}
	})
	return found
}

// stripUnits makes numbers of a column in which most cells are a number followed
// by one and the same unit.
func (b *body) stripUnits(t *Table, col *Column) {
	s := col.store
	if !slices.Contains(s.words.kinds, measureText) {
		return
	}
	measures, filled := 0, 0
	for i := range t.length {
		switch class(s.kind(t.at(i))) {
		case asNumber, asWord:
			filled++
		}
		if CellKind(s.kind(t.at(i))&kindMask) == measureText {
			measures++
		}
	}
	if 2*measures <= filled || measures == 0 {
		return
	}
	unit, agree := b.commonUnit(t, s)
	if 2*agree <= filled {
		return
	}
	for i := range t.length {
		at := t.at(i)
		k := s.kind(at)
		if CellKind(k&kindMask) != measureText {
			continue
		}
		w, u, ok := readMeasure(s.words.text(s.word(at)), b.g.decimal)
		if !ok || u != unit {
			continue
		}
		form := formUnit | s.form(at)&formPadded | decimalsOpen
		if w.decimals >= 0 && w.decimals < decimalsOpen {
			form = form&^decimalsMask | uint8(w.decimals)
		}
		kind := uint8(Number)
		if b.g.declared.number(w.value) {
			kind = uint8(declaredCode)
		}
		s.putNumber(at, kind|markWord|k&(markResult|markFilled), form, w.value, s.word(at))
		s.filled--
	}
	b.note("column %s bears the unit %s in %s; the numbers were taken without it", col.named(), unit, cellsOf(agree, filled))
	if col.Unit == "" {
		col.Unit = unit
	} else if col.Unit != unit {
		b.note("the header of column %s has the unit %s, its cells %s", col.named(), col.Unit, unit)
	}
}

func cellsOf(n, all int) string {
	if n == all {
		return "every cell"
	}
	return fmt.Sprintf("%s of %s cells", count(n), count(all))
}

// commonUnit gives the unit that most cells of a column have.
func (b *body) commonUnit(t *Table, s *store) (unit string, cells int) {
	var units []string
	var counts []int
	known := map[string]int32{}
	byWord := make([]int32, s.words.len()) // 1 + the unit of a text, 0 when it is not read yet
	for i := range t.length {
		at := t.at(i)
		if CellKind(s.kind(at)&kindMask) != measureText {
			continue
		}
		word := s.word(at)
		if byWord[word] == 0 {
			_, u, _ := readMeasure(s.words.text(word), b.g.decimal)
			n, ok := known[u]
			if !ok {
				n = int32(len(units))
				known[u] = n
				units = append(units, u)
				counts = append(counts, 0)
			}
			byWord[word] = n + 1
		}
		n := byWord[word] - 1
		if counts[n]++; counts[n] > cells {
			unit, cells = units[n], counts[n]
		}
	}
	return unit, cells
}

// named gives a column's name and letter for a sentence.
func (c *Column) named() string {
	if c.Name == "" {
		return c.Letter()
	}
	return fmt.Sprintf("%s (%s)", c.Name, c.Letter())
}
