package uncertainty

import (
	"math"
	"testing"
)

// JCGM 101, 7.9.2, examples 1 to 3 (from memory): 0.000 35 g to two digits and one, 2 K.
func TestTolerance(t *testing.T) {
	for _, c := range []struct {
		u      float64
		digits int
		want   float64
	}{
		{0.00035, 2, 0.000005},
		{0.00035, 1, 0.00005},
		{2, 1, 0.5},
		{10.1, 2, 0.5},      // 10·10⁰
		{0.0994, 2, 0.0005}, // 99·10⁻³
		{0.0996, 2, 0.005},  // rounded up into the next decade: 10·10⁻²
		{0.001, 1, 0.0005},
		{1000, 2, 50},
		{0, 2, 0},
	} {
		relative(t, "δ", Tolerance(c.u, c.digits), c.want, 1e-12)
	}
}

// JCGM 101, table 6 (print from memory): the mass calibration's two linear intervals against that of Monte Carlo.
func TestS1Table6(t *testing.T) {
	mcm := Interval{1.0834, 1.3825}
	for _, c := range []struct {
		name      string
		u         float64
		low, high float64 // d_low, d_high
		validated bool
	}{
		{"first order", 0.05385164807, 0.0451, 0.0430, false},
		{"higher order", 0.0749634739, 0.0036, 0.0015, true},
	} {
		v := Validate(1.2340, 1.959964*c.u, mcm, Tolerance(0.0754, 1))
		within(t, c.name+", tolerance", v.Tolerance, 0.005, 1e-15)
		within(t, c.name+", d_low", v.Low, c.low, 1e-4) // a difference of two rounded figures
		within(t, c.name+", d_high", v.High, c.high, 1e-4)
		if v.Validated != c.validated {
			t.Errorf("%s: validated %v", c.name, v.Validated)
		}
	}
	if v := Validate(0, 1, Interval{-1, math.Nextafter(1.5, 2)}, 0.5); v.Validated {
		t.Error("one end beyond the tolerance is enough")
	}
	if v := Validate(0, 1, Interval{-1.5, 1.5}, 0.5); !v.Validated {
		t.Error("an end at the tolerance is within it")
	}
}
