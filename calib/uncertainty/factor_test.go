package uncertainty

import (
	"fmt"
	"math"
	"testing"
)

// GUM table G.2, the printed grid from memory; every figure agrees with scipy 1.10 (scipy.stats.t.ppf) rounded.
// The first, fourth and sixth probabilities are those of ±1, 2 and 3 standard deviations: at ν = 1 the print's
// 235.80 needs 0.9973002, 0.9973 gives 235.78.
func TestTableG2(t *testing.T) {
	coverage := [6]float64{math.Erf(1 / math.Sqrt2), 0.90, 0.95, math.Erf(2 / math.Sqrt2), 0.99, math.Erf(3 / math.Sqrt2)}
	inf := math.Inf(1)
	for _, row := range []struct {
		nu     float64
		factor [6]float64
	}{
		{1, [6]float64{1.84, 6.31, 12.71, 13.97, 63.66, 235.80}},
		{2, [6]float64{1.32, 2.92, 4.30, 4.53, 9.92, 19.21}},
		{3, [6]float64{1.20, 2.35, 3.18, 3.31, 5.84, 9.22}},
		{4, [6]float64{1.14, 2.13, 2.78, 2.87, 4.60, 6.62}},
		{5, [6]float64{1.11, 2.02, 2.57, 2.65, 4.03, 5.51}},
		{6, [6]float64{1.09, 1.94, 2.45, 2.52, 3.71, 4.90}},
		{7, [6]float64{1.08, 1.89, 2.36, 2.43, 3.50, 4.53}},
		{8, [6]float64{1.07, 1.86, 2.31, 2.37, 3.36, 4.28}},
		{9, [6]float64{1.06, 1.83, 2.26, 2.32, 3.25, 4.09}},
		{10, [6]float64{1.05, 1.81, 2.23, 2.28, 3.17, 3.96}},
		{12, [6]float64{1.04, 1.78, 2.18, 2.23, 3.05, 3.76}},
		{14, [6]float64{1.04, 1.76, 2.14, 2.20, 2.98, 3.64}},
		{16, [6]float64{1.03, 1.75, 2.12, 2.17, 2.92, 3.54}},
		{18, [6]float64{1.03, 1.73, 2.10, 2.15, 2.88, 3.48}},
		{20, [6]float64{1.03, 1.72, 2.09, 2.13, 2.85, 3.42}},
		{25, [6]float64{1.02, 1.71, 2.06, 2.11, 2.79, 3.33}},
		{30, [6]float64{1.02, 1.70, 2.04, 2.09, 2.75, 3.27}},
		{40, [6]float64{1.01, 1.68, 2.02, 2.06, 2.70, 3.20}},
		{50, [6]float64{1.01, 1.68, 2.01, 2.05, 2.68, 3.16}},
		{100, [6]float64{1.005, 1.660, 1.984, 2.025, 2.626, 3.077}},
		{inf, [6]float64{1.000, 1.645, 1.960, 2.000, 2.576, 3.000}},
	} {
		half := 0.005
		if row.nu >= 100 {
			half = 0.0005
		}
		for i, p := range coverage {
			within(t, fmt.Sprintf("ν = %g, %.2f %%", row.nu, 100*p), StudentFactor(p, row.nu), row.factor[i], half)
		}
	}
	// The same at full length, scipy 1.10.
	for _, c := range []struct{ nu, t95, t9545 float64 }{
		{1, 12.706205, 13.967730}, {2, 4.302653, 4.526537}, {3, 3.182446, 3.306822}, {4, 2.776445, 2.869309},
		{5, 2.570582, 2.648649}, {6, 2.446912, 2.516524}, {7, 2.364624, 2.428805}, {8, 2.306004, 2.366416},
		{9, 2.262157, 2.319806}, {10, 2.228139, 2.283678}, {12, 2.178813, 2.231348}, {14, 2.144787, 2.195288},
		{16, 2.119905, 2.168940}, {18, 2.100922, 2.148849}, {20, 2.085963, 2.133025}, {25, 2.059539, 2.105088},
		{30, 2.042272, 2.086844}, {40, 2.021075, 2.064459}, {50, 2.008559, 2.051248}, {100, 1.983972, 2.025309},
		{inf, 1.959964, 2.000000}, {0, 1.959964, 2.000000},
	} {
		within(t, fmt.Sprintf("t95(%g)", c.nu), StudentFactor(0.95, c.nu), c.t95, 0.51e-6)
		within(t, fmt.Sprintf("t95.45(%g)", c.nu), StudentFactor(coverage[3], c.nu), c.t9545, 0.51e-6)
	}
}

// Closed forms of Student's distribution: ν = 1 is Cauchy's, tan(πp/2); ν = 2 has t = p·√(2/(1−p²)) (textbook formulas).
func TestStudentClosedForms(t *testing.T) {
	for _, p := range []float64{0.1, 0.5, 0.6827, 0.95, 0.99, 0.9999} {
		relative(t, "ν = 1", StudentFactor(p, 1), math.Tan(math.Pi/2*p), 1e-11)
		relative(t, "ν = 2", StudentFactor(p, 2), p*math.Sqrt(2/(1-p*p)), 1e-11)
	}
}

// The series takes over from the incomplete beta function at ν = 10⁴ and ends in the normal factor.
func TestLargeDegreesOfFreedom(t *testing.T) {
	for _, p := range []float64{0.5, 0.95, 0.9973} {
		within(t, "at the change", StudentFactor(p, 10000.0001), StudentFactor(p, 1e4), 1e-10)
		within(t, "ν = 1e18", StudentFactor(p, 1e18), NormalFactor(p), 1e-15)
	}
}

func TestMisusePanics(t *testing.T) {
	for name, f := range map[string]func(){
		"coverage of 95":           func() { NormalFactor(95) },
		"coverage of 0":            func() { New(nil, 0) },
		"negative dof":             func() { StudentFactor(0.95, -1) },
		"dof below 1":              func() { New(lines(Student, 0.3, 1), 0.95) },
		"negative uncertainty":     func() { New(lines(Normal, 0, -1), 0.95) },
		"uncertainty not a number": func() { New(lines(Normal, 0, math.NaN()), 0.95) },
		"nothing to convolve":      func() { ConvolutionFactor(lines(Normal, 0, 0), 0.95) },
		"no values":                func() { Summarise(nil, 0.95) },
		"a limit of none":          func() { NewKept(0) },
		"tolerance of no digit":    func() { Tolerance(1, 0) },
		"moments of other size":    func() { NewMoments(2).Add(1) },
		"no results":               func() { NewAdaptive(0, 0.95, 2) },
		"block of other size":      func() { NewAdaptive(2, 0.95, 2).Add(nil) },
		"negative sum of squares":  func() { Pool([]Group{{-1, 1}}) },
		"negative prediction":      func() { Pool([]Group{{1, 1}}).ChanceOfMore(-1) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			f()
		}()
	}
}
