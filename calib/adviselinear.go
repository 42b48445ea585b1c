package calib

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"rungproof/calib/plan"
)

// vague is the information, as a share of what all observations together bring to
// a parameter by itself, that stands in for knowledge of what nothing determines:
// it keeps the covariance finite and is far too little to count.
const vague = 1e-10

// linearised is the measurement as rows of derivatives, by parameter over a scale
// of its own, and the information that some of its observations and the priors hold.
type linearised struct {
	m           *model
	layout      *layout
	rows        [][]sparseRow // by observation, by axis
	information *mat.SymDense
	scale       []float64
}

type sparseRow struct {
	column []int
	d      []float64
}

// times is the product with a vector.
func (r *sparseRow) times(x func(column int) float64) (sum float64) {
	for i, k := range r.column {
		sum += r.d[i] * x(k)
	}
	return sum
}

// linearise takes the derivatives at stated values, and the information of the
// first have observations.
func (m *model) linearise(have int) *linearised {
	w, _ := m.arrange(m.plan.Fit.Gain, nothing)
	l := &linearised{m: m, layout: w, rows: make([][]sparseRow, len(m.obs)), information: mat.NewSymDense(w.n, nil)}
	n := 0
	for i := range m.obs {
		if !m.obs[i].left {
			n += m.axes
		}
	}
	p, turns := m.start(w)
	jac := mat.NewDense(n, w.n, nil)
	m.residuals(w, turns, p, make([]float64, n), jac)
	l.rescale(jac)
	k := 0
	for i := range m.obs {
		if m.obs[i].left {
			continue
		}
		for axis := range m.axes {
			l.rows[i] = append(l.rows[i], l.sparse(jac.RawRowView(k)))
			if sigma := m.obs[i].sigma(axis); i < have {
				l.add(&l.rows[i][axis], 1/(sigma*sigma))
			}
			k++
		}
	}
	l.eachPrior(func(k int, u float64) { l.addAt(k, math.Pow(l.scale[k]/u, 2)) })
	for k := range w.n {
		l.addAt(k, vague)
	}
	return l
}

// sigma is the standard deviation of the mean along (axis 0) or across the phasor.
func (o *observation) sigma(axis int) float64 {
	if axis == 1 {
		return o.across
	}
	return o.along
}

// rescale takes as scale what each parameter's standard uncertainty would be by
// itself, with everything observed.
func (l *linearised) rescale(jac *mat.Dense) {
	l.scale = make([]float64, l.layout.n)
	k := 0
	for i := range l.m.obs {
		if l.m.obs[i].left {
			continue
		}
		for axis := range l.m.axes {
			sigma := l.m.obs[i].sigma(axis)
			for column, d := range jac.RawRowView(k) {
				l.scale[column] += math.Pow(d/sigma, 2)
			}
			k++
		}
	}
	l.eachPrior(func(k int, u float64) { l.scale[k] += 1 / (u * u) })
	for k, x := range l.scale {
		if l.scale[k] = 1; x > 0 {
			l.scale[k] = 1 / math.Sqrt(x)
		}
	}
}

// eachPrior passes on what is known of single parameters beforehand.
func (l *linearised) eachPrior(do func(k int, u float64)) {
	for i, in := range l.m.forward.inputs {
		do(l.layout.inputs+i, in.U)
	}
	if x := l.m.plan.Fit.SeriesExpected; x != nil && x.U() > 0 {
		do(l.layout.series, x.U())
	}
}

func (l *linearised) sparse(row []float64) (r sparseRow) {
	for k, d := range row {
		if d != 0 {
			r.column, r.d = append(r.column, k), append(r.d, d*l.scale[k])
		}
	}
	return r
}

// add adds the information of one row, of a weight.
func (l *linearised) add(r *sparseRow, weight float64) {
	for a, i := range r.column {
		for b, j := range r.column[:a+1] {
			l.information.SetSym(i, j, l.information.At(i, j)+weight*r.d[a]*r.d[b])
		}
	}
}

func (l *linearised) addAt(k int, information float64) {
	l.information.SetSym(k, k, l.information.At(k, k)+information)
}

// spares tells whether a step keeps within the ratings of the input and of the arms.
func (f *forward) spares(step int) bool {
	d := &f.drops[f.of[step]]
	if limit := f.plan.Detector.InputMax; limit > 0 && d.stated > limit {
		return false
	}
	if !slices.ContainsFunc(f.plan.Arms, func(a plan.Arm) bool { return a.MaxPower > 0 }) {
		return true
	}
	emf, _, _ := f.emf[d.amplitude].value(f.stated())
	s := &f.states[d.state]
	response := s.stated.Solve(s.frequency, &f.ws)
	for arm, watts := range response.Power(emf).Arms {
		if limit := f.plan.Arms[arm].MaxPower; limit > 0 && watts > limit {
			return false
		}
	}
	return true
}
