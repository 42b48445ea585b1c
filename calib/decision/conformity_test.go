package decision

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func within(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.17g, want %.17g within %g", what, got, want, tolerance)
	}
}

var inf = math.Inf(1)

// The examples of JCGM 106:2012, clause 7: inputs and print from memory, p_c recomputed in Python to 12 digits.
func TestConformityExamples(t *testing.T) {
	zener := Conformity(-5.47, 0.05, -inf, -5.40) // breakdown voltage, V
	within(t, "Zener diode, as printed", zener, 0.92, 0.005)
	within(t, "Zener diode", zener, 0.919243340766, 1e-12)
	container := Conformity(507, 8, 490, inf) // bursting pressure, kPa
	within(t, "metal container, as printed", container, 0.98, 0.005)
	within(t, "metal container", container, 0.983206693552, 1e-12)
}

// JCGM 106:2012, table 1: how far within a single limit a probability of conformity
// wants the estimate. Print from memory; more digits by mpmath 1.3.0.
func TestConformityTable1(t *testing.T) {
	for _, c := range []struct{ p, printed, z float64 }{
		{0.80, 0.84, 0.84162123357291},
		{0.90, 1.28, 1.2815515655446},
		{0.95, 1.64, 1.6448536269515},
		{0.99, 2.33, 2.3263478740408},
		{0.999, 3.09, 3.0902323061678},
	} {
		within(t, "printed z", c.z, c.printed, 0.005)
		within(t, "upper limit", Conformity(7-c.z*0.5, 0.5, -inf, 7), c.p, 1e-13)
		within(t, "lower limit", Conformity(7+c.z*0.5, 0.5, 7, inf), c.p, 1e-13)
	}
}

// By mpmath 1.3.0 with 40 digits, relative to the result: far tails and a tolerance much narrower than u.
func TestConformityDigits(t *testing.T) {
	for _, c := range []struct{ e, u, lower, upper, p, bad float64 }{
		{0, 1, 8, 9, 6.2198319858658303e-16, 0.99999999999999938},
		{0, 1, -9, -8, 6.2198319858658303e-16, 0.99999999999999938},
		{0, 1, -1e-6, 1e-6, 7.9788456080273238e-7, 0.9999992021154392},
		{20, 1, -10, 10, 7.6198530241605261e-24, 1},
		{0.2, 0.3, -0.1, 1.5, 0.84133740264470605, 0.15866259735529395},
	} {
		within(t, "p_c", Conformity(c.e, c.u, c.lower, c.upper)/c.p, 1, 1e-13)
		within(t, "1 − p_c", nonconformity(c.e, c.u, c.lower, c.upper)/c.bad, 1, 1e-13)
	}
	within(t, "1 − p_c in the tail", Accepting(0, 1, 10)/(2*7.6198530241605261e-24), 1, 1e-13)
}

// Without uncertainty a detector is good or bad; on the limit it is good, as equality passes.
func TestConformityWithoutUncertainty(t *testing.T) {
	for _, c := range []struct{ e, lower, upper, want float64 }{
		{0, -1, 1, 1}, {1, -1, 1, 1}, {-1, -1, 1, 1}, {math.Nextafter(1, 2), -1, 1, 0}, {-1.5, -1, 1, 0},
		{1, 1, 1, 1}, {2, 1, 1, 0}, {5, -inf, inf, 1}, {5, 5, inf, 1}, {5, -inf, 4, 0},
	} {
		if got := Conformity(c.e, 0, c.lower, c.upper); got != c.want {
			t.Errorf("%g from %g to %g: %g, want %g", c.e, c.lower, c.upper, got, c.want)
		}
		if got := nonconformity(c.e, 0, c.lower, c.upper); got != 1-c.want {
			t.Errorf("%g from %g to %g: not conforming %g, want %g", c.e, c.lower, c.upper, got, 1-c.want)
		}
	}
}

func TestConformityUndefined(t *testing.T) {
	for _, c := range [][4]float64{{math.NaN(), 1, -1, 1}, {0, math.NaN(), -1, 1}, {0, 1, math.NaN(), 1}, {0, 1, -1, math.NaN()}, {math.NaN(), 0, -1, 1}} {
		if got := Conformity(c[0], c[1], c[2], c[3]); !math.IsNaN(got) {
			t.Errorf("%v: %g, want NaN", c, got)
		}
	}
	panics(t, "a negative uncertainty", func() { Within(0, -1, 1) })
	panics(t, "a negative limit", func() { Within(0, 1, -1) })
}

func panics(t *testing.T, what string, f func()) {
	t.Helper()
	defer func() {
		if recover() == nil {
			t.Errorf("%s: no panic", what)
		}
	}()
	f()
}

// A probability, of a good one or of a bad one, the same for both signs, larger
// with a wider limit and smaller with a larger error.
func TestConformityProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		limit := rapid.Float64Range(0, 10).Draw(t, "limit")
		u := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(1e-3, 20)).Draw(t, "u")
		e := rapid.Float64Range(0, 30).Draw(t, "e")
		good := Within(e, u, limit)
		if good < 0 || good > 1 || Rejecting(e, u, limit) != good {
			t.Fatalf("p_c %g", good)
		}
		if sum := good + Accepting(e, u, limit); math.Abs(sum-1) > 1e-15 {
			t.Fatalf("p_c and 1 − p_c add up to 1%+g", sum-1)
		}
		if minus := Within(-e, u, limit); minus != good {
			t.Fatalf("p_c %g, of the opposite error %g", good, minus)
		}
		if wider := Within(e, u, limit+rapid.Float64Range(0, 5).Draw(t, "wider by")); wider < good-1e-15 {
			t.Fatalf("p_c %g, within a wider limit %g", good, wider)
		}
		if larger := Within(e+rapid.Float64Range(0, 5).Draw(t, "larger by"), u, limit); larger > good+1e-15 {
			t.Fatalf("p_c %g, of a larger error %g", good, larger)
		}
	})
}
