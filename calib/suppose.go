package calib

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"

	"rungproof/calib/fit"
)

// Hypothesis is the clean detector on the clean bench (gain one, no offset, no
// series resistance; inputs and phases free) plus terms, fitted to the readings.
type Hypothesis struct {
	ChiSquared float64
	DOF        int
	Size, U    []float64 // of each term, with its standard uncertainty

	m      *model
	turns  []complex128
	swings []complex128 // by frequency: from the phase that terms were made at to the fitted one
	q      *mat.Dense   // orthonormal columns: what the hypothesis can already explain
	res    []float64    // residuals over their uncertainties, the priors' behind the readings'
	sigma  []float64
	rowOf  []int // by observation, its first row
}

// Suppose fits the clean hypothesis plus some terms by the same least squares as
// everything else; no term is the clean one.
func (e *Evaluation) Suppose(terms ...Term) (*Hypothesis, error) {
	from := make([]float64, len(e.Plan.Frequencies)) // the phases that terms were made at, by frequency
	for f, k := range e.asked.layout.phase {
		if k >= 0 {
			from[f] = e.asked.result.P[k]
		}
	}
	return e.model.suppose(terms, from)
}

func (m *model) suppose(terms []Term, from []float64) (*Hypothesis, error) {
	w, _ := m.arrange(gainCommon, nothing)
	lay := &layout{gain: make([]int, len(m.obs)), offset: -1, offsetY: -1, series: -1, phase: append([]int(nil), w.phase...)}
	for i := range lay.gain {
		lay.gain[i] = -1
	}
	for i, k := range w.phase {
		if k >= 0 {
			lay.phase[i] = lay.n
			lay.n++
		}
	}
	first := lay.n
	lay.n += len(terms)
	lay.inputs = lay.n
	lay.n += len(m.forward.inputs)
	start, turns := m.startClean(lay)
	problem := m.problem(lay, start)
	problem.Residuals = func(p, r []float64, jac *mat.Dense) {
		m.residuals(lay, turns, p, r, jac)
		m.addTerms(terms, turns, from, lay, p, r, jac)
	}
	result, err := fit.Solve(problem)
	if err != nil && (result == nil || (result.Step > nearlySettled && result.ChiSquared < 100*float64(max(1, result.DOF)))) {
		return nil, err
	}
	h := &Hypothesis{ChiSquared: result.ChiSquared, DOF: result.DOF, m: m, turns: turns, sigma: problem.Sigma}
	for f, k := range lay.phase {
		h.swings = append(h.swings, 1)
		if k >= 0 {
			h.swings[f] = cmplx.Rect(1, result.P[k]-from[f])
		}
	}
	row := 0
	for i := range m.obs {
		h.rowOf = append(h.rowOf, row)
		if !m.obs[i].left {
			row += m.axes
		}
	}
	for t := range terms {
		h.Size, h.U = append(h.Size, result.P[first+t]), append(h.U, math.Sqrt(result.Cov.At(first+t, first+t)))
	}
	h.whiten(problem, result.P)
	return h, nil
}

// startClean starts at stated values, the phases where the readings point.
func (m *model) startClean(w *layout) ([]float64, []complex128) {
	p := make([]float64, w.n)
	copy(p[w.inputs:], m.forward.stated())
	m.forward.compute(m.forward.stated(), 0)
	turned := make([]complex128, len(w.phase))
	var r row
	v := w.at(p, m.forward.stated())
	for i := range m.obs {
		if o := &m.obs[i]; !o.left && m.axes == 2 {
			m.predict(i, v, &r)
			turned[m.forward.drops[m.forward.of[o.step]].frequency] += o.mean * r.turn * r.value
		}
	}
	for f, k := range w.phase {
		if k >= 0 {
			p[k] = math.Atan2(imag(turned[f]), real(turned[f]))
		}
	}
	var turns []complex128
	if m.axes == 2 {
		for i := range m.obs {
			m.predict(i, v, &r)
			turns = append(turns, r.turn)
		}
	}
	return p, turns
}

// addTerms takes the terms off the residuals and enters their columns.
func (m *model) addTerms(terms []Term, turns []complex128, from []float64, w *layout, p []float64, res []float64, jac *mat.Dense) {
	first := w.inputs - len(terms)
	k := 0
	for i := range m.obs {
		if m.obs[i].left {
			continue
		}
		for t, term := range terms {
			c := term.Add[i]
			size := p[first+t]
			if m.axes == 2 {
				f := m.forward.drops[m.forward.of[m.obs[i].step]].frequency
				c *= turns[i]
				if phase := w.phase[f]; phase >= 0 && !term.Fixed {
					c *= cmplx.Rect(1, p[phase]-from[f])
					jac.Set(k, phase, jac.At(k, phase)-size*imag(c))
					jac.Set(k+1, phase, jac.At(k+1, phase)+size*real(c))
				}
				res[k+1] -= size * imag(c)
				jac.Set(k+1, first+t, imag(c))
			}
			res[k] -= size * real(c)
			jac.Set(k, first+t, real(c))
		}
		k += m.axes
	}
}

// whiten keeps the residuals and the directions that the hypothesis already
// explains, each row divided by its standard uncertainty.
func (h *Hypothesis) whiten(p fit.Problem, at []float64) {
	n, priors, cols := p.N, len(p.Priors), len(p.Start)
	jac := mat.NewDense(n, cols, nil)
	res := make([]float64, n)
	p.Residuals(at, res, jac)
	white := mat.NewDense(n+priors, cols, nil)
	h.res = make([]float64, n+priors)
	for i := range n {
		h.res[i] = res[i] / p.Sigma[i]
		for j := range cols {
			white.Set(i, j, jac.At(i, j)/p.Sigma[i])
		}
	}
	for k, prior := range p.Priors {
		h.res[n+k] = (prior.Value - at[prior.Param]) / prior.U
		white.Set(n+k, prior.Param, 1/prior.U)
	}
	h.q = orthonormal(white)
}

// Score is what one more term would do to a hypothesis, to first order.
type Score struct {
	Fall    float64 // of χ²
	Size, U float64 // of the term
}

// swing turns a term from the phase that it was made at to that of the hypothesis.
func (h *Hypothesis) swing(t Term, i int) complex128 {
	if t.Fixed {
		return 1
	}
	return h.swings[h.m.forward.drops[h.m.forward.of[h.m.obs[i].step]].frequency]
}

// Try scores one more term; false where the hypothesis explains all that the term
// could, so that the readings say nothing of it.
func (h *Hypothesis) Try(term Term) (Score, bool) {
	c := make([]float64, len(h.res))
	k := 0
	for i := range h.m.obs {
		if h.m.obs[i].left {
			continue
		}
		z := term.Add[i]
		if h.m.axes == 2 {
			z *= h.swing(term, i) * h.turns[i]
			c[k+1] = imag(z) / h.sigma[k+1]
		}
		c[k] = real(z) / h.sigma[k]
		k += h.m.axes
	}
	was := norm(c)
	rows, cols := h.q.Dims()
	for j := range cols {
		d := 0.0
		for i := range rows {
			d += h.q.At(i, j) * c[i]
		}
		for i := range rows {
			c[i] -= d * h.q.At(i, j)
		}
	}
	is := norm(c)
	if was == 0 || is < 1e-4*was {
		return Score{}, false
	}
	size := dot(c, h.res) / (is * is)
	return Score{Fall: size * size * is * is, Size: size, U: 1 / is}, true
}

// TryOne scores a term that moves one observation alone, along its expected phasor:
// what Try would find, without going through all the others.
func (h *Hypothesis) TryOne(i int) (Score, bool) {
	if h.m.obs[i].left {
		return Score{}, false
	}
	k := h.rowOf[i]
	free := 1.0
	_, cols := h.q.Dims()
	for j := range cols {
		free -= h.q.At(k, j) * h.q.At(k, j)
	}
	if free < 1e-8 {
		return Score{}, false
	}
	z := h.res[k] / free // in units of sigma
	return Score{Fall: z * z * free, Size: z * h.sigma[k], U: h.sigma[k] / math.Sqrt(free)}, true
}

// Along is the term that TryOne scores.
func (h *Hypothesis) Along(i int) Term {
	t := Term{Add: make([]complex128, len(h.m.obs)), Fixed: true}
	t.Add[i] = 1
	if h.m.axes == 2 {
		t.Add[i] = cmplx.Conj(h.turns[i])
	}
	return t
}

// orthonormal is an orthonormal basis of the columns, by Gram and Schmidt twice
// over (Giraud et al. 2005: twice is enough); columns that add nothing are left out.
func orthonormal(a *mat.Dense) *mat.Dense {
	rows, cols := a.Dims()
	var kept [][]float64
	for j := range cols {
		v := mat.Col(nil, j, a)
		was := norm(v)
		for range 2 {
			for _, q := range kept {
				d := dot(q, v)
				for i := range v {
					v[i] -= d * q[i]
				}
			}
		}
		is := norm(v)
		if was == 0 || is < 1e-9*was {
			continue
		}
		for i := range v {
			v[i] /= is
		}
		kept = append(kept, v)
	}
	out := mat.NewDense(rows, max(1, len(kept)), nil)
	for j, q := range kept {
		out.SetCol(j, q)
	}
	return out
}

func norm(v []float64) float64 { return math.Sqrt(dot(v, v)) }
