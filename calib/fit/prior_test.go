package fit

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// An observation and a prior of one parameter give the mean weighted by 1/u², with 1/u² = 1/σ² + 1/U² (common textbook
// formula).
func TestObservationAndPriorGiveWeightedMean(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		value := rapid.Float64Range(-10, 10)
		y, v := value.Draw(t, "y"), value.Draw(t, "v")
		exponent := rapid.Float64Range(-4, 4)
		sigma, U := math.Pow(10, exponent.Draw(t, "log σ")), math.Pow(10, exponent.Draw(t, "log U"))
		p := linear([][]float64{{1}}, []float64{y}, []float64{sigma})
		p.Priors = []Prior{{Value: v, U: U}}
		r, err := Solve(p)
		if err != nil {
			t.Fatal(err)
		}
		w, W := 1/(sigma*sigma), 1/(U*U)
		variance := 1 / (w + W)
		within(t, "mean", r.P[0], (w*y+W*v)*variance, arrived*math.Sqrt(variance)+1e-14*(math.Abs(y)+math.Abs(v)))
		const digits = 1e-14 // of the orthonormal basis, whose entries are √h
		u, h, H := math.Sqrt(variance), w*variance, W*variance
		relative(t, "variance", r.Cov.At(0, 0), variance, digits)
		within(t, "variance due to the observation", r.CovObserved.At(0, 0), h*variance, digits*math.Sqrt(h)*variance)
		within(t, "leverage", r.Leverage[0], h, digits*math.Sqrt(h))
		within(t, "influence", r.Influence(0)[0], h, digits*u/sigma)
		within(t, "influence of the prior", r.PriorInfluence(0)[0], H, digits*u/U)
		within(t, "√χ²", math.Sqrt(r.ChiSquared), math.Abs(y-v)/math.Hypot(sigma, U),
			arrived+1e-14*(math.Abs(y)+math.Abs(v))/min(sigma, U))
	})
}

// A prior on top of a fit moves estimate and covariance by the Kalman gain: with c the column of the parameter in the
// covariance without it, Δp = c·(v − p)/(c_k + U²) and ΔCov = −c·cᵀ/(c_k + U²) (common textbook formula).
func TestPriorUpdatesEstimate(t *testing.T) {
	x, y := []float64{1, 2, 3, 4, 5, 6}, []float64{3.2, 4.3, 7.6, 8.6, 11.7, 12.8}
	p := polynomial(x, y, fromWeights(4, 4, 4, 1, 1, 1), 0, 2)
	before := mustSolve(t, p)
	for _, U := range []float64{1e-9, 1e-6, 1e-3, 1, 1e3, 1e6} {
		t.Run(fmt.Sprint(U), func(t *testing.T) {
			prior := Prior{Param: 1, Value: 2.5, U: U}
			p.Priors = []Prior{prior}
			r := mustSolve(t, p)
			innovation := before.Cov.At(1, 1) + U*U
			for i := range r.P {
				gain := before.Cov.At(i, 1) / innovation
				within(t, fmt.Sprintf("p%d", i), r.P[i], before.P[i]+gain*(prior.Value-before.P[1]), arrived*u(before, i))
				for k := range r.P {
					within(t, fmt.Sprintf("cov(%d, %d)", i, k), r.Cov.At(i, k),
						before.Cov.At(i, k)-gain*before.Cov.At(1, k), 1e-12*u(before, i)*u(before, k))
				}
			}
			relative(t, "u of the parameter with the prior", u(r, 1), math.Sqrt(before.Cov.At(1, 1)/innovation)*U, 1e-12)
		})
	}
}

func TestFewerObservationsThanParameters(t *testing.T) {
	p := linear([][]float64{{1, 1, 1}}, []float64{10}, []float64{0.1})
	p.Priors = []Prior{{0, 2, 0.3}, {1, 3, 0.4}}
	r := mustSolve(t, p)
	if r.Rank != 3 || r.DOF != 0 || r.Undetermined != nil {
		t.Fatalf("rank %d, %d degrees of freedom, undetermined %v", r.Rank, r.DOF, r.Undetermined)
	}
	for k, want := range []float64{2, 3, 5} {
		within(t, "parameter", r.P[k], want, 1e-13)
	}
	relative(t, "u of the difference", u(r, 2), math.Sqrt(0.1*0.1+0.3*0.3+0.4*0.4), 1e-13) // GUM 5.1.2
	relative(t, "its part from the observation", math.Sqrt(r.CovObserved.At(2, 2)), 0.1, 1e-13)
}

// The covariance is what the observations and the priors bring through the derivatives of the estimate: Cov = K·S·Kᵀ +
// K_prior·U²·K_priorᵀ (GUM 5.2.2).
func TestCovarianceIsWhatInputsBring(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, m := rapid.IntRange(1, 12).Draw(t, "n"), rapid.IntRange(1, 6).Draw(t, "m")
		r, err := Solve(sinhOfSum(n, m, m, 1, rapid.Uint64().Draw(t, "seed")))
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for _, h := range r.Leverage {
			if sum += h; h < 0 || h > 1 {
				t.Errorf("leverage %g", h)
			}
		}
		if sum > float64(r.Rank)+1e-12 {
			t.Errorf("leverages sum to %g with rank %d", sum, r.Rank)
		}
		for i := range m {
			for k := range m {
				observed := propagate(r.Influence(i), r.Influence(k), r.sigma)
				tolerance := 1e-12 * math.Sqrt(r.Cov.At(i, i)*r.Cov.At(k, k))
				within(t, "covariance due to observations", r.CovObserved.At(i, k), observed, tolerance)
				known := propagate(r.PriorInfluence(i), r.PriorInfluence(k), r.priorU)
				within(t, "covariance", r.Cov.At(i, k), observed+known, tolerance)
			}
		}
	})
}

func propagate(a, b, u []float64) float64 {
	sum := 0.0
	for i := range u {
		sum += a[i] * b[i] * u[i] * u[i]
	}
	return sum
}

// The influences are the derivatives of the whole solution where the residuals are small beside the curvature; here
// they vanish.
func TestInfluenceIsDerivativeOfSolution(t *testing.T) {
	const n, m, priors = 7, 4, 2
	shift := make([]float64, n)
	p := sinhOfSum(n, m, priors, 0, 5)
	plain := p.Residuals
	p.Residuals = func(params, r []float64, jac *mat.Dense) {
		plain(params, r, jac)
		for i := range r {
			r[i] += shift[i]
		}
	}
	r := mustSolve(t, p)
	const h = 1e-6
	slope := func(move func(by float64)) []float64 {
		move(h)
		up := mustSolve(t, p).P
		move(-2 * h)
		down := mustSolve(t, p).P
		move(h)
		out := make([]float64, m)
		for k := range out {
			out[k] = (up[k] - down[k]) / (2 * h)
		}
		return out
	}
	for i := range n {
		for k, want := range slope(func(by float64) { shift[i] += by }) {
			within(t, fmt.Sprintf("influence of observation %d on %d", i, k), r.Influence(k)[i], want, 1e-7)
		}
	}
	for j := range priors {
		for k, want := range slope(func(by float64) { p.Priors[j].Value += by }) {
			within(t, fmt.Sprintf("influence of prior %d on %d", j, k), r.PriorInfluence(k)[j], want, 1e-7)
		}
	}
}
