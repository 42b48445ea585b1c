package fit

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

var (
	rankX = []float64{1, 2, 3, 4, 5, 6}
	rankY = []float64{3.3, 5.6, 7.1, 9.3, 10.7, 12.1} // ISO/TS 28037:2010, 6.3, whose b and u(b) are recomputed below
)

const slope, uSlope = 1.75714285714286, 0.119522860933439

// twins is the line y = a + (b + c·ratio)·x, in which only the sum of b and c·ratio matters; spoil makes the two
// columns differ.
func twins(ratio, spoil float64) Problem {
	rows := make([][]float64, len(rankX))
	for i, x := range rankX {
		rows[i] = []float64{1, x, ratio * (x + spoil*x*x)}
	}
	return linear(rows, rankY, all(6, 0.5))
}

func TestEqualColumns(t *testing.T) {
	for _, ratio := range []float64{1, 1000, -1e-9, 1.0 / 3} {
		t.Run(fmt.Sprint(ratio), func(t *testing.T) {
			r := mustSolve(t, twins(ratio, 0))
			if r.Rank != 2 || r.DOF != 4 || len(r.Undetermined) != 1 {
				t.Fatalf("rank %d, %d degrees of freedom, undetermined %v", r.Rank, r.DOF, r.Undetermined)
			}
			v := r.Undetermined[0]
			within(t, "a's component", v[0], 0, 1e-12)
			within(t, "b's component", math.Abs(v[1]), math.Sqrt2/2, 1e-12)
			within(t, "what the direction does to the slope", v[1]*r.Scale[1]+v[2]*r.Scale[2]*ratio, 0, 1e-12*r.Scale[1])
			if !r.Determined(0) || r.Determined(1) || r.Determined(2) {
				t.Errorf("determined: %v, %v, %v", r.Determined(0), r.Determined(1), r.Determined(2))
			}
			for _, c := range []*mat.SymDense{r.Cov, r.CovObserved} {
				relative(t, "u(a)", math.Sqrt(c.At(0, 0)), 0.465474668125631, 1e-12) // ISO/TS 28037 6.3, recomputed
				if !math.IsInf(c.At(1, 1), 1) || !math.IsInf(c.At(2, 2), 1) ||
					!math.IsNaN(c.At(0, 1)) || !math.IsNaN(c.At(2, 1)) {
					t.Errorf("covariance %v", mat.Formatted(c))
				}
			}
			sum := []float64{0, 1, ratio}
			relative(t, "slope", r.P[1]+ratio*r.P[2], slope, 1e-12)
			relative(t, "u(slope)", math.Sqrt(r.Variance(sum)), uSlope, 1e-12)
			if v := r.Variance([]float64{0, 1, -ratio}); !math.IsInf(v, 1) {
				t.Errorf("variance of the difference %g", v)
			}
		})
	}
}

func TestUndeterminedDirectionStaysWhereItStarts(t *testing.T) {
	p := twins(1, 0)
	p.Start = []float64{0, 5, 2}
	r := mustSolve(t, p)
	within(t, "b − c", r.P[1]-r.P[2], 3, 1e-12)
	within(t, "b + c", r.P[1]+r.P[2], slope, 1e-12)
}

func TestPriorSettlesEqualColumns(t *testing.T) {
	p := twins(1, 0)
	p.Priors = []Prior{{Param: 2, Value: 0.5, U: 0.2}}
	r := mustSolve(t, p)
	if r.Rank != 3 || r.DOF != 4 {
		t.Fatalf("rank %d, %d degrees of freedom", r.Rank, r.DOF)
	}
	within(t, "b", r.P[1], slope-0.5, 1e-12)
	relative(t, "u(b)", u(r, 1), math.Hypot(uSlope, 0.2), 1e-12)
}

// The columns part as c's differs from b's; u(b) then grows as 1/spoil. The limit stands well apart from both rounding
// and what is separable.
func TestNearlyEqualColumns(t *testing.T) {
	// y = a + (b + c)·x + c·spoil·x²: b + c and c·spoil are the coefficients of a parabola
	parabola := mustSolve(t, polynomial(rankX, rankY, all(6, 0.5), 0, 2))
	for _, spoil := range []float64{1e-3, 1e-6, 1e-8} {
		r := mustSolve(t, twins(1, spoil))
		if r.Rank != 3 {
			t.Fatalf("columns that differ by %g: rank %d", spoil, r.Rank)
		}
		relative(t, fmt.Sprintf("u(c) at %g", spoil), u(r, 2), u(parabola, 2)/spoil, 1e-6)
		relative(t, fmt.Sprintf("u(b + c) at %g", spoil), math.Sqrt(r.Variance([]float64{0, 1, 1})), u(parabola, 1), 1e-6)
	}
	for _, spoil := range []float64{1e-13, 1e-15} {
		if r := mustSolve(t, twins(1, spoil)); r.Rank != 2 {
			t.Errorf("columns that differ by %g: rank %d", spoil, r.Rank)
		}
	}
}

func TestParameterWithoutEffect(t *testing.T) {
	p := linear([][]float64{{1, 0}, {1, 0}}, []float64{3, 5}, all(2, 1))
	p.Start = []float64{0, 7}
	r := mustSolve(t, p)
	if r.Rank != 1 || !r.Determined(0) || r.Determined(1) {
		t.Fatalf("rank %d, determined %v and %v", r.Rank, r.Determined(0), r.Determined(1))
	}
	within(t, "mean", r.P[0], 4, 1e-14)
	relative(t, "variance", r.Cov.At(0, 0), 0.5, 1e-14)
	if r.P[1] != 7 || r.Undetermined[0][0] != 0 || r.Undetermined[0][1] != 1 {
		t.Errorf("parameter %g, direction %v", r.P[1], r.Undetermined[0])
	}
	if _, err := Solve(linear([][]float64{{0}}, []float64{3}, all(1, 1))); err == nil {
		t.Error("nothing depends on any parameter, and no error")
	}
}

func TestFewerObservationsThanParametersWithoutPriors(t *testing.T) {
	r := mustSolve(t, linear([][]float64{{1, 1, 0, 0}, {0, 0, 0, 2}}, []float64{3, 8}, all(2, 0.1)))
	if r.Rank != 2 || r.DOF != 0 || len(r.Undetermined) != 2 {
		t.Fatalf("rank %d, %d degrees of freedom, undetermined %v", r.Rank, r.DOF, r.Undetermined)
	}
	within(t, "the one that is determined", r.P[3], 4, 1e-13)
	relative(t, "its u", u(r, 3), 0.05, 1e-13)
	relative(t, "u of the sum", math.Sqrt(r.Variance([]float64{1, 1, 0, 0})), 0.1, 1e-13)
	for _, h := range r.Leverage {
		within(t, "leverage", h, 1, 1e-13)
	}
}

// In y = a·b·x only the product is determined: u(a·b) is that of the slope through the origin, σ/√Σx².
func TestProductOfParameters(t *testing.T) {
	x, y := []float64{1, 2, 3}, []float64{6.1, 11.9, 18.2}
	r := mustSolve(t, Problem{N: 3, Sigma: all(3, 0.1), Start: []float64{1, 1},
		Residuals: func(p, r []float64, jac *mat.Dense) {
			for i := range x {
				r[i] = y[i] - p[0]*p[1]*x[i]
				jac.SetRow(i, []float64{p[1] * x[i], p[0] * x[i]})
			}
		}})
	within(t, "a·b", r.P[0]*r.P[1], (6.1+2*11.9+3*18.2)/14, 1e-9)
	relative(t, "u(a·b)", math.Sqrt(r.Variance([]float64{r.P[1], r.P[0]})), 0.1/math.Sqrt(14), 1e-9)
	if r.Determined(0) || r.Determined(1) {
		t.Error("a factor counts as determined")
	}
}

// A column that is all rounding looks sound at its own scale, not at the size that its parameter is known to have.
func TestScaleUnmasksRounding(t *testing.T) {
	p := linear([][]float64{{1, 1e-17}, {1, -2e-17}, {1, 0}}, []float64{3, 5, 4}, all(3, 1))
	if r := mustSolve(t, p); r.Rank != 2 {
		t.Errorf("rank %d without a scale", r.Rank)
	}
	p.Scale = []float64{1, 1}
	r := mustSolve(t, p)
	if r.Rank != 1 || !r.Determined(0) || r.Determined(1) {
		t.Errorf("rank %d with a scale, determined %v and %v", r.Rank, r.Determined(0), r.Determined(1))
	}
	within(t, "mean", r.P[0], 4, 1e-13)
}
