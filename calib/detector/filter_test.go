package detector

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func within(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g", what, got, want)
	}
}

// The shares of a step that are still missing; the first column of settling times in the
// table below is to 1 − 1/e, printed there as 63.21 %.
var remainders = [6]float64{1 / math.E, 0.1, 0.05, 0.01, 0.001, 0.0001}

// Chains of n equal low-pass poles: noise bandwidth and cutoff by the integral of |H|², settling by the quantiles of
// Gamma(n, 1); recomputed by quadrature. Bandwidth and cutoff in 1/T, settling in T.
var chains = []struct {
	poles                         int
	noiseBandwidth, cutoff, ratio float64
	settling                      [6]float64
}{
	{1, 1.0 / 4, 0.159154943, 1.570796, [6]float64{1.000000, 2.302585, 2.995732, 4.605170, 6.907755, 9.210340}},
	{2, 1.0 / 8, 0.102431207, 1.220331, [6]float64{2.146193, 3.889720, 4.743865, 6.638352, 9.233413, 11.756371}},
	{3, 3.0 / 32, 0.0811410938, 1.155395, [6]float64{3.258252, 5.322320, 6.295794, 8.405947, 11.228872, 13.928171}},
	{4, 5.0 / 64, 0.0692291283, 1.128499, [6]float64{4.351993, 6.680783, 7.753657, 10.045118, 13.062241, 15.913814}},
	{5, 35.0 / 512, 0.0613724151, 1.113845, [6]float64{5.434093, 7.993590, 9.153519, 11.604626, 14.794149, 17.782007}},
	{6, 63.0 / 1024, 0.0556956006, 1.104637, [6]float64{6.507996, 9.274674, 10.513035, 13.108484, 16.454745, 19.567202}},
	{8, 429.0 / 8192, 0.0478809738, 1.093716, [6]float64{8.638625, 11.770914, 13.148114, 15.999963, 19.626177, 22.962450}},
}

func TestChains(t *testing.T) {
	for _, c := range chains {
		for _, tau := range []float64{1, 0.3} {
			name := fmt.Sprintf("%d poles of %g s: ", c.poles, tau)
			b, f := NoiseBandwidth(tau, c.poles), Cutoff(tau, c.poles)
			within(t, name+"noise bandwidth", b*tau, c.noiseBandwidth, 1e-14)
			within(t, name+"cutoff", f*tau, c.cutoff, 0.5e-9)
			within(t, name+"their ratio", b/f, c.ratio, 0.5e-6)
			within(t, name+"gain at cutoff", Gain(f, tau, c.poles), math.Sqrt(0.5), 1e-14)
			for i, r := range remainders {
				within(t, fmt.Sprintf("%sleft %.3g", name, r), Settling(tau, c.poles, r)/tau, c.settling[i], 0.5e-6)
			}
		}
	}
}

// |H| at f = 1/T, of the same source as the chains.
func TestGain(t *testing.T) {
	for i, want := range []float64{0.157176725, 0.0247045230, 0.00388297603, 0.000610313458} {
		within(t, fmt.Sprintf("%d poles", i+1), Gain(0.5, 2, i+1), want, 0.5e-8*want)
	}
	for n := 1; n <= MaxPoles; n++ {
		if got := Gain(0, 1, n); got != 1 {
			t.Errorf("%d poles: a steady signal comes out %g of itself", n, got)
		}
	}
}

// The noise of a resistor of 1 kΩ at 300 K, 4.070355 nV/√Hz, through four poles of 1 s: 1.137699 nV rms.
func TestNoiseThroughFourPoles(t *testing.T) {
	density := math.Sqrt(4 * 1.380649e-23 * 300 * 1000) // k is exact in the SI of 2019
	within(t, "density", density, 4.070355e-9, 0.5e-15)
	within(t, "noise", density*math.Sqrt(NoiseBandwidth(1, 4)), 1.137699e-9, 0.5e-15)
}

// The noise bandwidth is the integral of |H|². With 2πfT = tan a the integrand is smooth and periodic, so the
// midpoint rule is exact to rounding.
func TestNoiseBandwidthIsTheIntegral(t *testing.T) {
	const tau, n = 0.1, 200
	for poles := 1; poles <= MaxPoles; poles++ {
		sum := 0.0
		for i := range n {
			a := (float64(i) + 0.5) / n * math.Pi / 2
			h, c := Gain(math.Tan(a)/(2*math.Pi*tau), tau, poles), math.Cos(a)
			sum += h * h / (c * c * 2 * math.Pi * tau) * math.Pi / 2 / n
		}
		within(t, fmt.Sprintf("%d poles", poles), NoiseBandwidth(tau, poles), sum, 1e-12*sum)
	}
}

// The step response of n equal poles leaves e^−x·(1 + x + x²/2! + … + x^(n−1)/(n−1)!), x = t/T: the
// inverse Laplace transform of 1/(s(1 + sT)ⁿ), found in every table of them.
func TestSettlingLeavesTheRemainder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		tau := math.Pow(10, rapid.Float64Range(-5, 4).Draw(t, "log T"))
		poles := rapid.IntRange(1, MaxPoles).Draw(t, "poles")
		remainder := math.Pow(10, rapid.Float64Range(-12, -0.001).Draw(t, "log remainder"))
		x := Settling(tau, poles, remainder) / tau
		sum, term := 0.0, 1.0
		for k := 1; k <= poles; k++ {
			sum += term
			term *= x / float64(k)
		}
		if left := math.Exp(-x) * sum; math.Abs(left-remainder) > 1e-9*remainder {
			t.Fatalf("%g time constants of %d poles leave %g, want %g", x, poles, left, remainder)
		}
	})
}

func TestAllRemainsAtOnce(t *testing.T) {
	for _, remainder := range []float64{1, 1.5} {
		if got := Settling(1, 2, remainder); got != 0 {
			t.Errorf("%g s until %g of the step remains", got, remainder)
		}
	}
}

func TestImpossibleFiltersPanic(t *testing.T) {
	for name, call := range map[string]func(){
		"no poles":           func() { NoiseBandwidth(1, 0) },
		"nine poles":         func() { Cutoff(1, 9) },
		"no time constant":   func() { Gain(1, 0, 1) },
		"not a number":       func() { Settling(math.NaN(), 1, 0.1) },
		"settled to nothing": func() { Settling(1, 1, 0) },
		"less than nothing":  func() { Settling(1, 1, -0.1) },
		"a deviation below 0": func() {
			RiceMean(1, -1)
		},
		"a deviation below 0, variance": func() { RiceVariance(1, -1) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
}
