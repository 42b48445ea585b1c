package fit

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/floats/scalar"
	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// linear is the problem y = Σ p_k·x_k, one row of x an observation.
func linear(x [][]float64, y, sigma []float64) Problem {
	return Problem{N: len(y), Sigma: sigma, Start: make([]float64, len(x[0])),
		Residuals: func(p, r []float64, jac *mat.Dense) {
			for i, row := range x {
				r[i] = y[i]
				for k, x := range row {
					r[i] -= p[k] * x
				}
				jac.SetRow(i, row)
			}
		}}
}

// polynomial is y = Σ p_k·x^k, from power first to power last.
func polynomial(x, y, sigma []float64, first, last int) Problem {
	rows := make([][]float64, len(x))
	for i := range x {
		for power := first; power <= last; power++ {
			rows[i] = append(rows[i], math.Pow(x[i], float64(power)))
		}
	}
	return linear(rows, y, sigma)
}

// sinhOfSum is a mildly non-linear problem, y = sinh(Σ x·p), in which every observation depends on every parameter; the
// first parameters have priors. The observations are off by normal deviates of standard deviation noise·σ.
func sinhOfSum(n, m, priors int, noise float64, seed uint64) Problem {
	rng := rand.New(rand.NewPCG(seed, 0))
	const sigma = 0.01
	x, y := mat.NewDense(n, m, nil), make([]float64, n)
	truth := make([]float64, m)
	for k := range truth {
		truth[k] = rng.NormFloat64() / math.Sqrt(float64(m))
	}
	for i := range y {
		for k := range m {
			x.Set(i, k, rng.NormFloat64())
		}
		y[i] = math.Sinh(floats.Dot(x.RawRowView(i), truth)) + noise*sigma*rng.NormFloat64()
	}
	p := Problem{N: n, Sigma: all(n, sigma), Start: make([]float64, m),
		Residuals: func(p, r []float64, jac *mat.Dense) {
			for i := range r {
				row := x.RawRowView(i)
				sum := floats.Dot(row, p)
				r[i] = y[i] - math.Sinh(sum)
				floats.ScaleTo(jac.RawRowView(i), math.Cosh(sum), row)
			}
		}}
	for k := range priors {
		p.Priors = append(p.Priors, Prior{Param: k, Value: truth[k], U: sigma})
	}
	return p
}

func all(n int, value float64) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = value
	}
	return out
}

func mustSolve(t rapid.TB, p Problem) *Result {
	t.Helper()
	r, err := Solve(p)
	if err != nil {
		t.Fatal(err)
	}
	if !r.Converged {
		t.Fatal("no error, and not converged")
	}
	return r
}

func u(r *Result, k int) float64 { return math.Sqrt(r.Cov.At(k, k)) }

// within fails where got differs from want by more than the tolerance.
func within(t rapid.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %.15g, want %.15g within %.2g", what, got, want, tolerance)
	}
}

// relative fails where got differs from want by more than a share of want.
func relative(t rapid.TB, what string, got, want, share float64) {
	t.Helper()
	within(t, what, got, want, share*math.Abs(want))
}

// printed fails where got does not round to the value printed with so many decimals.
func printed(t rapid.TB, what string, got, want float64, decimals int) {
	t.Helper()
	if rounded := scalar.Round(got, decimals); math.Abs(rounded-want) > 1e-3*math.Pow10(-decimals) {
		t.Errorf("%s = %.10g, which rounds to %g; printed %g", what, got, rounded, want)
	}
}

func fromWeights(weights ...float64) []float64 {
	out := make([]float64, len(weights))
	for i, w := range weights {
		out[i] = 1 / math.Sqrt(w)
	}
	return out
}
