package rules

import (
	"strings"

	"footing/readers"
)

// content says what a cell of a number column that is no number holds. Each
// rule about such cells asks for its own content, so that no cell is told by
// two rules.
type content int

const (
	fine        content = iota // a number, or missing
	written                    // a number written unlike its column
	beyondLimit                // a value known only to lie beyond a limit
	anError                    // an error value
	aDate                      // a date
	uncached                   // a formula without a value
	other                      // anything else
)

// contentOf classifies one cell; limits says that the column tells of limits
// elsewhere, where nd means a limit too.
func contentOf(col *readers.Column, row int, limits bool) content {
	switch col.CellKind(row) {
	case readers.Fault:
		return anError
	case readers.Uncached:
		return uncached
	case readers.Date:
		return aDate
	case readers.Code:
		if limits && notDetected(col.Cell(row).Text) {
			return beyondLimit
		}
	case readers.Bool:
		return other
	case readers.Text:
		cell := col.Cell(row)
		switch cell.Look {
		case readers.OtherSign, readers.OutOfRange, readers.Infinite, readers.Foreign:
			return written
		}
		if _, ok := limitIn(cell.Text); ok {
			return beyondLimit
		}
		return other
	}
	return fine
}

// strangers lists the rows of a column with the wanted content, those of rows
// that cannot be used as a whole left out.
func (p *Pass) strangers(col *readers.Column, want content) []int {
	var rows []int
	if !hasStrangers(col) {
		return nil
	}
	limits := tellsLimits(col)
	for i := range col.Len() {
		if contentOf(col, i, limits) == want && p.Table.RowFault(i) == "" {
			rows = append(rows, i)
		}
	}
	return rows
}

func hasStrangers(col *readers.Column) bool {
	for _, kind := range []readers.CellKind{readers.Fault, readers.Uncached, readers.Date, readers.Code, readers.Bool, readers.Text} {
		if col.Count(kind) > 0 {
			return true
		}
	}
	return false
}

// tellsLimits reports whether a column holds values beyond a limit.
func tellsLimits(col *readers.Column) bool {
	if col.Count(readers.Text) == 0 {
		return false
	}
	for i := range col.Len() {
		if col.CellKind(i) == readers.Text {
			if _, ok := limitIn(col.Cell(i).Text); ok {
				return true
			}
		}
	}
	return false
}

func notDetected(text string) bool {
	switch strings.ToLower(text) {
	case "nd", "n.d.":
		return true
	}
	return false
}

// limitIn reads texts such as <0.2, > 60 and below LOD: which side of a limit
// the value lies on, "below" or "above".
func limitIn(text string) (side string, ok bool) {
	s := strings.ToLower(strings.TrimSpace(text))
	for _, sign := range []struct{ mark, side string }{
		{"<=", "below"},
		{">=", "above"},
		{"=<", "below"},
		{"=>", "above"},
		{"<", "below"},
		{">", "above"},
		{"≤", "below"},
		{"≥", "above"},
		{"≦", "below"},
		{"≧", "above"},
	} {
		if rest, found := strings.CutPrefix(s, sign.mark); found {
			return sign.side, hasDigit(rest) || namesLimit(rest)
		}
	}
	for _, word := range []struct{ mark, side string }{
		{"below", "below"},
		{"under", "below"},
		{"less than", "below"},
		{"at most", "below"},
		{"up to", "below"},
		{"above", "above"},
		{"over", "above"},
		{"more than", "above"},
		{"greater than", "above"},
		{"at least", "above"},
	} {
		if rest, found := strings.CutPrefix(s, word.mark); found && (rest == "" || !isLetter(rest[0])) {
			return word.side, hasDigit(rest) || namesLimit(rest)
		}
	}
	switch strings.Trim(s, "() .") {
	case "lod", "loq", "lld", "mdl", "bdl", "bld", "blq", "bql", "b.d.l", "b.d", "bd", "trace", "tr", "not detected", "undetected", "non-detect", "nondetect", "too low":
		return "below", true
	case "aql", "uloq", "off scale", "offscale", "saturated", "overflow", "over range", "overrange", "too high", "tntc":
		return "above", true
	}
	return "", false
}

// namesLimit tells the names of limits: of detection, of quantification.
func namesLimit(s string) bool {
	s = strings.Trim(s, " ()")
	for _, name := range []string{"lod", "loq", "lld", "mdl", "dl", "ql", "rl", "limit", "detection", "range", "the limit", "detect", "uloq", "lloq", "scale"} {
		if strings.HasPrefix(s, name) {
			return true
		}
	}
	return false
}

func hasDigit(s string) bool { return strings.ContainsAny(s, "0123456789") }

func isLetter(c byte) bool { return c|0x20 >= 'a' && c|0x20 <= 'z' }
