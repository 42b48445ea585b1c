package uncertainty

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// In these tests a million trials stand against exact results, so each figure scatters; the tolerances are four of its
// standard deviations, found from 24 repetitions with other seeds or from the density there. Where a printed interval is itself the outcome of
// one simulation, the print scatters too: its tolerance is half a digit and √2 times as much.
const trials = 1_000_000

// JCGM 101, 9.2.2 to 9.2.4, tables 2 to 4: the sum of four inputs. Exact figures are analytic or by exact convolution.
func TestS1AdditiveModel(t *testing.T) {
	normal, rectangular := input{Normal, 0, 1, 0}, input{Rectangular, 0, 1, 0}
	for i, c := range []struct {
		clause    string
		inputs    [4]input
		u, end    float64
		linear    float64 // of the linear propagation
		printed   float64 // print of the end
		validated bool
	}{
		{"9.2.2", [4]input{normal, normal, normal, normal}, 2, 3.919927969080, 3.92, 3.92, true},
		{"9.2.3", [4]input{rectangular, rectangular, rectangular, rectangular}, 2, 3.879406741348, 3.92, 3.88, true},
		{"9.2.4", [4]input{rectangular, rectangular, rectangular, {Rectangular, 0, 10, 0}}, math.Sqrt(103), 17.015814100, 19.891461951, 17.0, false},
	} {
		s := Summarise(simulate(trials, uint64(i), func(rng *rand.Rand) float64 {
			sum := 0.0
			for _, in := range c.inputs {
				sum += in.draw(rng)
			}
			return sum
		}), 0.95)
		within(t, c.clause+" exact as printed", c.end, c.printed, 0.05)
		within(t, c.clause+" estimate", s.Mean, 0, 4*c.u/1e3)
		relative(t, c.clause+" u", s.SD, c.u, 4*0.71e-3)
		within(t, c.clause+" low", s.Symmetric.Low, -c.end, 4*0.0055)
		within(t, c.clause+" high", s.Symmetric.High, c.end, 4*0.0055)
		relative(t, c.clause+" shortest", s.Shortest.High-s.Shortest.Low, 2*c.end, 4*0.7e-3)
		v := Validate(0, c.linear, s.Symmetric, Tolerance(c.u, 2))
		if v.Validated != c.validated {
			t.Errorf("%s: %+v, the supplement's tables say %v", c.clause, v, c.validated)
		}
	}
}

// JCGM 101, 9.3, table 6: the mass of a weight, in mg, print from memory; exact figures by quadrature.
func TestS1MassCalibration(t *testing.T) {
	reference, small := input{Normal, 100_000, 0.050, 0}, input{Normal, 1.234, 0.020, 0}
	air, weight, standard := between(1.10, 1.30), between(7000, 9000), between(7950, 8050)
	s := Summarise(simulate(trials, 93, func(rng *rand.Rand) float64 {
		buoyancy := (air.draw(rng) - 1.2) * (1/weight.draw(rng) - 1/standard.draw(rng))
		return (reference.draw(rng)+small.draw(rng))*(1+buoyancy) - 100_000
	}), 0.95)
	within(t, "estimate", s.Mean, 1.2340, 4*0.08e-3)
	within(t, "u, printed", s.SD, 0.0754, 0.05e-3+4*0.055e-3*math.Sqrt2)
	within(t, "u", s.SD, 0.0754797400, 4*0.055e-3)
	within(t, "shortest, low, printed", s.Shortest.Low, 1.0834, 0.0015)
	within(t, "shortest, high, printed", s.Shortest.High, 1.3825, 0.0015)
	within(t, "shortest, low", s.Shortest.Low, 1.0844332597, 4*0.61e-3)
	within(t, "shortest, high", s.Shortest.High, 1.3835667403, 4*0.61e-3)
	within(t, "symmetric, low", s.Symmetric.Low, 1.0844332597, 4*0.23e-3) // the distribution is symmetric
	within(t, "symmetric, high", s.Symmetric.High, 1.3835667403, 4*0.23e-3)
}

// JCGM 101, 9.4, tables 8 and 9: comparison loss X1² + X2² in 10⁻⁶, X1 about x1, X2 about 0, both of standard
// uncertainty 0.005; print from memory. Without correlation it is 25 times a non-central χ² of 2 degrees of freedom,
// and the figures are exact; with r = 0.9 they are of 2·10⁷ trials or more with numpy 1.24.
func TestS1ComparisonLoss(t *testing.T) {
	type figures struct{ mean, u, low, high float64 } // low and high: shortest interval
	for i, c := range []struct {
		x1, r          float64
		want, sd       figures
		printed        figures
		symmetric, sdS Interval // none with correlation
	}{
		{0, 0, figures{50, 50, 0, 149.787}, figures{0.058, 0.07, 1e-4, 0.22}, figures{50, 50, 0, 150}, Interval{1.266, 184.444}, Interval{0.007, 0.28}},
		{0.010, 0, figures{150, 111.803, 0, 366.005}, figures{0.11, 0.13, 1e-3, 0.45}, figures{150, 112, 0, 367}, Interval{8.547, 427.123}, Interval{0.061, 0.56}},
		{0.050, 0, figures{2550, 502.494, 1593.57, 3548.57}, figures{0.5, 0.46, 4.8, 4.3}, figures{2551, 502, 1590, 3543}, Interval{1638.48, 3603.36}, Interval{1.1, 1.8}},
		{0, 0.9, figures{50, 67.27, 0, 185.0}, figures{0.08, 0.15, 1e-4, 0.35}, figures{50, 67, 0, 185}, Interval{}, Interval{}},
		{0.010, 0.9, figures{150, 120.52, 12.7, 397.4}, figures{0.12, 0.21, 0.39, 0.83}, figures{150, 121, 13, 398}, Interval{}, Interval{}},
		{0.050, 0.9, figures{2550, 504.50, 1624, 3554}, figures{0.5, 0.49, 3.8, 4.4}, figures{2551, 505, 1628, 3555}, Interval{}, Interval{}},
	} {
		s := Summarise(simulate(trials, 940+uint64(i), func(rng *rand.Rand) float64 {
			a, b := rng.NormFloat64(), rng.NormFloat64()
			x1, x2 := c.x1+0.005*a, 0.005*(c.r*a+math.Sqrt(1-c.r*c.r)*b)
			return (x1*x1 + x2*x2) * 1e6
		}), 0.95)
		got := figures{s.Mean, s.SD, s.Shortest.Low, s.Shortest.High}
		name := fmt.Sprintf("x1 = %g, r = %g: ", c.x1, c.r)
		check := func(what string, got, want, printed, sd float64) {
			within(t, name+what, got, want, 4*sd)
			within(t, name+what+", printed", got, printed, 0.5+4*math.Sqrt2*sd)
		}
		check("estimate", got.mean, c.want.mean, c.printed.mean, c.sd.mean)
		check("u", got.u, c.want.u, c.printed.u, c.sd.u)
		check("low", got.low, c.want.low, c.printed.low, c.sd.low)
		check("high", got.high, c.want.high, c.printed.high, c.sd.high)
		if c.r == 0 {
			within(t, name+"symmetric, low", s.Symmetric.Low, c.symmetric.Low, 4*c.sdS.Low)
			within(t, name+"symmetric, high", s.Symmetric.High, c.symmetric.High, 4*c.sdS.High)
		}
		// The linear propagation, y = x1², u = 2·x1·0.005, is validated in none of these.
		if v := Validate(c.x1*c.x1*1e6, 1.96*2*c.x1*0.005*1e6, s.Shortest, Tolerance(s.SD, 2)); v.Validated {
			t.Errorf("%s%+v", name, v)
		}
	}
}

// JCGM 101, 9.5, tables 10 and 11: the gauge block of GUM H.1, in nm; inputs and print from memory. The print is
// estimate 838, u 36, 99 % [745, 932]; 2·10⁷ trials with numpy 1.24 gave 837.99, 35.80, [744.3, 931.7].
func TestS1GaugeBlock(t *testing.T) {
	// A rectangle whose limits a, b are known to ±d only (6.4.3.4).
	inexact := func(a, b, d float64, rng *rand.Rand) float64 {
		low := a - d + 2*d*rng.Float64()
		return low + (a+b-2*low)*rng.Float64()
	}
	length := input{Student, 50_000_623, 25, 18}
	difference, d1, d2 := input{Student, 215, 6, 24}, input{Student, 0, 4, 5}, input{Student, 0, 7, 8}
	expansion, mean, cycle := between(9.5e-6, 13.5e-6), input{Normal, -0.1, 0.2, 0}, input{Arcsine, 0, 0.5 / math.Sqrt2, 0}
	s := Summarise(simulate(trials, 95, func(rng *rand.Rand) float64 {
		ls := length.draw(rng)
		theta := mean.draw(rng) + cycle.draw(rng)
		thermal := inexact(-1e-6, 1e-6, 0.1e-6, rng)*theta + expansion.draw(rng)*inexact(-0.050, 0.050, 0.025, rng)
		return ls + difference.draw(rng) + d1.draw(rng) + d2.draw(rng) - ls*thermal - 50_000_000
	}), 0.99)
	within(t, "estimate", s.Mean, 837.99, 4*0.036)
	within(t, "u", s.SD, 35.80, 4*0.03)
	within(t, "low", s.Symmetric.Low, 744.3, 4*0.17)
	within(t, "high", s.Symmetric.High, 931.7, 4*0.17)
}
