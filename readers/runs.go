package readers

import "sort"

// runs is a list of whole numbers that mostly go on as before: each run starts at
// a record with a value and rises by step from there. The lines of a file rise by
// 1, the number of fields by 0; a million records are then one run.
type runs struct {
	step int
	from []int32 // first record of each run
	base []int32 // its value
}

// put gives the value of the next record; records come in order.
func (r *runs) put(record, value int) {
	if n := len(r.from); n > 0 && int(r.base[n-1])+r.step*(record-int(r.from[n-1])) == value {
		return
	}
	r.from = append(r.from, int32(record))
	r.base = append(r.base, int32(value))
}

// at gives the value of a record, 0 when there is none.
func (r *runs) at(record int) int {
	i := sort.Search(len(r.from), func(i int) bool { return int(r.from[i]) > record }) - 1
	if i < 0 {
		return 0
	}
	return int(r.base[i]) + r.step*(record-int(r.from[i]))
}
