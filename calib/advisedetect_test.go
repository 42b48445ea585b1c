package calib

import (
	"math"
	"math/rand/v2"
	"testing"
)

// z of 97.5 % is 1.960 and of 80 % 0.842 (tables of the normal distribution; NIST/SEMATECH
// e-Handbook of Statistical Methods, 1.3.6.7.1).
func TestDetectable(t *testing.T) {
	x, err := Expect(casePlan(t, "arrival"))
	if err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string][2]float64{
		"gain":              {float64(x.Detectable.Gain), x.Gain.U},
		"offset":            {float64(x.Detectable.Offset), x.Offset.U},
		"series resistance": {float64(x.Detectable.Series), x.SeriesResistance.U},
	} {
		if got := c[0] / c[1]; math.Abs(got-2.802) > 0.001 {
			t.Errorf("%s: %g u, want 2.802", name, got)
		}
	}
	if x, err = Expect(casePlan(t, "one-amplitude")); err != nil || !math.IsNaN(float64(x.Detectable.Offset)) {
		t.Errorf("%+v, %v", x.Detectable, err)
	}
}

// A detector with that offset is found by four tests in five, and one without by one in twenty.
func TestPowerOfTheTest(t *testing.T) {
	p := casePlan(t, "one-amplitude", `range     = "auto"`, "range = \"auto\"\nphase = [\"0 deg\", \"180 deg\"]")
	x, err := Expect(p)
	if err != nil {
		t.Fatal(err)
	}
	s, random := NewSimulator(p), rand.New(rand.NewPCG(3, 4))
	const trials = 1000
	for offset, want := range map[float64]float64{float64(x.Detectable.Offset): Power, 0: FalseAlarm} {
		found := 0
		for range trials {
			m, err := newModel(p, s.Readings(Truth{Gain: 1, Offset: offset}, random))
			if err != nil {
				t.Fatal(err)
			}
			e, err := m.estimate(gainCommon, nothing)
			if err != nil {
				t.Fatal(err)
			}
			if o := e.layout.offset; math.Abs(e.result.P[o]) > 1.959964*math.Sqrt(e.result.Cov.At(o, o)) {
				found++
			}
		}
		if bound := 3 * math.Sqrt(want*(1-want)*trials); math.Abs(float64(found)-want*trials) > bound {
			t.Errorf("found %d of %d, want %g ± %.0f", found, trials, want*trials, bound)
		}
	}
}
