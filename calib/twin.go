package calib

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"time"

	"rungproof/calib/detector"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// Mains is what the power line adds at the detector's input.
type Mains struct {
	Amplitude float64 // V rms
	Frequency float64 // Hz
}

// TwinReadings are readings by the detector's time-domain twin instead of the
// model's formulas: the signal, the noise and the mains are sampled, mixed and
// filtered. The seed is of the inputs' draws and of the noise.
func (s *Simulator) TwinReadings(t Truth, mains Mains, seed uint64) *reading.Set {
	m := s.m
	random := rand.New(rand.NewPCG(seed, 1))
	nu := m.forward.stated()
	for i, in := range m.forward.inputs {
		nu[i] += in.U * draw(in.Shape, random)
	}
	m.forward.compute(nu, t.Series)
	set := &reading.Set{File: "rehearsed"}
	clock := simulationStart
	before := complex128(0)
	s.errors = s.errors[:0]
	for i := range m.obs {
		o := &m.obs[i]
		step := &m.plan.Steps[o.step]
		s.errors = append(s.errors, m.trueError(i, nu, &t))
		still := m.still(i, nu, &t)
		in, settings := m.twin(i, still, &t, mains, random)
		wait := detector.Settling(step.TimeConstant, m.plan.Detector.Poles, settled)
		for k, z := range detector.Readings(in, settings, wait, step.Repeats, random.Uint64()) {
			if k == 0 {
				z += complex(t.Lean, 0) * (before - still)
			}
			clock = clock.Add(time.Duration(1e9 * wait))
			set.Readings = append(set.Readings, m.displayed(i, z, &t, clock))
		}
		before = still
	}
	return set
}

// twin puts a step before the twin: a tone of the size and direction that the
// reading is to have, less the offset, which the twin adds itself.
func (m *model) twin(i int, still complex128, t *Truth, mains Mains, random *rand.Rand) (detector.Input, detector.TwinSettings) {
	o := &m.obs[i]
	step := &m.plan.Steps[o.step]
	d := &m.forward.drops[m.forward.of[o.step]]
	det := &m.plan.Detector
	g, offset := t.at(m, o.rng)
	signal := (still - offset) / complex(g, 0)
	white := math.Hypot(m.forward.noise(d.state), t.Interference/math.Sqrt(detector.NoiseBandwidth(step.TimeConstant, det.Poles)))
	in := detector.Input{White: white,
		Tones: []detector.Tone{{Amplitude: cmplx.Abs(signal), Frequency: step.Frequency, Phase: cmplx.Phase(signal)}}}
	if mains.Amplitude > 0 {
		for _, h := range []float64{1, 3, 5} { // a line's harmonics fall about as 1/h² (common practice)
			in.Tones = append(in.Tones, detector.Tone{Amplitude: mains.Amplitude / (h * h), Frequency: h * mains.Frequency, Phase: 2 * math.Pi * random.Float64()})
		}
	}
	return in, detector.TwinSettings{Frequency: step.Frequency, Harmonic: 1, TimeConstant: step.TimeConstant, Poles: det.Poles,
		Before: signal, Gain: g, Stability: det.Stability, OffsetX: real(offset), OffsetY: imag(offset)}
}

// displayed is a reading as the display shows it.
func (m *model) displayed(i int, z complex128, t *Truth, at time.Time) reading.Reading {
	o := &m.obs[i]
	if m.plan.Detector.Reads == plan.Magnitude {
		z = complex(cmplx.Abs(z), 0)
	}
	if m.axes == 1 {
		z = complex(real(z), 0)
	}
	if display := m.plan.Detector.Resolution * m.plan.Detector.Ranges[o.rng]; display > 0 && !t.Fine {
		z = complex(math.Round(real(z)/display)*display, math.Round(imag(z)/display)*display)
	}
	return reading.Reading{Step: o.step, X: real(z), Y: imag(z), Range: o.rng, Time: at.Truncate(time.Second)}
}
