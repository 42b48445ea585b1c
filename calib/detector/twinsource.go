package detector

import (
	"math"
	"math/rand/v2"
)

// Tone is a sine: √2·Amplitude·sin(2π·Frequency·t + Phase).
type Tone struct {
	Amplitude float64 // V rms
	Frequency float64 // Hz
	Phase     float64 // at the first sample, rad
}

// Input is what comes to the detector's input.
type Input struct {
	Tones   []Tone  // the wanted signal, its harmonics, mains and mains' harmonics
	DC      float64 // V
	White   float64 // density of white noise, V/√Hz
	Flicker float64 // density of 1/f noise at 1 Hz, V/√Hz; at f it is Flicker/√f
}

// Source samples an Input. White noise has its density from 0 up to half the
// sampling rate: normal, of variance density²·rate/2.
type Source struct {
	rate    float64 // samples a second
	dc      float64
	tones   []rotation
	peaks   []float64 // of the tones, V
	white   *rand.Rand
	sigma   float64 // of the white noise's samples, V
	flicker *flicker
}

// The streams of random numbers that a seed gives.
const (
	whiteStream = iota + 1
	flickerStream
	stabilityStream
)

// NewSource samples an input at a rate in Hz, as by SamplingRate. A seed gives the
// same noise always.
func NewSource(in Input, rate float64, seed uint64) *Source {
	if !(rate > 0) || !(in.White >= 0) || !(in.Flicker >= 0) {
		panic("detector: a source has a rate above zero and noise that is not negative")
	}
	s := &Source{rate: rate, dc: in.DC, tones: make([]rotation, len(in.Tones)), peaks: make([]float64, len(in.Tones))}
	for i, t := range in.Tones {
		if !(2*math.Abs(t.Frequency) < rate) {
			panic("detector: a source takes more than two samples a period of each tone")
		}
		s.tones[i].set(t.Frequency/rate, t.Phase)
		s.peaks[i] = math.Sqrt2 * t.Amplitude
	}
	if in.White > 0 {
		s.white = rand.New(rand.NewPCG(seed, whiteStream))
		s.sigma = in.White * math.Sqrt(rate/2)
	}
	if in.Flicker > 0 {
		s.flicker = newFlicker(in.Flicker, rate, seed)
	}
	return s
}

// Fill is the input's next samples, V.
func (s *Source) Fill(samples []float64) {
	for len(samples) > 0 {
		n := min(len(samples), block)
		s.fill(samples[:n])
		samples = samples[n:]
	}
}

func (s *Source) fill(samples []float64) {
	for i := range samples {
		samples[i] = s.dc
	}
	for i := range s.tones {
		s.tones[i].addTo(samples, s.peaks[i])
	}
	if s.white != nil {
		for i := range samples {
			samples[i] += s.sigma * s.white.NormFloat64()
		}
	}
	if s.flicker != nil {
		s.flicker.addTo(samples)
	}
}

// SamplingRate is a rate, in Hz, that serves a detector's twin and its input: more
// than 8 samples a period of the harmonic that is mixed with and of every tone, and
// more than 32 a time constant. It is never in a simple ratio to that harmonic, so
// what clipping makes of it above half the rate does not fold back onto it.
func SamplingRate(in Input, s TwinSettings) float64 {
	check(s.TimeConstant, s.Poles)
	f := s.Frequency * float64(s.Harmonic)
	if !(f > 0) {
		panic("detector: a twin's reference has a frequency above zero and a harmonic of 1 or more")
	}
	needed := max(8*f, 32/s.TimeConstant)
	for _, t := range in.Tones {
		needed = max(needed, 8*math.Abs(t.Frequency))
	}
	// The golden section is the number that simple fractions come least close to.
	return f * (math.Ceil(needed/f) + 1/math.Phi)
}
