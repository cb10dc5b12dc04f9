package rules

import "testing"

func TestOutOfRange(t *testing.T) {
	p := passOf(t, kelp(20, 36), kelpRoles)
	expect(t, p, ask(t, OutOfRange, p), NotAsked, "no limits")
}
