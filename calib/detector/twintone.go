package detector

import "math"

// block is how many samples are worked on at a time; what that takes stays in
// the processor's nearest memory.
const block = 256

// rotation is e^j(2π·ν·k + phase) for one sample after another: the turns within a
// block from a table, those from block to block by adding up the phase, whose
// rounding is 1e-16 of a turn a block. Two rotations of equal ν stay together.
type rotation struct {
	step     float64 // ν, turns a sample
	phase    float64 // of the next block's first sample, turns, 0 to 1
	cos, sin [block]float64
}

func (r *rotation) set(step, phase float64) {
	r.step = step
	r.phase = phase / (2 * math.Pi)
	r.phase -= math.Floor(r.phase)
	for k := range block {
		turns := step * float64(k)
		r.sin[k], r.cos[k] = math.Sincos(2 * math.Pi * (turns - math.Floor(turns)))
	}
}

// advance is sine and cosine at the first of the next n samples, n up to block.
func (r *rotation) advance(n int) (sine, cosine float64) {
	sine, cosine = math.Sincos(2 * math.Pi * r.phase)
	r.phase += r.step * float64(n)
	r.phase -= math.Floor(r.phase)
	return sine, cosine
}

// addTo adds the sine of an amplitude to the samples, as many as block or fewer.
func (r *rotation) addTo(samples []float64, amplitude float64) {
	sine, cosine := r.advance(len(samples))
	sine, cosine = sine*amplitude, cosine*amplitude
	s, c := r.sin[:len(samples)], r.cos[:len(samples)]
	for i := range samples {
		samples[i] += sine*c[i] + cosine*s[i]
	}
}
