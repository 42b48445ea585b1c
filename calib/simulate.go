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

// Truth is what a simulated bench and detector are really like. The zero value,
// with Gain 1, is a detector and a bench without fault.
type Truth struct {
	Gain      float64
	RangeGain map[int]float64 // further factor on the gain of single ranges, by index
	Offset    float64         // V rms; a share of range where the plan says so
	OffsetY   float64         // two-phase: in quadrature
	Series    float64         // Ω
	Phase     float64         // rad, two-phase: the reference's phase
	Fine      bool            // the display rounds nothing
	Still     bool            // no noise, no scatter, every input as stated

	Added        []Added // further terms of the model
	Interference float64 // V rms, of further white scatter on each reading
	Lean         float64 // share of the step before that is left in a step's first reading
}

// Added is a term of the model at some size: what a fault does to the mean readings.
type Added struct {
	Term Term
	Size float64
}

// extra is what the added terms make of one observation.
func (t *Truth) extra(i int) complex128 {
	sum := complex128(0)
	for _, a := range t.Added {
		sum += a.Term.Add[i] * complex(a.Size, 0)
	}
	return sum
}

// Simulator draws readings as the bench of a plan would have given them.
type Simulator struct {
	m      *model
	errors []float64
}

// Errors are the true errors of the steps of the last draw, in V: what a step's
// mean reading without noise has over the voltage truly applied there, along the
// expected phasor.
func (s *Simulator) Errors() []float64 { return s.errors }

// NewSimulator prepares the simulation of a plan's readings.
func NewSimulator(p *plan.Plan) *Simulator {
	return &Simulator{m: perfect(p)}
}

// Readings draws every uncertain input from its distribution, then the readings
// of every step, with the detector's noise, the scatter of its gain and the
// rounding of its display. The same random numbers give the same readings.
func (s *Simulator) Readings(t Truth, random *rand.Rand) *reading.Set {
	m := s.m
	nu := m.forward.stated()
	for i, in := range m.forward.inputs {
		if !t.Still {
			nu[i] += in.U * draw(in.Shape, random)
		}
	}
	m.forward.compute(nu, t.Series)
	set := &reading.Set{File: "simulated"}
	s.errors = s.errors[:0]
	clock, before := simulationStart, complex128(0)
	for i := range m.obs {
		o := &m.obs[i]
		s.errors = append(s.errors, m.trueError(i, nu, &t))
		still := m.still(i, nu, &t)
		for k := range m.plan.Steps[o.step].Repeats {
			z := still
			if !t.Still {
				z = m.one(i, nu, &t, random)
			}
			if k == 0 && i > 0 && t.Lean != 0 {
				z += complex(t.Lean, 0) * (before - still)
			}
			clock = clock.Add(time.Duration(1e9 * detector.Settling(m.plan.Steps[o.step].TimeConstant, m.plan.Detector.Poles, settled)))
			set.Readings = append(set.Readings, m.displayed(i, z, &t, clock))
		}
		before = still
	}
	return set
}

// one reading before the display: the signal along the reference and across it.
func (m *model) one(i int, nu []float64, t *Truth, random *rand.Rand) complex128 {
	o := &m.obs[i]
	step := &m.plan.Steps[o.step]
	d := &m.forward.drops[m.forward.of[o.step]]
	g, offset := t.at(m, o.rng)
	spread := math.Hypot(o.noise, t.Interference)
	noise := complex(spread*random.NormFloat64(), spread*random.NormFloat64()) + t.extra(i)
	scatter := m.plan.Detector.Stability * random.NormFloat64()
	size, _ := d.size()
	switch m.plan.Detector.Reads {
	case plan.TwoPhase:
		return complex(g, 0)*d.V*cmplx.Rect(1, t.Phase-step.Phase)*complex(1+scatter, 0) + offset + noise
	case plan.Magnitude:
		return complex(g*size*(1+scatter), 0) + offset + noise
	}
	return complex(g*size*m.cosineOf(o, nu)*(1+scatter), 0) + offset + noise
}

// simulationStart is when simulated readings begin.
var simulationStart = time.Date(2026, 1, 5, 9, 0, 0, 0, time.UTC)

// still is a reading without noise, before the display.
func (m *model) still(i int, nu []float64, t *Truth) complex128 {
	o := &m.obs[i]
	step := &m.plan.Steps[o.step]
	d := &m.forward.drops[m.forward.of[o.step]]
	g, offset := t.at(m, o.rng)
	size, _ := d.size()
	switch m.plan.Detector.Reads {
	case plan.TwoPhase:
		return complex(g, 0)*d.V*cmplx.Rect(1, t.Phase-step.Phase) + offset + t.extra(i)
	case plan.Magnitude:
		return complex(g*size, 0) + offset + t.extra(i)
	}
	return complex(g*size*m.cosineOf(o, nu)+real(offset), 0) + t.extra(i)
}

// trueError is what a step's reading would be without noise, less the voltage
// applied there, both with the inputs at nu.
func (m *model) trueError(i int, nu []float64, t *Truth) float64 {
	o := &m.obs[i]
	step := &m.plan.Steps[o.step]
	size, unit := m.forward.drops[m.forward.of[o.step]].size()
	g, offset := t.at(m, o.rng)
	if m.axes == 2 {
		along := unit * cmplx.Rect(1, t.Phase-step.Phase)
		return (g-1)*size + real(offset*cmplx.Conj(along))
	}
	c := 1.0
	if m.plan.Detector.Reads == plan.InPhase {
		c = m.cosineOf(o, nu)
	}
	return (g-1)*size*c + real(offset)
}

// at is the gain and the offset, V rms, on one range.
func (t *Truth) at(m *model, rng int) (g float64, offset complex128) {
	g = t.Gain
	if k, ok := t.RangeGain[rng]; ok {
		g *= k
	}
	full := 1.0
	if m.plan.Fit.OffsetPerRange {
		full = m.plan.Detector.Ranges[rng]
	}
	return g, complex(t.Offset*full, t.OffsetY*full)
}

// cosineOf is what turning the reference leaves of an in-phase reading.
func (m *model) cosineOf(o *observation, nu []float64) float64 {
	step := &m.plan.Steps[o.step]
	f := m.forward.drops[m.forward.of[o.step]].frequency
	c := math.Cos(step.Phase)
	if k := m.forward.cosine[f]; k >= 0 {
		c *= 1 - nu[k]
	}
	if k := m.forward.turn[f]; k >= 0 {
		c += nu[k] * math.Sin(step.Phase)
	}
	return c
}

// draw is one deviation of a distribution with mean 0 and standard deviation 1.
func draw(shape plan.Shape, random *rand.Rand) float64 {
	if shape == plan.Rectangular {
		const halfWidth = 1.7320508075688772 // √3
		return halfWidth * (2*random.Float64() - 1)
	}
	return random.NormFloat64()
}
