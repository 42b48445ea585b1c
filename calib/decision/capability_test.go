package decision

import (
	"testing"

	"pgregory.net/rapid"
)

// JCGM 106:2012, clause 7.6.3: C_m = T/(4u) of the whole tolerance. Its resistors, within 0.2 Ω
// and measured with u = 0.04 Ω, have T = 0.4 Ω: C_m = 2.5, short of the common practice.
func TestCapability(t *testing.T) {
	within(t, "resistors", Capability(0.2, 2*meter), 2.5, 1e-15)
	if Capability(0.2, 2*meter) >= LeastCapability {
		t.Error("the meter is called good enough")
	}
	within(t, "no uncertainty", 1/Capability(1, 0), 0, 0)
	rapid.Check(t, func(t *rapid.T) {
		limit := rapid.Float64Range(1e-6, 10).Draw(t, "limit")
		u := rapid.Float64Range(1e-6, 10).Draw(t, "u")
		if got, want := Capability(limit, 2*u), (limit - -limit)/(4*u); got != want {
			t.Fatalf("%g, want %g", got, want)
		}
	})
}
