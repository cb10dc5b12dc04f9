package rules

import "testing"

func TestInterceptRange(t *testing.T) {
	p := passOf(t, kelp(40, 18), kelpRoles)
	o := ask(t, InterceptRange, p)
	expect(t, p, o, Sound, "temperature 0 lies outside the data")
	if len(o.Limits) != 1 {
		t.Errorf("%d limits, want 1", len(o.Limits))
	}

	p = passOf(t, drawn(40, 18, func(_ int, z float64) float64 { return z }), plainRoles)
	if o := ask(t, InterceptRange, p); len(o.Limits) != 0 {
		t.Errorf("an intercept within the data is limited: %+v", o.Limits)
	}
}
