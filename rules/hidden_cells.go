package rules

import (
	"fmt"
	"slices"
	"strconv"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// HiddenCells asks for rows, columns and cells that the file hides, strikes
// through or colours.
var HiddenCells = &Rule{
	Name:   "hidden-cells",
	Family: OfTable,
	Asks:   "Does the sheet hide, strike through or colour what is used?",
	Why:    "Whoever hid or struck out a row may have meant it not to count; a colour may say what no column says.",
	Method: "lists hidden and filtered rows, hidden columns in use and cells struck through, all of which are used; and tells when the rows fall into two or more colours, " +
		"each on a tenth of them or more",
	Limit: "one hidden row or one cell struck through in use; colours that no column of labels explains exactly, and that do not just alternate. No chance is involved",
	Needs: NeedsTable, Remedies: []*remedy.Remedy{remedy.WithoutHidden},
	Run: hiddenCells,
}

func hiddenCells(p *Pass) (Outcome, error) {
	var said []string
	var where []Place
	rows := map[int]bool{}
	hidden := p.Table.Reading.Hidden
	if n := len(hidden.Records); n > 0 {
		word := "hidden"
		if hidden.Filter != "" {
			word = "hidden by the filter " + hidden.Filter
		}
		said = append(said, fmt.Sprintf("%s: %s", wording.Count(n, "row")+isAre(n)+" "+word, p.rowNumbers(hidden.Records)))
		for _, i := range hidden.Records {
			where = append(where, Place{Row: i})
			rows[i] = true
		}
	} else if hidden.Filter != "" {
		said = append(said, "a filter is set ("+hidden.Filter+"), but hides no row of the table")
	}
	breached := len(hidden.Records) > 0
	for _, col := range hidden.Columns {
		if p.Uses(col) {
			breached = true
			where = append(where, Place{Row: -1, Column: col})
			said = append(said, fmt.Sprintf("column %s (%s) is hidden", col.Letter(), col.Title()))
		}
	}
	if struck := p.struck(); len(struck) > 0 {
		breached = true
		var cells []string
		for _, w := range struck {
			cells = append(cells, p.Table.Address(w.Column, w.Row))
			rows[w.Row] = true
		}
		where = append(where, struck...)
		said = append(said, fmt.Sprintf("%s struck through: %s", wording.Count(len(struck), "cell")+isAre(len(struck)), wording.Some(cells, mostSaid)))
	}
	colours := p.colours()
	if colours.said != "" {
		breached = breached || colours.unexplained
		where = append(where, colours.where...)
		said = append(said, colours.said)
	}
	if len(said) == 0 {
		return sound("nothing that is used is hidden, struck through or coloured apart"), nil
	}
	o := sound(wording.List(said))
	if breached {
		o = breach(wording.List(said) + "; all of it is used")
		for i := range rows {
			o.Target.Rows = append(o.Target.Rows, i)
		}
		if p.Design != nil {
			o.Target.Rows = p.Design.RowsAt(o.Target.Rows)
		} else {
			o.Target.Rows = nil
		}
	}
	o.Where = where
	return o, nil
}

// rowNumbers lists rows as the sheet counts them, neighbours as from to.
func (p *Pass) rowNumbers(records []int) string {
	var said []string
	for from := 0; from < len(records); {
		to := from
		for to+1 < len(records) && p.Table.Row(records[to+1]) == p.Table.Row(records[to])+1 {
			to++
		}
		first, last := p.Table.Row(records[from]), p.Table.Row(records[to])
		if to-from > 1 {
			said = append(said, fmt.Sprintf("%d to %d", first, last))
		} else {
			for k := from; k <= to; k++ {
				said = append(said, strconv.Itoa(p.Table.Row(records[k])))
			}
		}
		from = to + 1
	}
	return wording.Some(said, mostSaid)
}

// struck lists the cells in use that are struck through.
func (p *Pass) struck() []Place {
	if p.Table.Reading.Hidden.Struck == 0 {
		return nil
	}
	var where []Place
	for _, col := range p.Table.Columns {
		if !p.Uses(col) {
			continue
		}
		for i := range col.Len() {
			if col.CellKind(i) != readers.Blank && col.Cell(i).Style.Struck {
				where = append(where, Place{Row: i, Column: col})
			}
		}
	}
	return where
}

type colouring struct {
	said        string
	where       []Place
	unexplained bool
}

// colours tells of rows that fall into colours. A row has the colour of most
// of its cells.
func (p *Pass) colours() colouring {
	if !p.Table.Reading.Colored {
		return colouring{}
	}
	for _, kind := range []string{"fill", "font"} {
		of := p.rowColours(kind)
		members := map[string][]int{}
		for i, c := range of {
			members[c] = append(members[c], i)
		}
		var large []string
		for c, rows := range members {
			if 10*len(rows) >= len(of) {
				large = append(large, c)
			}
		}
		if len(large) < 2 {
			continue
		}
		slices.SortFunc(large, func(a, b string) int {
			if d := len(members[b]) - len(members[a]); d != 0 {
				return d
			}
			return members[a][0] - members[b][0]
		})
		var said []string
		for _, c := range large {
			said = append(said, fmt.Sprintf("%d %s", len(members[c]), colourWord(c)))
		}
		c := colouring{said: fmt.Sprintf("the rows fall into %s colours (%s)", kind, wording.List(said))}
		switch col := p.explains(of); {
		case col != nil:
			c.said += fmt.Sprintf(", as %s says too", col.Title())
		case alternate(of):
			c.said += ", in turn"
		default:
			c.unexplained = true
			c.said += ", which no column says"
			for _, colour := range large[1:] {
				for _, i := range members[colour] {
					c.where = append(c.where, Place{Row: i})
				}
			}
		}
		return c
	}
	return colouring{}
}

func colourWord(c string) string {
	if c == "" {
		return "plain"
	}
	return "in " + c
}

// rowColours gives each row the colour that most of its filled cells have.
func (p *Pass) rowColours(kind string) []string {
	of := make([]string, p.Table.Len())
	for i := range of {
		times := map[string]int{}
		for _, col := range p.Table.Columns {
			if col.CellKind(i) == readers.Blank {
				continue
			}
			style := col.Cell(i).Style
			if kind == "fill" {
				times[style.Fill]++
			} else {
				times[style.Ink]++
			}
		}
		best := 0
		for c, n := range times {
			// At a tie a colour says more than none.
			if n > best || n == best && (of[i] == "" || c != "" && c < of[i]) {
				of[i], best = c, n
			}
		}
	}
	return of
}

// explains finds a column of labels that goes with the colours exactly: each
// label in one colour. Labels that are all different explain nothing.
func (p *Pass) explains(of []string) *readers.Column {
	for _, col := range p.Table.Columns {
		names, codes := col.Levels()
		if len(names) < 2 || 3*len(names) > len(of) {
			continue
		}
		colour := make([]*string, len(names))
		fits := true
		for i, c := range codes {
			if c < 0 {
				continue
			}
			if colour[c] == nil {
				colour[c] = &of[i]
			} else if *colour[c] != of[i] {
				fits = false
				break
			}
		}
		if fits {
			return col
		}
	}
	return nil
}

// alternate tells bands: every row has the colour of the one before the last.
func alternate(of []string) bool {
	for i := 2; i < len(of); i++ {
		if of[i] != of[i-2] {
			return false
		}
	}
	return len(of) > 3 && of[0] != of[1]
}
