package quantity

import (
	"math"
	"testing"
)

// A sine wave of 1 V rms is 1.414 V peak and 2.828 V peak to peak (common practice).
func TestConventions(t *testing.T) {
	for name, ofOneVolt := range map[string]float64{"rms": 1, "peak": math.Sqrt2, "peak-to-peak": 2 * math.Sqrt2} {
		c, ok := ConventionOf(name)
		if !ok || c.String() != name {
			t.Fatalf("%q is read as %v, %v", name, c, ok)
		}
		if rms := ofOneVolt * c.ToRMS(); math.Abs(rms-1) > 1e-15 {
			t.Errorf("%g V %s is %g V rms, want 1", ofOneVolt, name, rms)
		}
	}
	for _, name := range []string{"", "unstated", "RMS", "pp"} {
		if c, ok := ConventionOf(name); ok || c != Unstated {
			t.Errorf("%q was taken for %v", name, c)
		}
	}
}

func TestUnstatedConventionPanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("an amplitude without a convention was made rms")
		}
	}()
	Unstated.ToRMS()
}
