package rules

import (
	"fmt"
	"testing"
)

func TestReusedLabels(t *testing.T) {
	s := kelp(40, 35)
	s.header = append([]string{"frond"}, s.header...)
	for i := range s.rows {
		s.rows[i] = append([]string{fmt.Sprintf("T%02d", i)}, s.rows[i]...)
	}
	roles := kelpRoles
	p := passOf(t, s, roles)
	expect(t, p, ask(t, ReusedLabels, p), NotAsked, "no column")
	roles.Label = "frond"
	p = passOf(t, s, roles)
	expect(t, p, ask(t, ReusedLabels, p), Sound, "every label")
	s.rows[18][0] = "T06"
	p = passOf(t, s, roles)
	expect(t, p, ask(t, ReusedLabels, p), Breach, `1 label names several rows: "T06" at A8 and A20`, "A8", "A20")
}
