package rules

import (
	"fmt"
	"testing"
)

func TestOverlap(t *testing.T) {
	p := passOf(t, kelp(40, 16), kelpRoles)
	expect(t, p, ask(t, Overlap, p), Sound, "the groups share temperature from")

	s := &sheet{header: []string{"site", "temperature", "growth"}}
	for i := range 40 {
		x := float64(i % 20)
		if i%2 == 0 {
			x += 30
		}
		s.add([]string{"exposed", "sheltered"}[i%2], x, fmt.Sprint((i*13)%7))
	}
	p = passOf(t, s, kelpRoles)
	expect(t, p, ask(t, Overlap, p), CannotTell, "two parts of one curve")
}
