package fit

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// Result is the estimate, its covariance and how well each observation agrees with it.
type Result struct {
	P []float64 // m estimates

	// Cov is the covariance of the estimates, m × m. A parameter that is not determined has variance +Inf, and its
	// covariances are NaN: they depend on what one would come to know. Variance gives that of combinations that are
	// determined.
	Cov *mat.SymDense

	// CovObserved is the part of Cov due to the observations, K·S·Kᵀ, where K is the derivative of the estimates with
	// respect to the observations and S holds their variances. The rest of Cov is due to the priors.
	CovObserved *mat.SymDense

	ChiSquared float64 // the priors' terms included
	DOF        int     // observations + priors − rank

	Residual     []float64 // n: observed − predicted
	Standardised []float64 // n: the residual divided by its standard uncertainty σ·√(1−h); 0 where h = 1
	Leverage     []float64 // n: h, the share of an observation in its own prediction, 0 to 1

	Rank int // number of independent combinations of the parameters that are determined

	// Undetermined holds m − rank orthogonal unit vectors v of p/scale: a step that moves each parameter k by
	// v[k]·Scale[k] changes, to first order, nothing that was observed or is known beforehand. The largest component is positive. Nil at
	// full rank.
	Undetermined [][]float64

	// Scale is Problem.Scale or, m values, each parameter's standard uncertainty with all others known (1 where the
	// parameter has no effect).
	Scale []float64

	Iterations int     // steps taken
	Step       float64 // length of the step that would come next, in standard uncertainties
	Converged  bool

	sigma, priorU []float64
	gain          *mat.Dense // m × rank; gain·gainᵀ is the covariance
	basis         *mat.Dense // rank × (observations, then priors), orthonormal rows; gain·basis = ∂P/∂(observation/σ)
}

func (p *Problem) result(at point, s *system, iterations int, step float64, converged bool) *Result {
	m := len(p.Start)
	r := &Result{
		P: at.p, ChiSquared: at.chi2, DOF: p.N + len(p.Priors) - s.rank,
		Residual: at.r, Standardised: make([]float64, p.N), Leverage: make([]float64, p.N),
		Rank: s.rank, Undetermined: s.null, Scale: s.scale,
		Iterations: iterations, Step: step, Converged: converged,
		sigma: append([]float64(nil), p.Sigma...), basis: s.basis(), gain: mat.NewDense(m, s.rank, nil),
	}
	for _, prior := range p.Priors {
		r.priorU = append(r.priorU, prior.U)
	}
	for _, v := range r.Undetermined {
		orient(v)
	}
	r.gain.Apply(func(k, _ int, t float64) float64 { return s.scale[k] * t }, s.t)

	for j := range r.Rank {
		for i, q := range r.basis.RawRowView(j)[:p.N] {
			r.Leverage[i] += q * q
		}
	}
	for i, h := range r.Leverage {
		if 1-h > 1e-10 { // below that the residual is rounding
			r.Standardised[i] = at.r[i] / (p.Sigma[i] * math.Sqrt(1-h))
		}
		r.Leverage[i] = min(h, 1)
	}

	r.Cov = mat.NewSymDense(m, nil)
	r.Cov.SymOuterK(1, r.gain)
	share := mat.NewSymDense(s.rank, nil)
	share.SymOuterK(1, r.basis.Slice(0, s.rank, 0, p.N))
	var half, whole mat.Dense
	half.Mul(r.gain, share)
	whole.Mul(&half, r.gain.T())
	r.CovObserved = mat.NewSymDense(m, nil)
	for i := range m {
		for k := i; k < m; k++ {
			r.CovObserved.SetSym(i, k, (whole.At(i, k)+whole.At(k, i))/2)
		}
	}
	r.markUndetermined()
	return r
}

func (r *Result) markUndetermined() {
	for k := range r.P {
		if r.Determined(k) {
			continue
		}
		for _, c := range []*mat.SymDense{r.Cov, r.CovObserved} {
			for i := range r.P {
				c.SetSym(i, k, math.NaN())
			}
		}
	}
	for k := range r.P {
		if !r.Determined(k) {
			r.Cov.SetSym(k, k, math.Inf(1))
			r.CovObserved.SetSym(k, k, math.Inf(1))
		}
	}
}

// Determined reports whether parameter k has no component in the undetermined directions.
func (r *Result) Determined(k int) bool {
	g := make([]float64, len(r.P))
	g[k] = 1
	return r.determined(g)
}

// Variance gives the variance of the combination Σ g[k]·P[k]: +Inf where it is not determined.
func (r *Result) Variance(g []float64) float64 {
	if len(g) != len(r.P) {
		panic("fit: a combination needs one factor for each parameter")
	}
	if !r.determined(g) {
		return math.Inf(1)
	}
	var v mat.VecDense
	v.MulVec(r.gain.T(), mat.NewVecDense(len(g), g))
	return mat.Dot(&v, &v)
}

// determined allows for the rounding of the undetermined directions, which are known to about rankLimit divided by the
// smallest relative singular value that does count: 1e-6 is that for one of 1e-5.
func (r *Result) determined(g []float64) bool {
	size := 0.0
	for k := range g {
		size = math.Hypot(size, g[k]*r.Scale[k])
	}
	for _, v := range r.Undetermined {
		component := 0.0
		for k := range g {
			component += g[k] * r.Scale[k] * v[k]
		}
		if math.Abs(component) > 1e-6*size {
			return false
		}
	}
	return true
}

// Influence gives ∂P[k]/∂(observation i), n values: the change of the estimate with each observation, to first order in
// the residuals' share of the model's curvature (exact for a linear model). For a parameter that is not determined it
// is the change that Solve would make.
func (r *Result) Influence(k int) []float64 { return r.influence(k, 0, r.sigma) }

// PriorInfluence gives ∂P[k]/∂(prior value j), one value for each prior.
func (r *Result) PriorInfluence(k int) []float64 { return r.influence(k, len(r.sigma), r.priorU) }

func (r *Result) influence(k, first int, u []float64) []float64 {
	out := make([]float64, len(u))
	for j, g := range r.gain.RawRowView(k) {
		floats.AddScaled(out, g, r.basis.RawRowView(j)[first:first+len(u)])
	}
	floats.Div(out, u)
	return out
}

// orient turns v so that its largest component, the first of them, is positive.
func orient(v []float64) {
	largest := 0.0
	for _, x := range v {
		if math.Abs(x) > math.Abs(largest)*(1+1e-6) {
			largest = x
		}
	}
	if largest < 0 {
		for k := range v {
			v[k] = -v[k]
		}
	}
}
