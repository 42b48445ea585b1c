package fit

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// rearranged is p with its observations in another order and its parameters in other units: new = old/unit.
func rearranged(p Problem, order []int, unit []float64) Problem {
	q := p
	q.Sigma, q.Start, q.Priors = make([]float64, p.N), make([]float64, len(p.Start)), append([]Prior(nil), p.Priors...)
	for i, from := range order {
		q.Sigma[i] = p.Sigma[from]
	}
	for k := range q.Start {
		q.Start[k] = p.Start[k] / unit[k]
	}
	for j, prior := range q.Priors {
		q.Priors[j].Value /= unit[prior.Param]
		q.Priors[j].U /= unit[prior.Param]
	}
	oldR, oldJac := make([]float64, p.N), mat.NewDense(p.N, len(p.Start), nil)
	q.Residuals = func(params, r []float64, jac *mat.Dense) {
		old := make([]float64, len(params))
		for k := range old {
			old[k] = params[k] * unit[k]
		}
		oldJac.Zero()
		p.Residuals(old, oldR, oldJac)
		for i, from := range order {
			r[i] = oldR[from]
			for k := range old {
				jac.Set(i, k, oldJac.At(from, k)*unit[k])
			}
		}
	}
	return q
}

func TestOrderAndUnitsDoNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, m := rapid.IntRange(2, 15).Draw(t, "n"), rapid.IntRange(1, 6).Draw(t, "m")
		p := sinhOfSum(n, m, m-1, 1, rapid.Uint64().Draw(t, "seed"))
		order := make([]int, n)
		for i := range order {
			order[i] = i
		}
		order = rapid.Permutation(order).Draw(t, "order")
		unit := make([]float64, m)
		for k := range unit {
			unit[k] = math.Pow(10, rapid.Float64Range(-15, 15).Draw(t, "log unit"))
		}
		a, err := Solve(p)
		b, err2 := Solve(rearranged(p, order, unit))
		if err != nil || err2 != nil {
			t.Fatal(err, err2)
		}
		if a.Rank != b.Rank || a.DOF != b.DOF {
			t.Fatalf("rank %d and %d", a.Rank, b.Rank)
		}
		relative(t, "χ²", b.ChiSquared, a.ChiSquared, 1e-9)
		for k := range m {
			within(t, fmt.Sprintf("p%d", k), b.P[k]*unit[k], a.P[k], 10*arrived*u(a, k))
			for l := range m {
				within(t, "covariance", b.Cov.At(k, l)*unit[k]*unit[l], a.Cov.At(k, l), 1e-7*u(a, k)*u(a, l))
			}
		}
		for i, from := range order {
			within(t, "residual", b.Residual[i], a.Residual[from], 1e-8*p.Sigma[from])
			within(t, "leverage", b.Leverage[i], a.Leverage[from], 1e-7)
		}
	})
}

// Without priors the leverages sum to the rank (trace of a projection), determined or not.
func TestLeveragesSumToRank(t *testing.T) {
	for _, p := range []Problem{sinhOfSum(12, 4, 0, 1, 1), sinhOfSum(3, 3, 0, 1, 2), twins(1, 0), twins(1, 1e-8)} {
		r := mustSolve(t, p)
		sum := 0.0
		for _, h := range r.Leverage {
			sum += h
		}
		within(t, "sum of leverages", sum, float64(r.Rank), 1e-12)
	}
}

// A straight line with an offset of nanovolts and a slope of a megohm, from currents of femtoamperes; the readings lie
// on it.
func TestWidelyDifferentScales(t *testing.T) {
	var current, voltage []float64
	for i := range 10 {
		current = append(current, float64(i)*1e-15)
		voltage = append(voltage, 1e-9+1e6*current[i])
	}
	r := mustSolve(t, polynomial(current, voltage, all(10, 1e-13), 0, 1))
	relative(t, "offset", r.P[0], 1e-9, 1e-12)
	relative(t, "slope", r.P[1], 1e6, 1e-12)
	// u = σ/√Σ(x − x̄)² (common textbook formula); the spread of 0 to 9 is 82.5
	relative(t, "u(slope)", u(r, 1), 1e-13/(1e-15*math.Sqrt(82.5)), 1e-12)
}
