package fit

import (
	"fmt"
	"math"
	"testing"
)

// JCGM 100:2008 (GUM) H.3, Tables H.6 and clauses H.3.3 to H.3.5: calibration of a thermometer, b(t) = y1 + y2·(t −
// t0); the uncertainties are from the scatter. The figures with many digits were recomputed from the table with numpy
// 1.24.
func TestThermometerLine(t *testing.T) {
	temperature := []float64{21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511}
	correction := []float64{-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160}
	residuals := []float64{-0.0031, -0.0022, -0.0003, 0.0056, -0.0005, -0.0025, 0.0054, 0.0033, 0.0002, -0.0029, -0.0030}
	line := func(t0 float64) (r *Result, s float64) {
		x := make([]float64, len(temperature))
		for i := range x {
			x[i] = temperature[i] - t0
		}
		r = mustSolve(t, polynomial(x, correction, all(len(x), 1), 0, 1))
		return r, math.Sqrt(r.ChiSquared / float64(r.DOF))
	}

	r, s := line(20)
	printed(t, "y1", r.P[0], -0.1712, 4)
	printed(t, "s(y1)", s*u(r, 0), 0.0029, 4)
	printed(t, "y2", r.P[1], 0.00218, 5)
	printed(t, "s(y2)", s*u(r, 1), 0.00067, 5)
	printed(t, "s", s, 0.0035, 4)
	correlation := r.Cov.At(0, 1) / (u(r, 0) * u(r, 1))
	printed(t, "r(y1, y2)", correlation, -0.930, 3)
	for i, want := range residuals {
		printed(t, fmt.Sprintf("residual %d", i), r.Residual[i], want, 4)
	}
	relative(t, "y1", r.P[0], -0.17120379013134998, 1e-12)
	relative(t, "s(y1)", s*u(r, 0), 0.002877597835159954, 1e-11)
	relative(t, "y2", r.P[1], 0.002182697739887278, 1e-11)
	relative(t, "s(y2)", s*u(r, 1), 0.000667938773227832, 1e-11)
	relative(t, "r(y1, y2)", correlation, -0.9304296030934459, 1e-12)
	relative(t, "sum of squares", r.ChiSquared, 1.10096583109297e-4, 1e-11)

	at30 := []float64{1, 10}
	printed(t, "b(30 °C)", r.P[0]+10*r.P[1], -0.1494, 4)
	printed(t, "u(b(30 °C))", s*math.Sqrt(r.Variance(at30)), 0.0041, 4)
	relative(t, "u(b(30 °C))", s*math.Sqrt(r.Variance(at30)), 0.004138595752854947, 1e-11)

	r, s = line(24.0085) // the mean temperature
	printed(t, "y1 at the mean", r.P[0], -0.1625, 4)
	printed(t, "s(y1) at the mean", s*u(r, 0), 0.0011, 4)
	printed(t, "r(y1, y2) at the mean", r.Cov.At(0, 1)/(u(r, 0)*u(r, 1)), 0, 3)
}

// ISO/TS 28037:2010, 6.3: uncertain y, equal and unequal.
func TestLineWithUncertainY(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5, 6}
	for _, c := range []struct {
		name         string
		y, sigma     []float64
		printed, num [6]float64 // a, b, u(a), u(b), cov(a, b), χ²; num: recomputed with numpy 1.24
	}{
		{"equal", []float64{3.3, 5.6, 7.1, 9.3, 10.7, 12.1}, all(6, 0.5),
			[6]float64{1.867, 1.757, 0.465, 0.120, -0.050, 1.665},
			[6]float64{1.86666666666667, 1.75714285714286, 0.465474668125631, 0.119522860933439, -0.05, 1.66476190476191}},
		{"unequal", []float64{3.2, 4.3, 7.6, 8.6, 11.7, 12.8}, []float64{0.5, 0.5, 0.5, 1, 1, 1},
			[6]float64{0.885, 2.057, 0.530, 0.178, -0.082, 4.131},
			[6]float64{0.885232067510549, 2.05696202531646, 0.529708143508836, 0.177892016741205, -0.0822784810126582, 4.13080168776371}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := mustSolve(t, polynomial(x, c.y, c.sigma, 0, 1))
			got := [6]float64{r.P[0], r.P[1], u(r, 0), u(r, 1), r.Cov.At(0, 1), r.ChiSquared}
			for i, what := range []string{"a", "b", "u(a)", "u(b)", "cov(a, b)", "χ²"} {
				printed(t, what, got[i], c.printed[i], 3)
				relative(t, what, got[i], c.num[i], 1e-12)
			}
			if r.DOF != 4 {
				t.Errorf("%d degrees of freedom; printed 4", r.DOF)
			}
		})
	}
}

// For a straight line through equally certain points the leverage is 1/n + (x − x̄)²/Σ(x − x̄)² (common textbook
// formula).
func TestLeverageOfLine(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5, 9}
	sigma := 0.3
	r := mustSolve(t, polynomial(x, []float64{1, 3, 2, 5, 4, 9}, all(6, sigma), 0, 1))
	const mean, spread = 4, 9 + 4 + 1 + 0 + 1 + 25
	for i := range x {
		h := 1.0/6 + (x[i]-mean)*(x[i]-mean)/spread
		within(t, "leverage", r.Leverage[i], h, 1e-14)
		within(t, "standardised residual", r.Standardised[i], r.Residual[i]/(sigma*math.Sqrt(1-h)), 1e-12)
	}
}

func TestObservationAloneHasNoStandardisedResidual(t *testing.T) {
	r := mustSolve(t, linear([][]float64{{1, 0}, {1, 0}, {1, 1.0 / 3}}, []float64{1, 2, 7.7}, all(3, 0.1)))
	within(t, "leverage", r.Leverage[2], 1, 1e-14)
	if r.Standardised[2] != 0 {
		t.Errorf("the observation that alone determines a parameter has a standardised residual of %g", r.Standardised[2])
	}
}
