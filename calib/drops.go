package calib

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/calib/plan"
	"rungproof/circuit"
)

// forward computes what the ladder delivers: V = E·H, complex, for every
// different combination of amplitude and circuit that the steps use.
type forward struct {
	*bench
	states []state
	drops  []drop
	of     []int // by step, the index of its drop
	ws     circuit.Workspace
}

// state is one condition of the circuit: frequency, tap, settings.
type state struct {
	stated    circuit.Ladder
	work      circuit.Ladder
	frequency float64
	series    int // arm of the unknown series resistance
	levers    []lever

	h       complex128   // V/V
	byR     complex128   // dH/dr, 1/Ω
	lever   []complex128 // dH/d(element) of each lever
	z       complex128   // Ω, output impedance, the input connected
	perVolt complex128   // A/V, current in the arm of the series resistance
}

// drop is the voltage at the tap for one amplitude in one state.
type drop struct {
	amplitude, state, frequency int
	axis                        complex128 // direction of the phasor at stated values
	stated                      float64    // its size there, V rms
	inputs                      []int      // the inputs that move it
	relative                    []int      // of the errors of the amplitude, those at work: indices of inputs

	V       complex128   // V rms
	byR     complex128   // dV/dr, V/Ω
	byInput []complex128 // dV/d(input), in the order of inputs
}

// newForward sorts the steps of a plan into states and drops.
func newForward(p *plan.Plan) *forward {
	f := &forward{bench: newBench(p), of: make([]int, len(p.Steps))}
	stateOf, dropOf := map[string]int{}, map[[2]int]int{}
	for i := range p.Steps {
		s := &p.Steps[i]
		atLadder := p.Generator.Amplitudes[s.Amplitude].AtLadderInput
		key := fmt.Sprint(s.Frequency, s.Tap, s.Set, atLadder)
		k, known := stateOf[key]
		if !known {
			k = len(f.states)
			stateOf[key] = k
			f.states = append(f.states, f.newState(s, atLadder))
		}
		d, known := dropOf[[2]int{k, s.Amplitude}]
		if !known {
			d = len(f.drops)
			dropOf[[2]int{k, s.Amplitude}] = d
			f.drops = append(f.drops, f.newDrop(s, k))
		}
		f.of[i] = d
	}
	f.compute(f.stated(), 0)
	for i := range f.drops {
		d := &f.drops[i]
		switch {
		case d.V != 0:
			d.axis = d.V / complex(cmplx.Abs(d.V), 0)
		case d.byR != 0:
			d.axis = d.byR / complex(cmplx.Abs(d.byR), 0)
		default:
			d.axis = 1
		}
		d.stated = cmplx.Abs(d.V)
	}
	return f
}

func (f *forward) newState(s *plan.Step, atLadder bool) state {
	st := state{stated: f.plan.Ladder(s), frequency: s.Frequency, series: f.plan.Fit.SeriesArm, levers: f.fixed}
	if st.series < 0 {
		st.series = s.Tap
	}
	st.levers = append([]lever(nil), f.fixed...)
	if !atLadder {
		st.levers = append(st.levers, f.source...)
	}
	for arm, setting := range s.Set {
		if len(f.settings[arm]) > 0 {
			st.levers = append(st.levers, f.settings[arm][setting]...)
		}
	}
	st.lever = make([]complex128, len(st.levers))
	st.work = st.stated
	st.work.Arms = append([]circuit.Arm(nil), st.stated.Arms...)
	return st
}

func (f *forward) newDrop(s *plan.Step, k int) drop {
	d := drop{amplitude: s.Amplitude, state: k, frequency: frequencyIndex(f.plan, s.Frequency)}
	touched := map[int]bool{}
	touch := func(input int) {
		if input >= 0 && !touched[input] {
			touched[input] = true
			d.inputs = append(d.inputs, input)
		}
	}
	for _, l := range f.states[k].levers {
		touch(f.elements[l.element].own)
		touch(f.elements[l.element].shared)
	}
	touch(f.emf[s.Amplitude].own)
	touch(f.emf[s.Amplitude].shared)
	for _, r := range f.relative {
		if (r.amplitude < 0 || r.amplitude == s.Amplitude) && (r.frequency < 0 || r.frequency == d.frequency) {
			d.relative = append(d.relative, r.input)
			touch(r.input)
		}
	}
	d.byInput = make([]complex128, len(d.inputs))
	return d
}

// stated is the vector of the inputs at their stated values.
func (b *bench) stated() []float64 {
	nu := make([]float64, len(b.inputs))
	for i, in := range b.inputs {
		nu[i] = in.Value
	}
	return nu
}

// value is an element's value with the inputs at nu, and its derivatives with
// respect to its own and its shared input.
func (e element) value(nu []float64) (q, byOwn, byShared float64) {
	x, scale := e.x, 1.0
	if e.own >= 0 {
		x = nu[e.own]
	}
	if e.shared >= 0 {
		scale += nu[e.shared]
	}
	return x * scale, scale, x
}

// compute finds every drop and its derivatives with the inputs at nu and the
// unknown series resistance at r (Ω, in series with its arm, inside the tap).
func (f *forward) compute(nu []float64, r float64) {
	for i := range f.states {
		s := &f.states[i]
		arms := s.work.Arms
		copy(arms, s.stated.Arms)
		s.work = s.stated
		s.work.Arms = arms
		for _, l := range s.levers {
			e := f.elements[l.element]
			q, _, _ := e.value(nu)
			*l.at.In(&s.work) += l.factor * (q - e.x)
		}
		arms[s.series].Stray += r
		response := s.work.Solve(s.frequency, &f.ws)
		sens := response.Sensitivity()
		s.h, s.z, s.perVolt = response.H, response.Z, response.Arms[s.series]
		s.byR = sens.Arms[s.series].Stray
		for k, l := range s.levers {
			s.lever[k] = sens.By(l.at) * complex(l.factor, 0)
		}
	}
	byInput := make([]complex128, len(f.inputs))
	for i := range f.drops {
		f.drops[i].compute(f, nu, byInput)
	}
}

// compute finds one drop; scratch is zero before and after.
func (d *drop) compute(f *forward, nu []float64, scratch []complex128) {
	s := &f.states[d.state]
	emf, byOwn, byShared := f.emf[d.amplitude].value(nu)
	scale := 1.0
	for _, k := range d.relative {
		scale *= 1 + nu[k]
	}
	E := complex(emf*scale, 0)
	d.V = E * s.h
	d.byR = E * s.byR
	for k, l := range s.levers {
		e := f.elements[l.element]
		_, own, shared := e.value(nu)
		if e.own >= 0 {
			scratch[e.own] += E * s.lever[k] * complex(own, 0)
		}
		if e.shared >= 0 {
			scratch[e.shared] += E * s.lever[k] * complex(shared, 0)
		}
	}
	if e := f.emf[d.amplitude]; e.own >= 0 {
		scratch[e.own] += complex(byOwn*scale, 0) * s.h
	}
	if e := f.emf[d.amplitude]; e.shared >= 0 {
		scratch[e.shared] += complex(byShared*scale, 0) * s.h
	}
	for _, k := range d.relative {
		scratch[k] += d.V / complex(1+nu[k], 0)
	}
	for j, k := range d.inputs {
		d.byInput[j], scratch[k] = scratch[k], 0
	}
}

// amplitude is the size of the drop along the direction that it has at stated
// values, in V rms (so it is smooth, and negative, where a series resistance
// below zero turns a small drop over), and the unit phasor that it is measured along.
func (d *drop) size() (float64, complex128) {
	return along(d.V, d.axis)
}

// along is a phasor's size along the direction that it is closest to of the two of
// an axis, and the unit phasor that it is measured along.
func along(v, axis complex128) (float64, complex128) {
	size := math.Sqrt(real(v)*real(v) + imag(v)*imag(v)) // no drop is near the ends of float64
	if size == 0 {
		return 0, axis
	}
	u := complex(real(v)/size, imag(v)/size)
	if real(u*cmplx.Conj(axis)) < 0 {
		return -size, -u
	}
	return size, u
}
