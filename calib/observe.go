package calib

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"

	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// observation is the mean of a step's readings.
type observation struct {
	step     int
	n        int        // readings in the mean
	mean     complex128 // V rms; y is the imaginary part
	rng      int        // range that they were taken on
	output   bool       // taken at the analogue output
	left     bool       // left out of the fit: every reading of the step was flagged
	flags    []string
	beyond   bool // a reading beyond full scale and overrange
	scatter  scatter
	dof      float64 // degrees of freedom of the scatter where the repeats say what it is; else 0, infinite
	along    float64 // standard deviation of the mean, along the expected phasor
	across   float64 // and across it
	noise    float64 // filtered noise on one axis of one reading, V, as the plan states it
	along2   float64 // sum of squared deviations from the mean along it, V²
	across2  float64 // and across it
	freedoms int     // degrees of freedom of both sums
}

// model is the measurement: what the plan states and what was read.
type model struct {
	plan    *plan.Plan
	forward *forward
	obs     []observation
	axes    int   // rows an observation: 2 for two-phase readings
	byStep  []int // by step, the index of its observation, or -1
	repeats Repeatability
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
	if !slices.ContainsFunc(m.obs, func(o observation) bool { return !o.left }) {
		return nil, fmt.Errorf("%s: every reading is flagged: none can be fitted; take them again", set.File)
	}
	m.settleScatter()
	for i := range m.obs {
		m.obs[i].settle()
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
			o.across2 += imag(z) * imag(z)
		}
		o.along2 += real(z) * real(z)
	}
	o.freedoms = (o.n - 1) * m.axes
	return o, nil
}

// settle sets the standard deviations of the mean.
func (o *observation) settle() { o.along, o.across = o.scatter.mean(o.n) }
