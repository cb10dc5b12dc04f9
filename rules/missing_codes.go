package rules

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// MissingCodes asks for values that may stand for a missing one.
var MissingCodes = &Rule{
	Name:   "missing-codes",
	Family: OfTable,
	Asks:   "Does a value such as -999 stand for a missing one?",
	Why:    "One -999 taken for a measurement can turn a slope round.",
	Method: "looks for values that are habitual codes (all nines, -1, 0, other repeated whole numbers) and lie far from all other values of their column",
	Limit: "a code of nines alone beyond the others by more than their whole range, or a repeated whole number beyond them by half of it (0 and -1) or twice it (any other); " +
		"measured values reach so far only when a column has a few wild ones, which deserve the question too",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.AsMissing},
	Run:      missingCodes,
}

func missingCodes(p *Pass) (Outcome, error) {
	text := map[string]int{}
	var where []Place
	var suspects []string
	var flags []string
	rows := map[int]bool{}
	for _, col := range p.Asked() {
		if p.Design != nil && (col == p.Columns.Label || col == p.Columns.Order) {
			continue
		}
		for i := range col.Len() {
			if cell := col.Cell(i); cell.Kind == readers.Code {
				text[strings.ToLower(cell.Text)]++
			}
		}
		if col.Kind() != readers.NumberColumn || col == p.Columns.Group || col == p.Columns.Subject {
			continue
		}
		for _, code := range suspectedCodes(col) {
			var cells []string
			for i := range col.Len() {
				if v, ok := col.Number(i); ok && v == code {
					where = append(where, Place{Row: i, Column: col})
					rows[i] = true
					cells = append(cells, p.Table.Address(col, i))
				}
			}
			suspects = append(suspects, fmt.Sprintf("%s is %s at %s", col.Title(), wording.Number(code), wording.Some(cells, 5)))
			flags = append(flags, "--missing "+wording.Number(code))
		}
	}
	if len(suspects) > 0 {
		return suspectedOutcome(p, suspects, flags, where, rows), nil
	}
	return textCodes(p, text), nil
}

func suspectedOutcome(p *Pass, suspects, flags []string, where []Place, rows map[int]bool) Outcome {
	slices.Sort(flags)
	flags = slices.Compact(flags)
	o := breach(wording.List(suspects) + ", far from all other values: perhaps a code for a missing value; it is used as a number here")
	o.Where = where
	o.Advice = "run again with " + strings.Join(flags, " ") + " if the value stands for a missing one; mend the cell if it was mistyped"
	o.Evidence = map[string]any{"cells": len(where), "flags": flags}
	if p.Design != nil {
		o.Target.Rows = p.Design.RowsAt(slices.Sorted(maps.Keys(rows)))
	}
	return o
}

// textCodes tells of codes in words, which are taken as missing at once.
func textCodes(p *Pass, text map[string]int) Outcome {
	if len(text) == 0 {
		return sound("no code for a missing value was seen")
	}
	var named []string
	doubtful := false
	for _, code := range slices.Sorted(maps.Keys(text)) {
		named = append(named, fmt.Sprintf("%q (%d)", code, text[code]))
		doubtful = doubtful || code == "-" || code == "–" || code == "nd" || code == "n.d."
	}
	message := "taken as missing: " + wording.List(named)
	if len(text) == 1 && !doubtful {
		return sound(message)
	}
	o := breach(message)
	if doubtful {
		o.Message += "; a dash or nd may also mean zero, or below a limit"
	} else {
		o.Message += "; two codes may have meant two things"
	}
	o.Advice = "write one code, or leave the cell empty, wherever a value is missing"
	for _, col := range p.Asked() {
		for i := range col.Len() {
			if col.Cell(i).Kind == readers.Code {
				o.Where = append(o.Where, Place{Row: i, Column: col})
			}
		}
	}
	return o
}

// suspectedCodes lists the values of a column that may be codes.
func suspectedCodes(col *readers.Column) []float64 {
	count := map[float64]int{}
	for i := range col.Len() {
		if v, ok := col.Number(i); ok {
			count[v]++
		}
	}
	least, greatest := math.Inf(1), math.Inf(-1)
	for v, n := range count {
		if !habitualCode(v, n) {
			least, greatest = min(least, v), max(greatest, v)
		}
	}
	var codes []float64
	for v, n := range count {
		if !habitualCode(v, n) || least > greatest {
			continue
		}
		gap := max(least-v, v-greatest)
		if gap > farGap(v, n)*(greatest-least) && gap > 0 {
			codes = append(codes, v)
		}
	}
	slices.Sort(codes)
	return codes
}

// habitualCode tells values that people write for a missing one. Whole numbers
// that are no habit count only when they are repeated.
func habitualCode(v float64, times int) bool {
	if allNines(v) {
		return true
	}
	return times > 1 && v == math.Trunc(v) && (v == 0 || v == -1 || math.Abs(v) >= 10)
}

// farGap is how far beyond all other values, in ranges of these, a code lies.
func farGap(v float64, times int) float64 {
	switch {
	case allNines(v) && times == 1:
		return 1
	case allNines(v), v == 0, v == -1:
		return 0.5
	default:
		return 2
	}
}

// allNines tells -9, 99, -999, 99.9 and the like.
func allNines(v float64) bool {
	digits := strings.NewReplacer("-", "", ".", "").Replace(wording.Number(v))
	return strings.Trim(digits, "9") == "" && (len(digits) > 1 || v < 0)
}
