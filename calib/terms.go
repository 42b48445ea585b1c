package calib

import (
	"math"
	"math/cmplx"
	"sort"

	"rungproof/calib/detector"
	"rungproof/calib/plan"
	"rungproof/circuit"
)

// Term is a further term of the measurement model: what one unit of a suspected
// cause adds to each mean reading, in V rms; in two-phase readings along the
// detector's two axes.
type Term struct {
	Add   []complex128 // one value an observation, in the order of Sights
	Fixed bool         // it keeps its direction in the detector's axes, as an offset does; else it turns with the signal's phase
}

// Sight is what is known of a step that was read, for someone who thinks up causes:
// what a detector without fault would read on a bench without fault.
type Sight struct {
	Step      int        // index in the plan's steps
	Set       []int      // by arm, the index of its setting
	EMF       float64    // V rms
	Frequency float64    // Hz
	Full      float64    // full scale, V rms
	Range     int        // index in the detector's ranges
	Phase     float64    // rad, of the reference
	Drop      float64    // V rms
	Along     complex128 // reading over drop, in the detector's axes
	Turn      complex128 // direction of a phasor of phase 0 in the detector's axes
	Mean      complex128 // reading, V rms
	Sigma     float64    // standard deviation of the mean, V rms
	Readings  int        // in the mean
	Noise     float64    // filtered noise of one reading on one axis, V rms
	Left      bool       // flagged: out of every fit
	Time      float64    // s, since the first reading of all; NaN where no time is stated
	Before    int        // the sight before it in time; -1 for the first, and where no time is stated
}

// Sights are the steps that were read, in the order of the plan.
func (e *Evaluation) Sights() []Sight {
	m := e.model
	phases := e.asked.v
	m.forward.compute(m.forward.stated(), 0)
	out := make([]Sight, len(m.obs))
	for i := range m.obs {
		o := &m.obs[i]
		d, s := &m.forward.drops[m.forward.of[o.step]], &m.plan.Steps[o.step]
		emf, _, _ := m.forward.emf[d.amplitude].value(m.forward.stated())
		x := Sight{Step: o.step, Set: s.Set, EMF: emf, Frequency: s.Frequency, Full: m.plan.Detector.Ranges[o.rng], Range: o.rng, Phase: s.Phase,
			Drop: d.stated, Turn: 1, Mean: o.mean, Sigma: o.along, Readings: o.n, Noise: o.noise, Left: o.left, Time: math.NaN(), Before: -1}
		switch m.plan.Detector.Reads {
		case plan.TwoPhase:
			x.Turn = cmplx.Rect(1, phases.get(phases.where.phase[d.frequency], 0)-s.Phase)
			x.Along = d.axis * x.Turn
		case plan.Magnitude:
			_, slope := detector.RiceMean(d.stated, o.noise)
			x.Along = complex(slope, 0)
		default:
			x.Along = complex(m.cosineOf(o, m.forward.stated()), 0)
		}
		out[i] = x
	}
	e.timeSights(out)
	return out
}

// timeSights sets when each step was first read, and which was read before it.
func (e *Evaluation) timeSights(sights []Sight) {
	first := math.Inf(1)
	for _, r := range e.Readings.Readings {
		i := e.model.byStep[r.Step]
		if r.Time.IsZero() || i < 0 {
			continue
		}
		t := float64(r.Time.UnixNano()) / 1e9
		first = math.Min(first, t)
		if s := &sights[i]; !(s.Time <= t) {
			s.Time = t
		}
	}
	var order []int
	for i := range sights {
		if !math.IsNaN(sights[i].Time) {
			sights[i].Time -= first
			order = append(order, i)
		}
	}
	sort.SliceStable(order, func(a, b int) bool { return sights[order[a]].Time < sights[order[b]].Time })
	for k := 1; k < len(order); k++ {
		sights[order[k]].Before = order[k-1]
	}
}

// ByNumber is the term of one number of the circuit: what the readings change by
// with one unit of it. of names the number at each step.
func (e *Evaluation) ByNumber(of func(s *plan.Step) circuit.Variable) Term {
	m := e.model
	sights := e.Sights()
	out := make([]complex128, len(m.obs))
	for i := range m.obs {
		d := &m.forward.drops[m.forward.of[m.obs[i].step]]
		st := &m.forward.states[d.state]
		response := st.stated.Solve(st.frequency, &m.forward.ws)
		sens := response.Sensitivity()
		dv := sens.By(of(&m.plan.Steps[m.obs[i].step])) * complex(sights[i].EMF, 0)
		if m.axes == 2 {
			out[i] = dv * sights[i].Turn
		} else {
			out[i] = complex(inner(d.axis, dv), 0) * sights[i].Along
		}
	}
	return Term{Add: out}
}
