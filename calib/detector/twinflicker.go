package detector

import (
	"math"
	"math/rand/v2"
)

// flicker is 1/f noise: white noise through first-order sections, each with a pole
// and, a quarter of a decade above it, a zero, the next section half a decade on.
// Their steps of −20 dB and 0 dB a decade run together into the −10 dB a decade of
// 1/√f. The power's ripple about that is the first term of a Fourier series in
// ln f of period L = ln √10, ±2/sinh(π²/L) = ±0.076 %; poles a whole decade apart
// would leave ±5.5 %. The lowest pole is at 1e-5 of the sampling rate, below which
// the noise is flat. Matched sections see sin(πf/rate)·rate/π in place of f: the
// density is high by a quarter of (πf/rate)²/3: 1.3 % at an eighth of the rate.
//
// The noise starts from rest: what is slower than the run so far is not in it.
type flicker struct {
	random   *rand.Rand
	gain     float64
	sections []section
	samples  [block]float64
}

// section has a pole and a zero at pole and zero, 0 to 1, of z.
type section struct{ pole, zero, state float64 }

func newFlicker(density, rate float64, seed uint64) *flicker {
	const lowest, highest = 1e-5, 10 // highest: in units of rate/π, where no sine is any more
	f := &flicker{random: rand.New(rand.NewPCG(seed, flickerStream))}
	ratio := math.Sqrt(10)
	for w := math.Pi * lowest; w < highest; w *= ratio {
		f.sections = append(f.sections, section{pole: matched(w), zero: matched(w * math.Sqrt(ratio))})
	}
	// Scaled where the ends are farthest.
	middle := rate * lowest * 100
	f.gain = density / math.Sqrt(middle) * math.Sqrt(rate/2) / f.response(middle/rate)
	return f
}

// matched is the z at which a first-order section has its corner at sin(πf/rate) = w:
// |1 − z·e^−jθ|² = (1 − z)²·(1 + sin²(θ/2)/w²) with w = (1 − z)/2√z.
func matched(w float64) float64 {
	root := math.Hypot(1, w) - w
	return root * root
}

// response is the sections' |H| at f/rate.
func (f *flicker) response(ratio float64) float64 {
	h, sine := 1.0, math.Sin(math.Pi*ratio)
	for _, s := range f.sections {
		pole, zero := 1-s.pole, 1-s.zero
		h *= (zero*zero + 4*s.zero*sine*sine) / (pole*pole + 4*s.pole*sine*sine)
	}
	return math.Sqrt(h)
}

func (f *flicker) addTo(samples []float64) {
	noise := f.samples[:len(samples)]
	for i := range noise {
		noise[i] = f.gain * f.random.NormFloat64()
	}
	for k := range f.sections {
		f.sections[k].advance(noise)
	}
	for i, v := range noise {
		samples[i] += v
	}
}

func (s *section) advance(noise []float64) {
	pole, zero, state := s.pole, s.zero, s.state
	for i, v := range noise {
		next := pole*state + v
		noise[i] = next - zero*state
		state = next
	}
	s.state = state
}
