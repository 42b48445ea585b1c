package detector

import "math"

// TwinSettings is a synchronous detector as it is set for one step.
type TwinSettings struct {
	Frequency float64 // of the reference, Hz, above 0
	Harmonic  int     // of the reference that the input is mixed with, 1 or more
	Phase     float64 // of that harmonic, rad: it is the sine of 2π·Harmonic·Frequency·t + Phase

	TimeConstant float64    // of each low-pass pole, s
	Poles        int        // 1 to MaxPoles
	Before       complex128 // what the filter had settled to before the step, x + jy, V rms without gain and offset

	Clip       float64 // the input is cut at ±Clip, V of the moment, not rms; 0: nowhere
	Gain       float64 // by which what the filter lets through is read; not 0
	Stability  float64 // standard deviation of the gain from one of Readings to the next, relative
	OffsetX    float64 // added to the reading in phase, V rms
	OffsetY    float64 // added to the reading in quadrature, V rms
	Resolution float64 // step of the display, V rms; 0: not rounded
}

// Twin is a synchronous detector in the time domain, sample by sample: input that
// clips, mixing with √2·sine and √2·cosine of the reference, and a low-pass chain
// for each. A sine of V rms that leads the reference by φ reads x = V·cos φ and
// y = V·sin φ, times the gain, plus the offsets. At whatever frequency δ the two
// are apart it leaves a ripple of amplitude V·|H(δ)|, and V·|H| of their sum.
type Twin struct {
	settings  TwinSettings
	rate      float64 // samples a second
	clip      float64
	reference rotation
	filter    chain
	x, y      [block]float64
	samples   [block]float64
}

// NewTwin is a detector for samples taken at a rate in Hz, as by SamplingRate.
func NewTwin(s TwinSettings, rate float64) *Twin {
	check(s.TimeConstant, s.Poles)
	switch {
	case !(s.Frequency > 0) || s.Harmonic < 1:
		panic("detector: a twin's reference has a frequency above zero and a harmonic of 1 or more")
	case !(rate > 2*s.Frequency*float64(s.Harmonic)):
		panic("detector: a twin takes more than two samples a period of its reference")
	case s.Gain == 0 || math.IsNaN(s.Gain):
		panic("detector: a twin's gain is not zero")
	case !(s.Clip >= 0) || !(s.Resolution >= 0) || !(s.Stability >= 0):
		panic("detector: a twin's clipping, resolution and stability are not negative")
	}
	t := &Twin{settings: s, rate: rate, clip: s.Clip}
	if s.Clip == 0 {
		t.clip = math.Inf(1)
	}
	t.reference.set(s.Frequency*float64(s.Harmonic)/rate, s.Phase)
	t.filter.set(s.TimeConstant*rate, s.Poles, s.Before)
	return t
}

// Advance takes the input's next samples, V.
func (t *Twin) Advance(samples []float64) {
	for len(samples) > 0 {
		n := min(len(samples), block)
		t.mix(samples[:n])
		t.filter.advance(t.x[:n], t.y[:n])
		samples = samples[n:]
	}
}

func (t *Twin) mix(samples []float64) {
	sine, cosine := t.reference.advance(len(samples))
	sine, cosine = sine*math.Sqrt2, cosine*math.Sqrt2
	x, y := t.x[:len(samples)], t.y[:len(samples)]
	s, c := t.reference.sin[:len(samples)], t.reference.cos[:len(samples)]
	high, low := t.clip, -t.clip
	for i, v := range samples {
		if v > high {
			v = high
		}
		if v < low {
			v = low
		}
		x[i] = v * (sine*c[i] + cosine*s[i])
		y[i] = v * (cosine*c[i] - sine*s[i])
	}
}

// Read is what the display shows, V rms: each part is the filter's output times
// the gain plus the offset, rounded to the resolution.
func (t *Twin) Read() (x, y float64) {
	return t.read(t.settings.Gain)
}

func (t *Twin) read(gain float64) (x, y float64) {
	x, y = t.filter.output()
	return t.round(gain*x + t.settings.OffsetX), t.round(gain*y + t.settings.OffsetY)
}

func (t *Twin) round(v float64) float64 {
	if t.settings.Resolution == 0 {
		return v
	}
	return math.Round(v/t.settings.Resolution) * t.settings.Resolution
}
