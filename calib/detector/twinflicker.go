package detector

import (
	"math"
	"math/rand/v2"
)

// flicker is 1/f noise: white noise through first-order sections, each with a pole
// and, a quarter of a decade above it, a zero, the next section half a decade on.
// Their steps of −20 dB and 0 dB a decade run together into the −10 dB a decade of
// 1/√f. The power's ripple about that is, in ln f, a Fourier series of period
// L = ln √10 with first term ±2/sinh(π²/L) = ±0.076 %; poles a whole decade apart
// would leave ±5.5 %. Matched sections see sin a in place of a = πf/rate.
//
// The density is √(a/sin a) times what it should be, to 0.1 %, from 2e-4 of the
// sampling rate up: 1.3 % high at an eighth of the rate, 0.3 % at a sixteenth. At 1e-5
// of the rate it is 10 % low, and flat below. The noise starts from rest: what is
// slower than the run so far is not in it.
type flicker struct {
	random   *rand.Rand
	gain     float64
	sections [12]section // an even number
	samples  [block]float64
}

// section has a pole and a zero at pole and zero, 0 to 1, of z.
type section struct{ pole, zero, state float64 }

func newFlicker(density, rate float64, seed uint64) *flicker {
	f := &flicker{random: rand.New(rand.NewPCG(seed, flickerStream))}
	// Two sections in a decade, from 1e-5 of the rate to where no sine is any more.
	const lowest = 1e-5
	for k := range f.sections {
		w := math.Pi * lowest * math.Pow(10, float64(k)/2)
		f.sections[k] = section{pole: matched(w), zero: matched(w * math.Pow(10, 0.25))}
	}
	// Scaled far from both ends.
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
	for k := 0; k < len(f.sections); k += 2 {
		advance(&f.sections[k], &f.sections[k+1], noise)
	}
	for i, v := range noise {
		samples[i] += v
	}
}

// advance is two sections, which do not wait for each other.
func advance(s, r *section, noise []float64) {
	sPole, sZero, sState := s.pole, s.zero, s.state
	rPole, rZero, rState := r.pole, r.zero, r.state
	for i, v := range noise {
		next := sPole*sState + v
		w := next - sZero*sState
		sState = next
		next = rPole*rState + w
		noise[i] = next - rZero*rState
		rState = next
	}
	s.state, r.state = sState, rState
}
