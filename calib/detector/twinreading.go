package detector

import (
	"math"
	"math/rand/v2"
)

// Settle lets the source's signal in for a time, in s, and reads.
func (t *Twin) Settle(from *Source, seconds float64) (x, y float64) {
	t.run(from, seconds)
	return t.Read()
}

func (t *Twin) run(from *Source, seconds float64) {
	if from.rate != t.rate {
		panic("detector: source and twin have different sampling rates")
	}
	if !(seconds >= 0) {
		panic("detector: a time to settle is not negative")
	}
	for left := int(math.Round(seconds * t.rate)); left > 0; left -= block {
		samples := t.samples[:min(left, block)]
		from.Fill(samples)
		t.Advance(samples)
	}
}

// Readings is n readings of one step, x + jy in V rms, the first a wait in s after the
// step began and each further one a wait later: independent where the wait is a
// settling time. The gain of each is off by its own share of the Stability. Input,
// settings and seed give the same readings always.
//
// A magnitude is |x + jy| of readings with no Resolution, rounded after.
func Readings(in Input, s TwinSettings, wait float64, n int, seed uint64) []complex128 {
	rate := SamplingRate(in, s)
	source, twin := NewSource(in, rate, seed), NewTwin(s, rate)
	scatter := rand.New(rand.NewPCG(seed, stabilityStream))
	readings := make([]complex128, n)
	for i := range readings {
		twin.run(source, wait)
		readings[i] = complex(twin.read(s.Gain * (1 + s.Stability*scatter.NormFloat64())))
	}
	return readings
}
