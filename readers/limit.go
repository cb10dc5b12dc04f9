package readers

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Limits bound what a file may cost. A field left at zero has its default, which
// Default gives.
type Limits struct {
	File     int64 // bytes of the file itself; default 256 MiB
	Unpacked int64 // bytes of all parts of a workbook once unpacked; default 512 MiB
	Line     int64 // bytes of one record of a text file; default 4 MiB
	Columns  int   // columns of the file or sheet; default 16,384
	Cells    int   // cells that hold something; default 10,000,000
}

// Default fills the fields that are zero.
func (l Limits) Default() Limits {
	set := func(v *int64, d int64) {
		if *v == 0 {
			*v = d
		}
	}
	set(&l.File, 256<<20)
	set(&l.Unpacked, 512<<20)
	set(&l.Line, 4<<20)
	if l.Columns == 0 {
		l.Columns = lastSheetColumn
	}
	if l.Cells == 0 {
		l.Cells = 10_000_000
	}
	return l
}

// Set takes one limit by name, as in --limit file=300MiB: file, unpacked and line
// are bytes with an optional KiB, MiB or GiB, columns and cells are counts. The
// error tells the names or the form.
func (l *Limits) Set(name, value string) error {
	n, err := parseSize(value)
	if err != nil {
		return fmt.Errorf("limit %s is %q; give a whole number, for bytes also as 300MiB", name, value)
	}
	switch name {
	case "file":
		l.File = n
	case "unpacked":
		l.Unpacked = n
	case "line":
		l.Line = n
	case "columns":
		l.Columns = int(n)
	case "cells":
		l.Cells = int(n)
	default:
		return fmt.Errorf("there is no limit %q; the limits are file, unpacked, line, columns, cells", name)
	}
	return nil
}

func parseSize(s string) (int64, error) {
	s = strings.TrimSpace(s)
	shift := 0
	for i, unit := range [...]string{"KiB", "MiB", "GiB"} {
		if head, ok := strings.CutSuffix(s, unit); ok {
			s, shift = strings.TrimSpace(head), 10*(i+1)
		}
	}
	s = strings.ReplaceAll(s, ",", "")
	n, err := strconv.ParseInt(s, 10, 64)
	if err != nil {
		return 0, err
	}
	if n <= 0 || n > math.MaxInt64>>(shift+1) {
		return 0, strconv.ErrRange
	}
	return n << shift, nil
}

// size writes bytes as people speak of them; what is not whole is rounded up, so
// that the figure is always enough for --limit.
func size(n int64) string {
	for _, u := range [...]struct {
		shift int
		name  string
	}{{30, "GiB"}, {20, "MiB"}, {10, "KiB"}} {
		if n >= 1<<u.shift {
			if n>>u.shift < 4 && n&(1<<u.shift-1) != 0 && u.shift > 10 {
				continue // 1.5 GiB reads better as 1536 MiB than as 2 GiB
			}
			return fmt.Sprintf("%d %s", (n+1<<u.shift-1)>>u.shift, u.name)
		}
	}
	return fmt.Sprintf("%d bytes", n)
}

// count writes a count with commas between thousands.
func count(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}
