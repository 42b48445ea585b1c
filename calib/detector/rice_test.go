package detector

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"pgregory.net/rapid"
)

// polar integrates over the plane in which the signal lies on the axis and the noise of standard deviation 1
// is spread around its tip: by angle with the midpoint rule, which is exact for what is periodic, outwards by
// Gauss and Legendre. No Bessel function is used.
func polar(s float64, f func(r, cosine float64) float64) float64 {
	const angles, radii = 800, 100
	return quad.Fixed(func(r float64) float64 {
		sum := 0.0
		for i := range angles {
			a := (float64(i) + 0.5) / angles * math.Pi
			half := math.Sin(a / 2)
			sum += f(r, math.Cos(a)) * r * math.Exp(-(r-s)*(r-s)/2-2*r*s*half*half)
		}
		return sum / angles // twice the half plane, over 2π
	}, max(0, s-10), s+10, radii, quad.Legendre{}, 1)
}

func TestRiceIsTheIntegral(t *testing.T) {
	const sigma = 3e-9
	for _, s := range []float64{0, 0.01, 0.5, 1, 2, 5, 10.9, 11, 29.9, 30.1, 40} { // the formulas change at √120 and 30
		name := fmt.Sprintf("signal of %g deviations: ", s)
		m := polar(s, func(r, _ float64) float64 { return r })
		slope := polar(s, func(r, cosine float64) float64 { return r * (r*cosine - s) })
		variance := polar(s, func(r, _ float64) float64 { return (r - m) * (r - m) })
		mean, got := RiceMean(s*sigma, sigma)
		within(t, name+"mean", mean/sigma, m, 1e-13*m)
		within(t, name+"slope", got, slope, 1e-12)
		within(t, name+"variance", RiceVariance(s*sigma, sigma)/(sigma*sigma), variance, 1e-12)
	}
}

func TestRiceLimits(t *testing.T) {
	// No signal: the Rayleigh distribution, mean σ√(π/2) and variance (2 − π/2)σ² (common practice).
	mean, slope := RiceMean(0, 2)
	within(t, "Rayleigh mean", mean, 2*math.Sqrt(math.Pi/2), 1e-15)
	within(t, "Rayleigh slope", slope, 0, 0)
	within(t, "Rayleigh variance", RiceVariance(0, 2), 4*(2-math.Pi/2), 1e-14)

	// A signal that equals the noise's standard deviation reads 55 % high.
	mean, _ = RiceMean(1, 1)
	within(t, "as strong as the noise", mean-1, 0.55, 0.005)

	// A strong signal reads high by σ²/2s, in first order: the next term is 1/4 of (σ/s)² of that.
	mean, slope = RiceMean(50, 1)
	within(t, "strong", (mean-50)*2*50, 1, 0.3/2500)
	within(t, "strong slope", (1-slope)*2*2500, 1, 1.0/2500)
	within(t, "strong variance", RiceVariance(1e6, 2), 4, 1e-11)

	// Beyond what noise can move, and without any.
	for _, sigma := range []float64{0, 1e-20} {
		for _, s := range []float64{1, -1} {
			mean, slope = RiceMean(s, sigma)
			within(t, "mean without noise", mean, 1, 0)
			within(t, "slope without noise", slope, s, 0)
		}
	}
	within(t, "variance without noise", RiceVariance(1, 0), 0, 0)
}

// The mean is even in the signal, its slope odd, both scale with signal and noise together; the slope is that
// of the mean, and where the signal is strong the closed form runs into |s|.
func TestRiceProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := math.Pow(10, rapid.Float64Range(-4, 8).Draw(t, "log s/σ"))
		unit := math.Pow(10, rapid.Float64Range(-12, 3).Draw(t, "log σ"))
		m, slope := RiceMean(s, 1)
		minus, minusSlope := RiceMean(-s, 1)
		if minus != m || minusSlope != -slope {
			t.Fatalf("%g: %g and %g, at -%g: %g and %g", s, m, slope, s, minus, minusSlope)
		}
		scaled, scaledSlope := RiceMean(s*unit, unit)
		if math.Abs(scaled/unit-m) > 1e-14*m || math.Abs(scaledSlope-slope) > 1e-14 {
			t.Fatalf("%g: %v and %v, times %g: %v and %v", s, m, slope, unit, scaled, scaledSlope)
		}
		if m < math.Max(s, math.Sqrt(math.Pi/2))*(1-1e-15) || m > math.Sqrt(s*s+2)*(1+1e-15) {
			t.Fatalf("%g: the mean %v is below the signal's or the noise's own, or above the root mean square", s, m)
		}
		h := 1e-5 * math.Max(1, s)
		above, _ := RiceMean(s+h, 1)
		below, _ := RiceMean(s-h, 1)
		if math.Abs((above-below)/(2*h)-slope) > 1e-9 {
			t.Fatalf("%g: slope %v, by difference %v", s, slope, (above-below)/(2*h))
		}
	})
}

// The power series gives way to the asymptotic one at x = s²/4σ² = 30, and that to |s| at 1e16.
func TestRiceIsContinuous(t *testing.T) {
	for _, s := range []float64{math.Sqrt(120), 2e8} {
		below, slopeBelow := RiceMean(s*(1-1e-15), 1)
		above, slopeAbove := RiceMean(s*(1+1e-15), 1)
		within(t, fmt.Sprintf("mean at %g deviations", s), above, below, 5e-15*s)
		within(t, fmt.Sprintf("slope at %g deviations", s), slopeAbove, slopeBelow, 5e-15)
	}
}

// Whatever the ratio of signal and noise, nothing overflows or is 0/0 on the way.
func TestRiceIsFinite(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sigma := math.Pow(10, rapid.Float64Range(-300, 300).Draw(t, "log σ"))
		s := math.Pow(10, rapid.Float64Range(-300, 300).Draw(t, "log s"))
		if rapid.Bool().Draw(t, "no signal") {
			s = 0
		}
		mean, slope := RiceMean(s, sigma)
		lowest, highest := math.Max(s, sigma*math.Sqrt(math.Pi/2)), math.Hypot(s, sigma*math.Sqrt2)
		if !(mean >= lowest*(1-1e-14) && mean <= highest*(1+1e-14) && slope >= 0 && slope <= 1) {
			t.Fatalf("s %g, σ %g: mean %g, slope %g", s, sigma, mean, slope)
		}
		sigma = math.Sqrt(sigma) // a float64 holds its variance
		if share := RiceVariance(s, sigma) / (sigma * sigma); !(share > 2-math.Pi/2-1e-14 && share <= 1+1e-14) {
			t.Fatalf("s %g, σ %g: variance %g σ²", s, sigma, share)
		}
	})
}
