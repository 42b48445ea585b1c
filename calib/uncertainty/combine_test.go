package uncertainty

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// GUM H.2, tables H.2 to H.4: five simultaneous observations of voltage/V, current/mA and phase/rad. "Printed" are the
// tables' figures; the fuller ones were recomputed with numpy 1.24.
func TestGUMH2ResistanceAndReactance(t *testing.T) {
	m := NewMoments(3)
	m.Add(5.007, 19.663, 1.0456)
	m.Add(4.994, 19.639, 1.0438)
	m.Add(5.005, 19.640, 1.0468)
	m.Add(4.990, 19.685, 1.0428)
	m.Add(4.999, 19.678, 1.0433)

	mean, s, r := make([]float64, 3), make([]float64, 3), mat.NewSymDense(3, nil)
	cov := m.Covariance()
	for i := range 3 {
		mean[i], s[i] = m.Mean(i), m.SD(i)/math.Sqrt(float64(m.N()))
		for j := range i + 1 {
			r.SetSym(i, j, cov.At(i, j)/(m.SD(i)*m.SD(j)))
		}
	}
	for i, want := range []struct{ mean, s, tolerance float64 }{
		{4.999, 0.003209361307176, 1e-13}, {19.661, 0.009471008394041, 1e-13}, {1.04446, 0.000752063827079, 1e-13},
	} {
		within(t, "mean", mean[i], want.mean, want.tolerance)
		within(t, "s of the mean", s[i], want.s, want.tolerance)
	}
	within(t, "r(V, I)", r.At(0, 1), -0.355311219817, 1e-10)
	within(t, "r(V, φ)", r.At(0, 2), 0.857624210840, 1e-10)
	within(t, "r(I, φ)", r.At(1, 2), -0.645111217689, 1e-10)

	v, i, phi := mean[0], mean[1]*1e-3, mean[2]
	u := []float64{s[0], s[1] * 1e-3, s[2]}
	z, sin, cos := v/i, math.Sin(phi), math.Cos(phi)
	cR := []float64{cos / i, -z * cos / i, -z * sin}
	cX := []float64{sin / i, -z * sin / i, z * cos}
	cZ := []float64{1 / i, -z / i, 0}
	independent := mat.NewSymDense(3, []float64{1, 0, 0, 0, 1, 0, 0, 0, 1})
	for _, c := range []struct {
		name                                    string
		value, printed, half                    float64
		c                                       []float64
		u, printedU, halfU, uncorrelated, alone float64
	}{
		{"R", z * cos, 127.732, 0.5e-3, cR, 0.071071407397, 0.071, 0.5e-3, 0.195, 0.194544454},
		// The print has 0.295 for X: its table H.4 was made from rounded means.
		{"X", z * sin, 219.847, 0.5e-3, cX, 0.295581677359, 0.295, 1e-3, 0.201, 0.200909306},
		{"Z", z, 254.260, 0.5e-3, cZ, 0.236336130082, 0.236, 0.5e-3, 0.204, 0.204076425},
	} {
		within(t, c.name+", printed", c.value, c.printed, c.half)
		within(t, "u of "+c.name+", printed", Combine(c.c, u, r), c.printedU, c.halfU)
		within(t, "u of "+c.name, Combine(c.c, u, r), c.u, 1e-10)
		within(t, "u of "+c.name+" without correlations, printed", Combine(c.c, u, independent), c.uncorrelated, 0.5e-3)
		within(t, "u of "+c.name+" without correlations", Combine(c.c, u, independent), c.alone, 1e-9)
	}
}

// Fully correlated inputs add linearly (GUM 5.2.2, note 1), and what is subtracted cancels.
func TestFullyCorrelated(t *testing.T) {
	r := mat.NewSymDense(2, []float64{1, 1, 1, 1})
	within(t, "sum", Combine([]float64{1, 2}, []float64{3, 4}, r), 11, 1e-14)
	within(t, "difference", Combine([]float64{0.1, -0.3}, []float64{0.3, 0.1}, r), 0, 1e-8)
}

func TestImpossibleCorrelationsPanic(t *testing.T) {
	for name, f := range map[string]func(){
		"not positive semi-definite": func() {
			Combine([]float64{1, 1, 1}, []float64{1, 1, 1}, mat.NewSymDense(3, []float64{1, -1, -1, -1, 1, -1, -1, -1, 1}))
		},
		"two of three": func() { Combine([]float64{1, 1, 1}, []float64{1, 1, 1}, mat.NewSymDense(2, nil)) },
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
