package calib

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib/fit"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/calib/uncertainty"
)

// What one gain stands for.
const (
	gainCommon       = "common"
	gainPerRange     = "per range"
	gainPerFrequency = "per frequency"
)

// held says which of the two parameters that look alike is held at zero.
type held int

const (
	nothing held = iota
	seriesHeld
	offsetHeld
)

// inseparable is the largest growth of the offset's standard uncertainty, by
// leaving the series resistance free, at which the two count as told apart.
const inseparable = 20

// nearlySettled is the next step of a fit, in standard uncertainties, that is small
// enough: a gross outlier bends χ² so that the steps shrink but slowly.
const nearlySettled = 0.01

// estimate is one fit of the model to the readings.
type estimate struct {
	layout *layout
	result *fit.Result
	prior  int   // index of the prior of the series resistance among the priors, or -1
	keys   []int // what each gain stands for: an index of range or of frequency; nil for the common one
	v      parameters
	gain   string // what one gain stands for
	held   held
}

// arrange lays the parameters out: gains, offset, series resistance, phases, inputs.
func (m *model) arrange(gain string, h held) (*layout, []int) {
	w := &layout{gain: make([]int, len(m.obs)), offset: -1, offsetY: -1, series: -1, phase: make([]int, len(m.plan.Frequencies))}
	var keys []int
	next := func() int { w.n++; return w.n - 1 }
	of := map[int]int{}
	for i := range m.obs {
		if m.obs[i].left {
			w.gain[i] = -1
			continue
		}
		key := 0
		switch gain {
		case gainPerRange:
			key = m.obs[i].rng
		case gainPerFrequency:
			key = frequencyIndex(m.plan, m.plan.Steps[m.obs[i].step].Frequency)
		}
		if _, known := of[key]; !known {
			of[key] = next()
			keys = append(keys, key)
		}
		w.gain[i] = of[key]
	}
	w.gains = w.n
	if h != offsetHeld {
		w.offset = next()
		if m.axes == 2 {
			w.offsetY = next()
		}
	}
	if h != seriesHeld {
		w.series = next()
	}
	used := m.frequenciesRead()
	for i := range w.phase {
		w.phase[i] = -1
		if m.axes == 2 && used[i] {
			w.phase[i] = next()
		}
	}
	w.inputs = w.n
	w.n += len(m.forward.inputs)
	return w, keys
}

// frequenciesRead tells at which frequencies the fit has readings of a signal:
// without one, a phase means nothing.
func (m *model) frequenciesRead() []bool {
	used := make([]bool, len(m.plan.Frequencies))
	for i := range m.obs {
		if d := &m.forward.drops[m.forward.of[m.obs[i].step]]; !m.obs[i].left && d.stated > 0 {
			used[d.frequency] = true
		}
	}
	return used
}

// estimate fits the model, with one gain for all, one a range or one a frequency.
func (m *model) estimate(gain string, h held) (*estimate, error) {
	return m.estimateFrom(gain, h, nil)
}

// problem is the part of a fit that every layout has: the readings' uncertainties
// and the stated values of the inputs.
func (m *model) problem(w *layout, start []float64) fit.Problem {
	p := fit.Problem{Start: start}
	for i := range m.obs {
		if o := &m.obs[i]; !o.left {
			p.Sigma = append(p.Sigma, o.along)
			if m.axes == 2 {
				p.Sigma = append(p.Sigma, o.across)
			}
		}
	}
	p.N = len(p.Sigma)
	for i, in := range m.forward.inputs {
		p.Priors = append(p.Priors, fit.Prior{Param: w.inputs + i, Value: in.Value, U: in.U})
	}
	return p
}

// estimateFrom starts the fit from given parameters, where there are any.
func (m *model) estimateFrom(gain string, h held, from []float64) (*estimate, error) {
	w, keys := m.arrange(gain, h)
	e := &estimate{layout: w, keys: keys, prior: -1, gain: gain, held: h}
	start, turns := m.start(w)
	if from != nil {
		start = from
	}
	problem := m.problem(w, start)
	if x := m.plan.Fit.SeriesExpected; x != nil && w.series >= 0 && x.U() > 0 {
		e.prior = len(problem.Priors)
		problem.Priors = append(problem.Priors, fit.Prior{Param: w.series, Value: x.X, U: x.U()})
	}
	problem.Residuals = func(p, r []float64, jac *mat.Dense) { m.residuals(w, turns, p, r, jac) }
	// Two parameters that look alike can keep the fit from settling; its
	// covariance says so all the same, and the caller then holds one of them.
	var err error
	if e.result, err = fit.Solve(problem); err != nil && (e.result == nil || (e.result.Step > nearlySettled && e.separable() && !e.gross())) {
		return nil, m.unsettled(err)
	}
	e.v = w.at(e.result.P, m.forward.stated())
	return e, nil
}

// start gives each gain the ratio of reading to drop that the readings have as
// they stand, and each phase its direction; everything else starts at its stated
// value. turns are the directions of the expected phasors there.
func (m *model) start(w *layout) (start []float64, turns []complex128) {
	p := make([]float64, w.n)
	copy(p[w.inputs:], m.forward.stated())
	m.forward.compute(m.forward.stated(), 0)
	turned := make([]complex128, len(w.phase)) // by frequency: sum of reading × expected phasor*
	read, drop := make([]float64, w.gains), make([]float64, w.gains)
	var r row
	v := (&layout{gain: w.gain, offset: -1, offsetY: -1, series: -1, phase: w.phase, inputs: -1}).at(p, m.forward.stated())
	for i := range m.obs {
		o := &m.obs[i]
		if o.left {
			continue
		}
		p[w.gain[i]] = 1
		m.predict(i, v, &r)
		s := o.mean * r.turn
		weight := 1 / (o.along * o.along)
		drop[w.gain[i]] += real(r.byGain) * real(r.byGain) * weight
		if m.axes == 2 {
			turned[m.forward.drops[m.forward.of[o.step]].frequency] += s * r.byGain
			read[w.gain[i]] += cmplx.Abs(s) * real(r.byGain) * weight
		} else {
			read[w.gain[i]] += real(s) * real(r.byGain) * weight
		}
	}
	for k := range read {
		p[k] = 1
		if drop[k] > 0 && read[k] != 0 {
			p[k] = read[k] / drop[k]
		}
	}
	for f, k := range w.phase {
		if k >= 0 {
			p[k] = cmplx.Phase(turned[f])
		}
	}
	if m.axes == 2 {
		for i := range m.obs {
			m.predict(i, v, &r)
			turns = append(turns, r.turn)
		}
	}
	return p, turns
}

// separable tells whether the readings part the offset from the series
// resistance: leaving r free makes u(o) at most 20 times what it is with r held,
// 1/√(1 − ρ²) ≤ 20. A test of rank would not do: the ladder is slightly curved,
// so the two columns are never exactly equal.
func (e *estimate) separable() bool {
	r := e.layout.series
	for _, o := range []int{e.layout.offset, e.layout.offsetY} {
		if o < 0 || r < 0 {
			continue
		}
		if !e.result.Determined(o) || !e.result.Determined(r) {
			return false
		}
		c := e.result.Cov
		rho := c.At(o, r) / math.Sqrt(c.At(o, o)*c.At(r, r))
		if 1-rho*rho < 1.0/(inseparable*inseparable) {
			return false
		}
	}
	return true
}

// gross tells whether the readings miss the model by so much that where exactly the
// fit ends no longer matters: ten standard deviations a reading. The misfit and the
// causes are then what there is to say.
func (e *estimate) gross() bool {
	return e.result.ChiSquared > 100*float64(max(1, e.result.DOF))
}

// seesSignal tells whether the detector responds to the ladder at all: some gain
// is five times its standard uncertainty. Where none is, a series resistance has
// no effect on the readings, and nothing can be said of it.
func (e *estimate) seesSignal() bool {
	for k := range e.layout.gains {
		if g := e.result.P[k]; !e.result.Determined(k) || math.Abs(g) > 5*math.Sqrt(e.result.Cov.At(k, k)) {
			return true
		}
	}
	return false
}

// unsettled is the error of a fit that does not settle, with the reading that is
// most likely why: the one farthest from the others' ratio of reading to drop.
func (m *model) unsettled(err error) error {
	odd := m.oddReadings(oddFactor)
	if len(odd) == 0 {
		return err
	}
	o := odd[0]
	return fmt.Errorf("%w\nstep %s reads %s where the other steps let expect %s: is its unit, its range or its setting right?",
		err, o.Step, quantity.Format(o.Reading, 3, "V"), quantity.Format(o.Likely, 3, "V"))
}

// commonGain is the probability that chance alone lowers χ² as much as it falls
// when each key has its own gain (likelihood ratio; χ² with gains − 1 degrees of
// freedom). NaN where there is nothing to compare.
func commonGain(common, several *estimate) float64 {
	extra := several.result.Rank - common.result.Rank
	if extra <= 0 {
		return math.NaN()
	}
	fall := math.Max(0, common.result.ChiSquared-several.result.ChiSquared)
	return distuv.ChiSquared{K: float64(extra)}.Survival(fall)
}

// value is a parameter with its standard uncertainty, the part of it that the
// readings bring, and the coverage factor of its budget.
func (m *model) value(e *estimate, k int, unit string) Estimate {
	if k < 0 || !e.result.Determined(k) {
		return Estimate{Unit: unit}
	}
	u, ur := math.Sqrt(e.result.Cov.At(k, k)), math.Sqrt(math.Max(0, e.result.CovObserved.At(k, k)))
	lines := m.lines(e, e.result.Influence(k), e.result.PriorInfluence(k), unit)
	return Estimate{Value: e.result.P[k], U: u, URandom: ur, Unit: unit, Known: true, K: m.factor(lines)}
}

// factor is the coverage factor of a budget's lines.
func (m *model) factor(lines []uncertainty.Line) float64 {
	return uncertainty.New(lines, m.plan.Decision.Coverage).K
}

// correlation of two parameters; NaN where either is not determined.
func (e *estimate) correlation(i, j int) float64 {
	if i < 0 || j < 0 || !e.result.Determined(i) || !e.result.Determined(j) {
		return math.NaN()
	}
	return e.result.Cov.At(i, j) / math.Sqrt(e.result.Cov.At(i, i)*e.result.Cov.At(j, j))
}

func offsetUnit(p *plan.Plan) string {
	if p.Fit.OffsetPerRange {
		return "1"
	}
	return "V"
}
