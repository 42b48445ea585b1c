package calib

import (
	"math"

	"rungproof/calib/fit"
	"rungproof/calib/uncertainty"
)

// propagation carries the uncertainties of the readings and of the stated inputs
// into a step's error: directly, and through what the fit makes of them (series
// resistance and phases), with all correlations (GUM 5.2, equation 16, the
// readings and the stated values being the independent inputs).
type propagation struct {
	m      *model
	e      *estimate
	result *fit.Result
	row    []int // by observation, its first row in the fit; -1 where it was left out
	params []int // the fitted parameters that an expected reading depends on
	byRead [][]float64
	byNu   [][]float64 // by prior: the inputs, then the series resistance where the plan expects one
	priors []float64   // scratch
	lines  []uncertainty.Line
}

func newPropagation(m *model, e *estimate) *propagation {
	p := &propagation{m: m, e: e, result: e.result, row: make([]int, len(m.obs)), priors: make([]float64, len(m.forward.inputs)+1)}
	k := 0
	for i := range m.obs {
		p.row[i] = -1
		if !m.obs[i].left {
			p.row[i] = k
			k += m.axes
		}
	}
	for _, q := range append([]int{e.layout.series}, e.layout.phase...) {
		if q >= 0 && e.result.Determined(q) {
			p.params = append(p.params, q)
			p.byRead = append(p.byRead, e.result.Influence(q))
			p.byNu = append(p.byNu, e.result.PriorInfluence(q))
		}
	}
	return p
}

// derivative of a row's expected reading with respect to the fitted parameter q.
func (p *propagation) derivative(i int, r *row, q, axis int) float64 {
	if q == p.e.layout.series {
		return part(r.bySeries, axis)
	}
	d := &p.m.forward.drops[p.m.forward.of[p.m.obs[i].step]]
	if p.e.layout.phase[d.frequency] == q {
		return part(r.byPhase, axis)
	}
	return 0
}

func part(z complex128, axis int) float64 {
	if axis == 1 {
		return imag(z)
	}
	return real(z)
}

// u is the standard uncertainty of observation i's error along (axis 0) or
// across (axis 1) the expected phasor, and the coverage factor of its budget.
func (p *propagation) u(i int, r *row, axis int) (u, k float64) {
	readings, inputs := p.variances(i, r, axis, p.priors)
	p.lines = append(p.lines[:0], uncertainty.Line{Name: "readings", U: math.Sqrt(readings), Shape: scatterShape(p.m.obs[i].dof), DOF: p.m.obs[i].dof, Sensitivity: 1})
	for j, in := range p.m.forward.inputs {
		if c := p.priors[j]; c != 0 {
			p.lines = append(p.lines, uncertainty.Line{Name: in.Name, U: in.U, Shape: shapeOf(in.Shape), DOF: in.DOF, Sensitivity: c})
		}
	}
	if p.e.prior >= 0 {
		x := p.m.plan.Fit.SeriesExpected
		p.lines = append(p.lines, uncertainty.Line{Name: "series resistance expected", U: x.U(), Shape: shapeOf(x.Shape), DOF: x.DOF, Sensitivity: p.priors[p.e.prior]})
	}
	return math.Sqrt(readings + inputs), p.m.factor(p.lines)
}

// variances are the parts of the readings and of the inputs in the variance of
// an error; c receives the derivative of the error with respect to each prior
// value.
func (p *propagation) variances(i int, r *row, axis int, c []float64) (readings, inputs float64) {
	o := &p.m.obs[i]
	s := o.along
	if axis == 1 {
		s = o.across
	}
	readings = s * s
	clear(c)
	for _, d := range r.byInput {
		c[d.input] -= part(d.d, axis)
	}
	for a, q := range p.params {
		dq := p.derivative(i, r, q, axis)
		if dq == 0 {
			continue
		}
		if p.row[i] >= 0 {
			readings -= 2 * dq * p.byRead[a][p.row[i]+axis] * s * s
		}
		for _, q2 := range p.params {
			readings += dq * p.derivative(i, r, q2, axis) * p.result.CovObserved.At(q, q2)
		}
		for k, d := range p.byNu[a] {
			c[k] -= dq * d
		}
	}
	for k, in := range p.m.forward.inputs {
		inputs += c[k] * c[k] * in.U * in.U
	}
	if p.e.prior >= 0 {
		u := p.m.plan.Fit.SeriesExpected.U()
		inputs += c[p.e.prior] * c[p.e.prior] * u * u
	}
	return math.Max(readings, 0), inputs
}
