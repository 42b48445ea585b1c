package calib

import (
	"math"
	"math/cmplx"
	"sort"

	"rungproof/calib/decision"
)

// expectation is what a detector without fault reads at a step, the wiring as stated.
type expectation struct {
	drop, phase float64 // V rms and rad, of the ladder
	value, u    float64 // of the reading, V rms, signed
	current     float64 // through the arm of the series resistance, A rms, signed like the reading
}

// expect finds what is expected of an observation, the forward model being
// computed at stated values.
func (m *model) expect(i int) expectation {
	o := &m.obs[i]
	d := &m.forward.drops[m.forward.of[o.step]]
	w := &layout{offset: -1, offsetY: -1, series: -1, phase: make([]int, len(m.plan.Frequencies)), inputs: -1}
	for f := range w.phase {
		w.phase[f] = -1
	}
	v := w.at(nil, m.forward.stated())
	v.noiseless = true
	var r row
	m.predict(i, v, &r)
	x := expectation{drop: d.stated, phase: cmplx.Phase(d.axis), value: real(r.value)}
	variance := 0.0
	for _, p := range r.byInput {
		u := real(p.d) * m.forward.inputs[p.input].U
		variance += u * u
	}
	x.u = math.Sqrt(variance)
	x.current = m.forward.current(d)
	if d.stated > 0 {
		x.current *= x.value / d.stated
	}
	return x
}

// current is the rms current through the arm of the series resistance.
func (f *forward) current(d *drop) float64 {
	emf, _, _ := f.emf[d.amplitude].value(f.stated())
	return emf * cmplx.Abs(f.states[d.state].perVolt)
}

// step is the result of one observation.
func (e *Evaluation) step(k int, found *stepError, left deviation) StepResult {
	m := e.model
	o := &m.obs[k]
	x := m.expect(k)
	one, _ := o.scatter.one()
	j := m.judge(o, found)
	s := StepResult{
		Index: o.step, ID: e.Plan.Steps[o.step].ID,
		Drop: x.drop, PhaseDeg: x.phase * 180 / math.Pi, Range: e.Plan.Detector.Ranges[o.rng],
		SigmaOne: one, Expected: x.value, UExpected: x.u,
		Reading: number(found.reading), UReading: number(o.along),
		Error: number(found.e), U: number(found.k * found.u), K: found.k, Limit: number(j.limit),
		PhaseError: number(math.NaN()), UPhase: number(math.NaN()), PhaseLimit: number(math.NaN()),
		Outcome: j.outcome, Beyond: o.beyond, Flags: o.flags, Repeats: o.n,
		Acceptance: number(j.acceptance), Conformity: number(j.conformity), Capability: number(j.capability),
		Current: x.current, Unexplained: number(left.value), UUnexplained: number(left.u), Standardised: number(left.standardised),
	}
	if found.uPhase > 0 {
		s.PhaseError, s.UPhase = number(found.phase), number(found.kPhase*found.uPhase)
		if l := e.Plan.LimitAt(s.Range, e.Plan.Steps[o.step].Frequency); l != nil {
			s.PhaseLimit = number(l.Phase)
		}
	}
	return s
}

// settleRisk finds the probability that the outcome, taken as it stands, is wrong.
func (s *StepResult) settleRisk() {
	switch s.Outcome {
	case decision.NotJudged:
		s.Risk = number(math.NaN())
	case decision.Pass, decision.ConditionalPass:
		s.Risk = number(decision.Accepting(float64(s.Error), s.u(), float64(s.Limit)))
	default:
		if math.Abs(float64(s.Error)) <= float64(s.Limit) { // rejected for something else than this error
			s.Risk = number(math.NaN())
			return
		}
		s.Risk = number(decision.Rejecting(float64(s.Error), s.u(), float64(s.Limit)))
	}
}

// u is the standard uncertainty of the step's error.
func (s *StepResult) u() float64 { return float64(s.U) / s.K }

// deviation is what is left of an observation when the drop without unknown
// series resistance is taken off.
type deviation struct {
	value, u     float64 // V, at the detector's input
	standardised float64
}

// unexplained is each reading over the gain less the drop, inputs as fitted: an
// offset and a series resistance are what it is made of.
func (m *model) unexplained(e *estimate) []deviation {
	w := *e.layout
	w.offset, w.offsetY, w.series = -1, -1, -1
	v := w.at(e.result.P, m.forward.stated())
	v.noiseless = true
	bias := m.noiseBias(e)
	m.forward.compute(v.nu, 0)
	out := make([]deviation, len(m.obs))
	var r row
	k := 0
	for i := range m.obs {
		o := &m.obs[i]
		if o.left {
			out[i] = deviation{math.NaN(), math.NaN(), math.NaN()}
			continue
		}
		m.predict(i, v, &r)
		g := math.Abs(v.get(w.gain[i], 1))
		out[i] = deviation{
			value:        (real(o.mean*r.turn) - bias[i] - real(r.value)) / g,
			u:            o.along / g,
			standardised: e.result.Standardised[k],
		}
		k += m.axes
	}
	return out
}

// condition is the interval of series resistance for which every step passes,
// where it cannot be told from an offset. To first order in r, which the
// ladder's large resistor makes good to r/R_top.
func (m *model) condition(e *estimate, found []stepError) *Interval {
	from, to := math.Inf(-1), math.Inf(1)
	bound := func(slope, room float64) { // slope·r ≤ room
		switch {
		case slope > 0:
			to = math.Min(to, room/slope)
		case slope < 0:
			from = math.Max(from, room/slope)
		case room < 0:
			from, to = math.Inf(1), math.Inf(-1)
		}
	}
	v := m.faultless(e)
	m.forward.compute(v.nu, v.r)
	var r row
	for i := range m.obs {
		o := &m.obs[i]
		l := m.plan.LimitAt(m.plan.Detector.Ranges[o.rng], m.plan.Steps[o.step].Frequency)
		if l == nil {
			continue
		}
		m.predict(i, v, &r)
		d, s := real(r.bySeries), &found[i]
		room := m.judge(o, s).acceptance
		if math.IsNaN(room) {
			return nil
		}
		grows := l.Reading * sign(s.expected) * d
		bound(-d-grows, room-s.e)
		bound(d-grows, room+s.e)
	}
	if from > to {
		return nil
	}
	return &Interval{number(from), number(to)}
}

func sign(x float64) float64 {
	if x < 0 {
		return -1
	}
	return 1
}

// inputs are the uncertain inputs, as stated and as the fit has them.
func (e *Evaluation) inputs() []InputResult {
	a := e.asked
	out := make([]InputResult, 0, len(e.model.forward.inputs))
	for i, in := range e.model.forward.inputs {
		k := a.layout.inputs + i
		r := InputResult{Name: in.Name, Value: in.Value, U: in.U, Unit: in.Unit, Shape: shapeOf(in.Shape).String(), DOF: in.DOF,
			Fitted: a.result.P[k], UFitted: math.Sqrt(a.result.Cov.At(k, k))}
		if in.Standard >= 0 {
			r.Standard = e.Plan.Standards[in.Standard].Name
		}
		out = append(out, r)
	}
	return out
}

func sortGains(g []KeyGain) {
	sort.SliceStable(g, func(i, j int) bool { return g[i].Range+g[i].Frequency < g[j].Range+g[j].Frequency })
}
