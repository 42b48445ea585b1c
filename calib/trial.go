package calib

import (
	"math"
	"math/cmplx"

	"rungproof/calib/detector"
	"rungproof/calib/plan"
	"rungproof/circuit"
)

// trial finds the full, non-linear estimate for one draw of the readings and the
// stated values, again and again without allocating. It starts from the linear
// estimate and goes on by Gauss–Newton steps with the covariance of the fit that
// it confirms, the gradient being the true one at each point: so it ends where
// the gradient of χ² vanishes, not at the linearisation.
//
// Gains, resistors and amplitudes, all of which multiply, move by their
// logarithms: the predicted reading changes with the logarithm of each as it does
// with any other, whatever their values, so that the covariance stays good far
// from where it was made.
type trial struct {
	m    *model
	e    *estimate
	w    *layout
	from []float64 // the estimate that is confirmed
	gain []float64 // n × (rows + priors): derivative of the estimate with respect to readings and prior values
	cov  []float64 // n × n
	u    []float64 // standard uncertainties of the parameters
	zero []float64 // where a parameter that multiplies is zero: 0, or −1 for a relative error; NaN for one that adds

	states []trialState
	rows   []trialRow
	drops  []trialDrop
	h      []complex128
	grad   []float64
	p      []float64
	step   []float64
	read   []complex128 // the readings of this draw
	prior  []float64    // the prior values of this draw
	delta  []float64    // rows and priors of this draw less those of the fit
}

// trialRow is an observation of the fit.
type trialRow struct {
	obs           int // index in model.obs
	drop          int
	gain          int
	full          float64 // of the range, where the offset is a share of it; else 1
	cos, sin      float64 // of the reference's phase
	turn          complex128
	along, across float64 // weights 1/s²
}

// trialDrop is one drop of a trial.
type trialDrop struct {
	emf  float64 // V
	v    complex128
	size float64 // along its axis
	unit complex128
	pull complex128 // what the readings pull it by
}

// trialState is one state of the circuit: the numbers of it that move.
type trialState struct {
	transfer transfer
	levers   []trialLever
	x, x0    []float64
	dh       []complex128
	pull     complex128
	series   int // the number that the series resistance is
}

// trialLever is a lever with the number of the circuit that it moves.
type trialLever struct {
	number  int
	factor  float64
	element element
}

// newTrial prepares the confirmation of an estimate, all of whose parameters are determined.
func newTrial(m *model, e *estimate) *trial {
	n, rows := e.layout.n, len(e.result.Residual)
	priors := len(e.result.PriorInfluence(0))
	t := &trial{m: m, e: e, w: e.layout, from: e.result.P, drops: make([]trialDrop, len(m.forward.drops)), h: make([]complex128, len(m.forward.states)),
		grad: make([]float64, n), p: make([]float64, n), step: make([]float64, n),
		prior: make([]float64, priors), delta: make([]float64, rows+priors)}
	for k := range n {
		t.gain = append(append(t.gain, e.result.Influence(k)...), e.result.PriorInfluence(k)...)
		t.u = append(t.u, math.Sqrt(e.result.Cov.At(k, k)))
		t.zero = append(t.zero, math.NaN())
		for j := range n {
			t.cov = append(t.cov, e.result.Cov.At(k, j))
		}
	}
	t.multiplying()
	_, turns := m.start(e.layout)
	for i := range m.obs {
		o := &m.obs[i]
		if o.left {
			continue
		}
		r := trialRow{obs: i, drop: m.forward.of[o.step], gain: e.layout.gain[i], full: 1, turn: 1,
			along: 1 / (o.along * o.along), across: 1 / (o.across * o.across)}
		r.sin, r.cos = math.Sincos(m.plan.Steps[o.step].Phase)
		if m.plan.Fit.OffsetPerRange {
			r.full = m.plan.Detector.Ranges[o.rng]
		}
		if m.axes == 2 {
			r.turn = turns[i]
		}
		t.rows = append(t.rows, r)
	}
	t.read = make([]complex128, len(t.rows))
	for i := range m.forward.states {
		t.states = append(t.states, newTrialState(m.forward, i))
	}
	return t
}

// multiplying marks the parameters that multiply and are known well enough to
// stay away from their zero.
func (t *trial) multiplying() {
	mark := func(k int, zero float64) {
		if math.Abs(t.from[k]-zero) > 10*t.u[k] {
			t.zero[k] = zero
		}
	}
	for k := range t.w.gains {
		mark(k, 0)
	}
	for k, in := range t.m.forward.inputs {
		switch {
		case in.Unit == "Ω" || in.Unit == "V":
			mark(t.w.inputs+k, 0)
		case in.Unit == "1" && in.Value == 0:
			mark(t.w.inputs+k, -1)
		}
	}
}

// stretch is dp/dt of a parameter that moves by its logarithm t, one at the start.
func (t *trial) stretch(k int) float64 {
	if zero := t.zero[k]; !math.IsNaN(zero) {
		return (t.p[k] - zero) / (t.from[k] - zero)
	}
	return 1
}

// newTrialState lists the numbers of a state that its levers move, and last the
// series resistance.
func newTrialState(f *forward, i int) trialState {
	s := &f.states[i]
	out := trialState{}
	var numbers []circuit.Variable
	at := func(v circuit.Variable) int {
		for k, known := range numbers {
			if known == v {
				return k
			}
		}
		numbers = append(numbers, v)
		ladder := s.stated
		out.x0 = append(out.x0, *v.In(&ladder))
		return len(numbers) - 1
	}
	for _, l := range s.levers {
		out.levers = append(out.levers, trialLever{at(l.at), l.factor, f.elements[l.element]})
	}
	out.series = at(circuit.Variable{Element: circuit.ArmStray, Arm: s.series})
	out.x, out.dh = make([]float64, len(numbers)), make([]complex128, len(numbers))
	out.transfer = newTransfer(s, numbers)
	return out
}

// transfer gives H, and in dh its derivatives with respect to the numbers that move.
type transfer interface {
	Gradient(x []float64, dh []complex128) complex128
}

// mostCompiled is the number of variables up to which the compiled form of the
// circuit is the faster one.
const mostCompiled = 5

func newTransfer(s *state, numbers []circuit.Variable) transfer {
	if len(numbers) <= mostCompiled {
		if c, err := s.stated.Compile(s.frequency, numbers); err == nil {
			return c
		}
	}
	ladder := s.stated
	ladder.Arms = append([]circuit.Arm(nil), s.stated.Arms...)
	return &solved{ladder: ladder, f: s.frequency, numbers: numbers}
}

// solved is the transfer by the circuit itself.
type solved struct {
	ladder  circuit.Ladder
	f       float64
	numbers []circuit.Variable
	ws      circuit.Workspace
}

func (s *solved) Gradient(x []float64, dh []complex128) complex128 {
	for k, v := range s.numbers {
		*v.In(&s.ladder) = x[k]
	}
	response := s.ladder.Solve(s.f, &s.ws)
	sens := response.Sensitivity()
	for k, v := range s.numbers {
		dh[k] = sens.By(v)
	}
	return response.H
}

// settle finds the estimate for the readings and prior values of this draw, into
// t.p. It is false where it has not settled: to a millionth of a standard
// uncertainty, in at most 30 steps.
func (t *trial) settle() bool {
	n, d := len(t.p), len(t.delta)
	for k := range n {
		t.p[k] = t.from[k] + dot(t.gain[k*d:(k+1)*d], t.delta)
	}
	for range 30 {
		t.gradient()
		worst := 0.0
		for k := range n {
			t.grad[k] *= t.stretch(k)
		}
		for k := range n {
			step := t.stretch(k) * dot(t.cov[k*n:(k+1)*n], t.grad)
			t.step[k] = step
			worst = math.Max(worst, math.Abs(step)/t.u[k])
		}
		for k, s := range t.step {
			t.p[k] += s
		}
		if worst < 1e-6 {
			return true
		}
	}
	return false
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, x := range a {
		sum += x * b[i]
	}
	return sum
}

// gradient is that of −χ²/2 at t.p: forward through the circuit and the model,
// then back, each number that moves being visited once.
func (t *trial) gradient() {
	w, p, g := t.w, t.p, t.grad
	clear(g)
	nu := p[w.inputs:]
	f := t.m.forward
	for i := range t.states {
		s := &t.states[i]
		copy(s.x, s.x0)
		for _, l := range s.levers {
			q, _, _ := l.element.value(nu)
			s.x[l.number] += l.factor * (q - l.element.x)
		}
		if w.series >= 0 {
			s.x[s.series] += p[w.series]
		}
		t.h[i] = s.transfer.Gradient(s.x, s.dh)
		s.pull = 0
	}
	for i := range f.drops {
		d := &f.drops[i]
		emf, _, _ := f.emf[d.amplitude].value(nu)
		for _, k := range d.relative {
			emf *= 1 + nu[k]
		}
		v := complex(emf, 0) * t.h[d.state]
		t.drops[i] = trialDrop{emf: emf, v: v}
		if t.m.axes == 1 {
			t.drops[i].size, t.drops[i].unit = along(v, d.axis)
		}
	}
	for i := range t.rows {
		t.row(i)
	}
	t.backThroughDrops(nu)
	for k, in := range f.inputs {
		g[w.inputs+k] += (t.prior[k] - nu[k]) / (in.U * in.U)
	}
	if k := t.e.prior; k >= 0 {
		u := t.m.plan.Fit.SeriesExpected.U()
		g[w.series] += (t.prior[k] - p[w.series]) / (u * u)
	}
}

// row takes one observation's pull on the parameters beyond the drop, and adds to
// its pull on the drop.
func (t *trial) row(i int) {
	r := &t.rows[i]
	w, p, grad := t.w, t.p, t.grad
	nu := p[w.inputs:]
	d := &t.m.forward.drops[r.drop]
	o := &t.m.obs[r.obs]
	drop := &t.drops[r.drop]
	offset, offsetY, g := 0.0, 0.0, p[r.gain]
	if w.offset >= 0 {
		offset = p[w.offset] * r.full
	}
	if w.offsetY >= 0 {
		offsetY = p[w.offsetY] * r.full
	}
	if t.m.axes == 2 {
		phase := 0.0
		if k := w.phase[d.frequency]; k >= 0 {
			phase = p[k]
		}
		sin, cos := math.Sincos(phase)
		turned := complex(cos*r.cos+sin*r.sin, sin*r.cos-cos*r.sin) // e^{j(φ_f − φ)}
		signal := drop.v * turned * r.turn
		res := t.read[i]*r.turn - complex(g, 0)*signal - complex(offset, offsetY)*r.turn
		q := complex(real(res)*r.along, imag(res)*r.across)
		grad[r.gain] += inner(signal, q)
		if k := w.phase[d.frequency]; k >= 0 {
			grad[k] += g * inner(complex(-imag(signal), real(signal)), q)
		}
		if w.offset >= 0 {
			grad[w.offset] += r.full * inner(r.turn, q)
		}
		if w.offsetY >= 0 {
			grad[w.offsetY] += r.full * inner(complex(-imag(r.turn), real(r.turn)), q)
		}
		drop.pull += complex(g, 0) * cmplx.Conj(turned*r.turn) * q
		return
	}
	size := drop.size
	c, byLoss, byTurn := 1.0, 0.0, 0.0
	loss, turn := t.m.forward.cosine[d.frequency], t.m.forward.turn[d.frequency]
	if t.m.plan.Detector.Reads == plan.InPhase {
		c = r.cos
		if loss >= 0 {
			byLoss = -c
			c *= 1 - nu[loss]
		}
		if turn >= 0 {
			byTurn = r.sin
			c += nu[turn] * r.sin
		}
	}
	value, slope := g*size*c+offset, 1.0
	if t.m.plan.Detector.Reads == plan.Magnitude {
		value, slope = detector.RiceMean(value, o.noise)
	}
	if o.output {
		value, slope = t.throughMeter(i, value, slope)
	}
	q := (real(t.read[i]) - value) * r.along * slope
	grad[r.gain] += q * size * c
	if w.offset >= 0 {
		grad[w.offset] += q * r.full
	}
	if byLoss != 0 {
		grad[w.inputs+loss] += q * g * size * byLoss
	}
	if byTurn != 0 {
		grad[w.inputs+turn] += q * g * size * byTurn
	}
	drop.pull += complex(q*g*c, 0) * drop.unit
}

// throughMeter is a reading taken with a voltmeter at the analogue output.
func (t *trial) throughMeter(i int, value, slope float64) (float64, float64) {
	r := &t.rows[i]
	o := &t.m.obs[r.obs]
	nu := t.p[t.w.inputs:]
	scale, zero := 0.0, 0.0
	perVolt := t.m.plan.Detector.Ranges[o.rng] / t.m.plan.Detector.Output.FullScale
	meter := t.m.forward.meter
	if meter[0] >= 0 {
		scale = nu[meter[0]]
	}
	if meter[1] >= 0 {
		zero = nu[meter[1]] * perVolt
	}
	out := value*(1+scale) + zero
	q := (real(t.read[i]) - out) * r.along
	if meter[0] >= 0 {
		t.grad[t.w.inputs+meter[0]] += q * value
	}
	if meter[1] >= 0 {
		t.grad[t.w.inputs+meter[1]] += q * perVolt
	}
	return out, slope * (1 + scale)
}

// inner is Re(conj(a)·b).
func inner(a, b complex128) float64 { return real(a)*real(b) + imag(a)*imag(b) }

// backThroughDrops carries the pulls on the drops back to the inputs and the series resistance.
func (t *trial) backThroughDrops(nu []float64) {
	f, w, g := t.m.forward, t.w, t.grad
	add := func(input int, x float64) {
		if input >= 0 {
			g[w.inputs+input] += x
		}
	}
	for i := range f.drops {
		d := &f.drops[i]
		s := &t.states[d.state]
		drop := &t.drops[i]
		pull := drop.pull
		s.pull += complex(drop.emf, 0) * pull
		byEMF := inner(t.h[d.state], pull) // of the drop's EMF
		emf, own, shared := f.emf[d.amplitude].value(nu)
		if emf != 0 {
			scale := drop.emf / emf
			add(f.emf[d.amplitude].own, byEMF*scale*own)
			add(f.emf[d.amplitude].shared, byEMF*scale*shared)
		}
		for _, k := range d.relative {
			add(k, byEMF*drop.emf/(1+nu[k]))
		}
	}
	for i := range t.states {
		s := &t.states[i]
		for _, l := range s.levers {
			by := inner(s.dh[l.number], s.pull) * l.factor
			_, own, shared := l.element.value(nu)
			add(l.element.own, by*own)
			add(l.element.shared, by*shared)
		}
		if w.series >= 0 {
			g[w.series] += inner(s.dh[s.series], s.pull)
		}
	}
}
