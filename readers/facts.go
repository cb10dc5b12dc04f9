package readers

import "slices"

// sheetFacts is what a sheet says of itself beside its cells.
type sheetFacts struct {
	hiddenRows    []int32 // sheet rows, in order
	hiddenColumns map[int]bool
	filter        string
	merged        []box
	tables        []declaredTable
	date1904      bool
}

// hides tells whether a row of the sheet is hidden.
func (f *sheetFacts) hides(row int) bool {
	if len(f.hiddenRows) == 0 {
		return false
	}
	_, ok := slices.BinarySearch(f.hiddenRows, int32(row))
	return ok
}
