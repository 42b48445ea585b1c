package correct

import (
	"math"
	"testing"
	"time"
)

// The expected values are GUM 5.2.2, equation (13), with sensitivities from
// difference quotients, in 40 digits (Python 3 decimal).
func TestCorrection(t *testing.T) {
	for _, c := range []struct{ x, o, uo, g, ug, r, k, v, expanded float64 }{
		{70.71e-6, 1.5e-7, 9e-9, 1.0040, 0.0006, -0.02, 2, 7.027888446215139e-5, 8.553923887396579e-8},
		{-35e-3, -2e-5, 4e-6, 0.97, 0.002, 0.6, 1.96, -3.606185567010309e-2, 1.410333263873253e-4},
		{0, 1.5e-7, 9e-9, 1.0040, 0.0006, -0.02, 2, -1.494023904382470e-7, 1.793274695551984e-8},
		{1, 0, 0, -2, 0.01, 0, 2, -0.5, 0.005}, // turned round
	} {
		calibration := Calibration{Gains: []Gain{{Value: c.g, U: c.ug, Correlation: c.r}}, Offset: c.o, UOffset: c.uo, K: c.k, ToRMS: 1}
		l := calibration.on(0, 0)
		v, expanded := l.correct(c.x)
		near(t, "corrected", v, c.v)
		near(t, "U", expanded, c.expanded)
	}
}

// An offset that is a share of full scale, and a gain that has drifted for two years
// of 365.25 days: the drift's uncertainty adds to the gain's and is independent of the offset.
func TestShareOfRangeAndDrift(t *testing.T) {
	c := Calibration{
		Date:   time.Date(2025, 1, 1, 0, 0, 0, 0, time.UTC),
		Gains:  []Gain{{Range: 0.1, Value: 1.001, U: 0.0003, Correlation: 0.3}},
		Offset: 2e-4, UOffset: 4e-5, OffsetShare: true, K: 2, ToRMS: 1,
		Drift: &Drift{PerYear: 0.0002, U: 0.00005},
	}
	twoYears := years(c.Date, c.Date.Add(17532*time.Hour)) // 2 × 365.25 × 24
	if twoYears != 2 {
		t.Fatalf("%v years", twoYears)
	}
	l := c.on(0.1, twoYears)
	v, expanded := l.correct(0.05)
	near(t, "corrected", v, 0.04991012582384662)
	near(t, "U", expanded, 3.465234299560371e-5)
}

// With full correlation and matching sizes the errors of gain and offset cancel: nothing is left to be uncertain of.
func TestCancelling(t *testing.T) {
	c := Calibration{Gains: []Gain{{Value: 1, U: 0.1, Correlation: -1}}, UOffset: 0.1, K: 2, ToRMS: 1}
	l := c.on(0, 0)
	for x := 0.99; x < 1.01; x += 0.001 {
		if _, expanded := l.correct(x); math.IsNaN(expanded) || math.Abs(expanded-0.2*math.Abs(x-1)) > 1e-8 {
			t.Errorf("U(%v) = %v", x, expanded)
		}
	}
}

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if math.Abs(got-want) > 1e-13*math.Abs(want) {
		t.Errorf("%s is %.15e, not %.15e", what, got, want)
	}
}
