package readers

import (
	"slices"
	"strings"
)

// Nearest gives up to three of the names in among that are likely to be meant by
// name, the nearest first: those that differ by letters left out, put in, changed
// or exchanged with their neighbour, at most one in three, and those that contain
// it or lie in it. Case does not count.
func Nearest(name string, among []string) []string {
	type candidate struct {
		name     string
		distance int
	}
	var found []candidate
	want := []rune(strings.ToLower(trimPadding(name)))
	if len(want) == 0 {
		return nil
	}
	for _, n := range among {
		have := []rune(strings.ToLower(n))
		d := editDistance(want, have)
		inside := len(want) >= 3 && len(have) >= 3 &&
			(strings.Contains(string(have), string(want)) || strings.Contains(string(want), string(have)))
		longest := max(len(want), len(have))
		if (d > (longest+2)/3 || d == longest) && !inside {
			continue
		}
		if !slices.ContainsFunc(found, func(c candidate) bool { return c.name == n }) {
			found = append(found, candidate{n, d})
		}
	}
	slices.SortStableFunc(found, func(a, b candidate) int { return a.distance - b.distance })
	var out []string
	for _, c := range found[:min(3, len(found))] {
		out = append(out, c.name)
	}
	return out
}

// editDistance counts the letters to insert, delete, change or exchange with the
// next one (Damerau 1964, Commun. ACM 7:171-176; each place edited once).
func editDistance(a, b []rune) int {
	before, last, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(last[j]+1, row[j-1]+1, last[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(b)]
}
