package detector

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// The sum of the squared impulse response is twice the noise bandwidth over the rate. The bandwidths are those of the
// table of chains; the errors allowed are those of the chain's documentation, −u²/12 of one pole and u²/6 of more.
func TestTwinNoiseBandwidth(t *testing.T) {
	for _, c := range chains {
		for _, samples := range []float64{32, 100, 1000} {
			var filter chain
			filter.set(samples, c.poles, 0)
			x, y := make([]float64, int(60*samples)), make([]float64, int(60*samples))
			x[0], y[0] = 1, -2
			filter.advance(x, y)
			sumX, sumY := 0.0, 0.0
			for i := range x {
				sumX += x[i] * x[i]
				sumY += y[i] * y[i]
			}
			u2 := 1 / (samples * samples)
			low, high := 1.0, 1+u2/6
			if c.poles == 1 {
				low, high = 1-u2/12, 1
			}
			for _, sum := range []float64{sumX, sumY / 4} {
				share := sum * samples / 2 / c.noiseBandwidth
				if share < low-1e-12 || share > high+1e-12 {
					t.Errorf("%d poles of %g samples: bandwidth %.9f of the continuous chain's, want %.9f to %.9f",
						c.poles, samples, share, low, high)
				}
			}
		}
	}
}

// The response to e^j2πft after the transient. |H| lies between the continuous chain's and that times
// (a/sin a·sinh(u/2)/(u/2))ⁿ.
func TestTwinGain(t *testing.T) {
	const samples = 40.0
	for poles := 1; poles <= MaxPoles; poles++ {
		for _, ratio := range []float64{0, 1e-4, 0.002, 1 / samples, 1.0 / 16, 1.0 / 8, 0.25, 0.4} { // f/rate
			var filter chain
			filter.set(samples, poles, 0)
			x, y := make([]float64, 80*samples), make([]float64, 80*samples)
			for i := range x {
				y[i], x[i] = math.Sincos(2 * math.Pi * ratio * float64(i))
			}
			filter.advance(x, y)
			got := math.Hypot(x[len(x)-1], y[len(y)-1])
			want, a, half := Gain(ratio*samples, 1, poles), math.Pi*ratio, 1/(2*samples)
			most := math.Sinh(half) / half
			if ratio > 0 {
				most *= a / math.Sin(a)
			}
			most = want * math.Pow(most, float64(poles))
			if got < want*(1-1e-9)-2e-14 || got > most*(1+1e-9)+2e-14 {
				t.Errorf("%d poles, %g of the rate: |H| is %.9g, want %.9g to %.9g", poles, ratio, got, want, most)
			}
		}
	}
}

// |H| where f·T = 1, of the source of the table of chains; 1000 samples a time constant leave (π/1000)²/6 a pole.
func TestTwinGainTable(t *testing.T) {
	for i, want := range []float64{0.157176725, 0.0247045230, 0.00388297603, 0.000610313458} {
		s := TwinSettings{Frequency: 100e3, Harmonic: 1, TimeConstant: 1e-3, Poles: i + 1, Gain: 1}
		in := Input{Tones: []Tone{{Amplitude: 2, Frequency: 101e3}}}
		rate := 1.0618e6 // ripple of the sum, at 201 T⁻¹, falls on no period of the difference
		got := cmplx.Abs(line(in, s, rate, 1000)) / 2
		within(t, fmt.Sprintf("%d poles", i+1), got, want, 3e-6*float64(i+1)*want)
	}
}

// The samples after which a share of a step is missing are those of the table of chains: to 1e-4 of a time constant
// of an odd number of poles, half a sample late of an even one. 100 samples a time constant.
func TestTwinSettlingTable(t *testing.T) {
	const samples = 100
	for _, c := range chains {
		var filter chain
		filter.set(samples, c.poles, complex(0, 1))
		x, y := make([]float64, 40*samples), make([]float64, 40*samples)
		for i := range x {
			x[i] = 1
		}
		filter.advance(x, y)
		late := 0.0
		if c.poles%2 == 0 {
			late = 0.5 / samples
		}
		for i, r := range remainders {
			name := fmt.Sprintf("%d poles, left %.3g", c.poles, r)
			within(t, name+", rising", crossing(x, 1, r)/samples, c.settling[i]+late, 1e-4)
			within(t, name+", falling", crossing(y, 0, r)/samples, c.settling[i]+late, 1e-4)
		}
	}
}

// crossing is how many samples it takes until a share r of a step of 1 is left, with the logarithm of what is left
// interpolated between samples.
func crossing(v []float64, final, r float64) float64 {
	before := 1.0
	for i, now := range v {
		left := math.Abs(final - now)
		if left <= r {
			return float64(i) + math.Log(before/r)/math.Log(before/left)
		}
		before = left
	}
	return math.NaN()
}

// A reading is what it was before where the input stays, for any number of poles; and dc goes through as it is.
func TestTwinStays(t *testing.T) {
	for poles := 1; poles <= MaxPoles; poles++ {
		var filter chain
		filter.set(1e6, poles, complex(0.3, -0.7))
		for range 1000 {
			x, y := make([]float64, 1000), make([]float64, 1000)
			for i := range x {
				x[i], y[i] = 0.3, -0.7
			}
			filter.advance(x, y)
		}
		x, y := filter.output()
		within(t, fmt.Sprintf("%d poles: x", poles), x, 0.3, 1e-10*float64(poles))
		within(t, fmt.Sprintf("%d poles: y", poles), y, -0.7, 1e-10*float64(poles))
	}
}
