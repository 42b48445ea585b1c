package detector

import (
	"fmt"
	"math"
	"testing"
)

// I0 and I1, of which Abramowitz and Stegun's Table 9.8 gives e^−x times as much; the digits by their 9.6.10 in
// Python's decimal numbers, 40 places.
func TestBesselTable(t *testing.T) {
	for _, c := range []struct{ x, i0, i1 float64 }{
		{0, 1, 0},
		{0.5, 1.063483370741323519, 0.257894305390896316},
		{1, 1.266065877752008335, 0.565159103992485027},
		{2, 2.279585302336067267, 1.590636854637329063},
		{5, 27.23987182360444689, 24.33564214245052719},
		{10, 2815.716628466254471, 2670.988303701254654},
	} {
		i0, i1 := scaledBessel(c.x)
		within(t, fmt.Sprintf("I0(%g)", c.x), i0*math.Exp(c.x), c.i0, 2e-15*c.i0)
		within(t, fmt.Sprintf("I1(%g)", c.x), i1*math.Exp(c.x), c.i1, 2e-15*c.i1)
	}
}

// Abramowitz and Stegun 9.6.16: I0(x) = 1/π ∫ e^(x cos θ) dθ from 0 to π, and 9.6.18: I1(x) = x/π ∫ e^(x cos θ) sin² θ dθ.
// The integrands are periodic, so the midpoint rule is exact to rounding. 30 is where one series takes over from the other.
func TestBesselIsTheIntegral(t *testing.T) {
	const n = 2000
	for _, x := range []float64{1e-6, 0.1, 1, 3, 10, 20, 29.999, 30, 30.001, 40, 100, 1000, 1e4} {
		sum0, sum1 := 0.0, 0.0
		for i := range n {
			a := (float64(i) + 0.5) / n * math.Pi
			half, sine := math.Sin(a/2), math.Sin(a)
			e := math.Exp(-2*x*half*half) / n // e^(x(cos θ − 1)) without cancellation
			sum0 += e
			sum1 += x * sine * sine * e
		}
		i0, i1 := scaledBessel(x)
		within(t, fmt.Sprintf("I0(%g)", x), i0, sum0, 1e-14*sum0)
		within(t, fmt.Sprintf("I1(%g)", x), i1, sum1, 1e-14*sum1)
	}
}
