package calib

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/calib/detector"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
	"rungproof/circuit"
)

// observation is the mean of a step's readings.
type observation struct {
	step      int
	n         int        // readings in the mean
	mean      complex128 // V rms; y is the imaginary part
	rng       int        // range that they were taken on
	output    bool       // taken at the analogue output
	left      bool       // left out of the fit: every reading of the step was flagged
	flags     []string
	beyond    bool    // a reading beyond full scale and overrange
	one       float64 // standard deviation of one reading, V, along the expected phasor
	acrossOne float64 // and across it
	along     float64 // of the mean, along the expected phasor
	across    float64 // of the mean, across it
	noise     float64 // filtered noise on one axis of one reading, V
	squares   float64 // sum of squared deviations from the mean, along and across, in units of the predicted variance
	freedoms  int     // their degrees of freedom
}

// model is the measurement: what the plan states and what was read.
type model struct {
	plan    *plan.Plan
	forward *forward
	obs     []observation
	axes    int   // rows an observation: 2 for two-phase readings
	byStep  []int // by step, the index of its observation, or -1
}

// newModel joins a plan and its readings.
func newModel(p *plan.Plan, set *reading.Set) (*model, error) {
	m := emptyModel(p)
	byStep := make([][]int, len(p.Steps))
	for i, r := range set.Readings {
		byStep[r.Step] = append(byStep[r.Step], i)
	}
	for step, indices := range byStep {
		if len(indices) == 0 {
			continue
		}
		o, err := m.observe(step, indices, set)
		if err != nil {
			return nil, err
		}
		m.byStep[step] = len(m.obs)
		m.obs = append(m.obs, o)
	}
	if len(m.obs) == 0 {
		return nil, fmt.Errorf("%s: no step has a reading", set.File)
	}
	return m, nil
}

// emptyModel is the model of a plan before anything was read.
func emptyModel(p *plan.Plan) *model {
	m := &model{plan: p, forward: newForward(p), axes: 1, byStep: make([]int, len(p.Steps))}
	if p.Detector.Reads == plan.TwoPhase {
		m.axes = 2
	}
	for i := range m.byStep {
		m.byStep[i] = -1
	}
	return m
}

// observe takes the mean of a step's readings. Flagged readings are left out of
// it as long as the step has others.
func (m *model) observe(step int, indices []int, set *reading.Set) (observation, error) {
	first := set.Readings[indices[0]]
	o := observation{step: step, rng: first.Range, output: first.Output}
	var sound []int
	for _, i := range indices {
		r := set.Readings[i]
		if r.Range != o.rng || r.Output != o.output {
			return o, fmt.Errorf("%s:%d: step %s: all readings of a step must be taken on one range and at one place; give the other ones a step of their own",
				set.File, r.Line, m.plan.Steps[step].ID)
		}
		full := m.plan.Detector.Ranges[o.rng] * (1 + m.plan.Detector.Overrange)
		o.beyond = o.beyond || math.Abs(r.X) > full || math.Abs(r.Y) > full
		if r.Flag == "" {
			sound = append(sound, i)
		} else {
			o.flags = append(o.flags, r.Flag)
		}
	}
	if len(sound) == 0 {
		sound, o.left = indices, true
	}
	for _, i := range sound {
		o.mean += complex(set.Readings[i].X, set.Readings[i].Y)
	}
	o.n = len(sound)
	o.mean /= complex(float64(o.n), 0)
	m.predictScatter(&o)
	along := complex(1, 0)
	if size := cmplx.Abs(o.mean); size > 0 {
		along = o.mean / complex(size, 0)
	}
	for _, i := range sound {
		z := complex(set.Readings[i].X, set.Readings[i].Y) - o.mean
		if m.axes == 2 {
			z /= along
			o.squares += imag(z) * imag(z) / (o.acrossOne * o.acrossOne)
		}
		o.squares += real(z) * real(z) / (o.one * o.one)
	}
	o.freedoms = (o.n - 1) * m.axes
	return o, nil
}

// predictScatter sets the standard deviations of an observation:
//
//	s² = (e_n² + (i_n·|Z|)² + 4kT·Re Z)·B_n + (resolution·range)²/12 + (stability·V)²
//
// for one reading, Z the output impedance with the input connected and B_n the
// noise bandwidth. The mean of n readings has all but the resolution divided by
// n (GUM F.2.2.1). The gain's scatter (stability) acts along the phasor only.
func (m *model) predictScatter(o *observation) {
	p, s := m.plan, &m.plan.Steps[o.step]
	d := &m.forward.drops[m.forward.of[o.step]]
	o.noise = m.forward.noise(d.state) * math.Sqrt(detector.NoiseBandwidth(s.TimeConstant, p.Detector.Poles))
	display := p.Detector.Resolution * p.Detector.Ranges[o.rng]
	round := display * display / 12
	gain := p.Detector.Stability * d.stated
	n := float64(o.n)
	// A plan may state neither noise nor resolution: a billionth of full scale
	// keeps the weights finite, and the misfit shows the truth.
	least := 1e-9 * p.Detector.Ranges[o.rng]
	spread := func(averaged, fixed float64) float64 { return math.Max(math.Sqrt(averaged+fixed), least) }
	white := o.noise * o.noise
	o.one, o.acrossOne = spread(white+gain*gain, round), spread(white, round)
	o.along, o.across = spread((white+gain*gain)/n, round), spread(white/n, round)
}

// noise is the density at the detector's input in one state, V/√Hz: its own, that
// of its current in the ladder's output impedance, and the ladder's thermal noise.
func (f *forward) noise(state int) float64 {
	det := &f.plan.Detector
	z := f.states[state].z
	current := det.CurrentNoise * math.Hypot(real(z), imag(z))
	return math.Hypot(math.Hypot(det.Noise, current), circuit.ThermalNoise(z, f.plan.Temperature.X))
}
