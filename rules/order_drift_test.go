package rules

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"testing"

	"footing/rules/model"
)

func drifting(n int, seed uint64, step float64) *sheet {
	s := kelp(n, seed)
	for i := range s.rows {
		v, _ := strconv.ParseFloat(s.rows[i][2], 64)
		s.rows[i][2] = fmt.Sprintf("%.3f", v+step*float64(i))
	}
	return s
}

func TestOrderDrift(t *testing.T) {
	p := passOf(t, kelp(40, 43), kelpRoles)
	expect(t, p, ask(t, OrderDrift, p), Sound, "no drift")

	p = passOf(t, drifting(40, 43, 0.1), kelpRoles)
	expect(t, p, ask(t, OrderDrift, p), Breach, "mm/day a row", "growth")
}

func TestOrderDriftIsNotAsked(t *testing.T) {
	// the order is named
	s := drifting(40, 43, 0.1)
	s.header = append(s.header, "no")
	for i := range s.rows {
		s.rows[i] = append(s.rows[i], fmt.Sprint(i+1))
	}
	roles := kelpRoles
	roles.Order = "no"
	p := passOf(t, s, roles)
	expect(t, p, ask(t, OrderDrift, p), NotAsked, "the order is named")

	// the predictor is the order
	p = passOf(t, s, model.Roles{Response: "growth", Predictors: []string{"no"}})
	expect(t, p, ask(t, OrderDrift, p), NotAsked, "sorted by no")

	// sorted by the response
	s = kelp(40, 43)
	slices.SortFunc(s.rows, func(a, b []string) int {
		x, _ := strconv.ParseFloat(a[2], 64)
		y, _ := strconv.ParseFloat(b[2], 64)
		return cmp.Compare(x, y)
	})
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, OrderDrift, p), NotAsked, "sorted by growth")
	slices.SortStableFunc(s.rows, func(a, b []string) int { return cmp.Compare(a[0], b[0]) })
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, OrderDrift, p), NotAsked, "sorted by growth")
}
