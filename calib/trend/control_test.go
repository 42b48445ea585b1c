package trend

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// Squares of recursive residuals sum to the χ² of all (Brown, Durbin and Evans, J. R. Statist.
// Soc. B 37 (1975) 149), and there is one for each degree of freedom.
func TestScoresSumToChiSquared(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := drawHistory(t)
		tr, err := Of(h, Options{})
		if err != nil {
			t.Fatal(err)
		}
		checks, err := Control(h, Options{})
		if err != nil {
			t.Fatal(err)
		}
		var sum float64
		for _, c := range checks {
			sum += c.Score * c.Score
		}
		if len(checks) != tr.DOF || math.Abs(sum-tr.ChiSquared) > 1e-7*(1+sum) {
			t.Fatalf("%d checks with Σ score² = %g; want ν = %d and χ² = %g", len(checks), sum, tr.DOF, tr.ChiSquared)
		}
	})
}

// A prediction's control limits are those of the check that follows.
func TestControlLimits(t *testing.T) {
	h := yearly(5, 0, 10, 22, 28, 45)
	for i := range h {
		h[i].UCommon, h[i].Standards = 3, "R1"
	}
	tr := must(Of(h[:4], Options{}))(t)
	p, _ := tr.At(h[4].Time)
	checks := must(Control(h, Options{}))(t)
	c := checks[len(checks)-1]
	relative(t, "predicted", c.Predicted, p.Error)
	relative(t, "half the limits", 3*c.UPredicts, (p.ControlHigh-p.ControlLow)/2)
}

func TestSignals(t *testing.T) {
	// A jump of 10u after seven steady years: beyond 3 standard deviations.
	checks := must(Control(yearly(1, 0, 0.5, -0.5, 0.2, 0, -0.3, 0.1, 10), Options{}))(t)
	for i, c := range checks {
		want := InControl
		if i == len(checks)-1 {
			want = Action
		}
		if c.Signal != want {
			t.Errorf("%s: %v (score %g), want %v", c.Time.Format("2006"), c.Signal, c.Score, want)
		}
	}
	// A bend of the line, each result by itself within 3: the sums signal it.
	checks = must(Control(yearly(1, 0, 0, 0, 0, 0, 0, 0, 0, 1, 3, 6, 10), Options{}))(t)
	if last := checks[len(checks)-1]; !last.Shift || last.High <= 5 {
		t.Errorf("sum %g, signalled %v; want above 5", last.High, last.Shift)
	}
}

// NIST/SEMATECH e-Handbook, 6.3.2.3, data and printed sums from memory; the unrounded sums
// by numpy 1.24.
func TestCUSUM(t *testing.T) {
	sums := CUSUM{Target: 325, Slack: 0.3175, Limit: 4.1959}.Run([]float64{
		324.925, 324.675, 324.725, 324.350, 325.350, 325.225, 324.125, 324.525, 325.225, 324.600, 324.625, 325.150,
		328.325, 327.250, 327.825, 328.500, 326.675, 327.775, 326.875, 328.350})
	for i, want := range []float64{3.0075, 4.94, 7.4475, 10.63, 11.9875, 14.445, 16.0025, 19.035} {
		near(t, "S_hi", sums[12+i].High, want, 1e-9)
	}
	for i, s := range sums {
		if s.Signal != (i >= 13) {
			t.Errorf("point %d: signal %v; the first is at point 14", i+1, s.Signal)
		}
		if s.Low > 0.715+1e-9 {
			t.Errorf("point %d: S_lo %g; its maximum is 0.715", i+1, s.Low)
		}
	}
	near(t, "S_lo at point 8", sums[7].Low, 0.715, 1e-9)
}
