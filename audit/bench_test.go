package audit_test

import (
	"fmt"
	"testing"

	"footing/audit"
	"footing/rules/numeric"
)

// BenchmarkAudit takes the time of a whole audit, trials and all, of two groups:
// of a sound table, and of one that keeps the audit busiest, with alarms of
// several rules. Run it on one core (-cpu 1) to compare with what
// DEVELOPERS.md gives.
func BenchmarkAudit(b *testing.B) {
	for _, n := range []int{50, 200, 2000, 5000} {
		for _, kind := range []string{"sound", "troubled"} {
			b.Run(fmt.Sprintf("%s/%d", kind, n), func(b *testing.B) {
				r := drawn(numeric.Stream(1, "study/bench"), n, 2, "normal")
				for i, x := range r.x {
					r.y[i] += x
					if kind == "troubled" {
						r.y[i] += 0.6 * x * x
						if i%2 == 0 {
							r.y[i] *= 2
						}
					}
				}
				if kind == "troubled" {
					r.y[0] += 12
				}
				table, roles := r.read(), r.roles()
				for b.Loop() {
					if _, err := audit.Table(table, audit.Request{Roles: roles, Settings: settings()}); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
