package fit

import (
	"testing"

	"gonum.org/v1/gonum/mat"
)

// lineInBoth is y = a + b·x with uncertain x: parameters are a, b and the true value of each x, whose prior is the
// stated one.
func lineInBoth(x, ux, y, uy []float64) Problem {
	p := Problem{N: len(y), Sigma: uy, Start: append([]float64{0, 1}, x...),
		Residuals: func(p, r []float64, jac *mat.Dense) {
			a, b, x := p[0], p[1], p[2:]
			for i := range y {
				r[i] = y[i] - (a + b*x[i])
				jac.Set(i, 0, 1)
				jac.Set(i, 1, x[i])
				jac.Set(i, 2+i, b)
			}
		}}
	for i := range x {
		p.Priors = append(p.Priors, Prior{Param: 2 + i, Value: x[i], U: ux[i]})
	}
	return p
}

// ISO/TS 28037:2010, 7.4; the figures with many digits were recomputed at the adjusted points with numpy 1.24.
func TestLineWithUncertainXAndY(t *testing.T) {
	r := mustSolve(t, lineInBoth(
		[]float64{1.2, 1.9, 2.9, 4.0, 4.7, 5.9}, all(6, 0.2),
		[]float64{3.4, 4.4, 7.2, 8.5, 10.8, 13.5}, []float64{0.2, 0.2, 0.2, 0.4, 0.4, 0.4}))
	for _, c := range []struct {
		what              string
		got, printed, num float64
		decimals          int
		tolerance         float64
	}{
		{"a", r.P[0], 0.5788, 0.578822122, 4, 5e-10},
		{"b", r.P[1], 2.1597, 2.159656567, 4, 5e-10},
		{"u(a)", u(r, 0), 0.4764, 0.476420629622, 4, 1e-9},
		{"u(b)", u(r, 1), 0.1355, 0.135547927468, 4, 1e-9},
		{"cov(a, b)", r.Cov.At(0, 1), -0.0577, -0.0577169390985, 4, 1e-9},
		{"χ²", r.ChiSquared, 2.743, 2.74267678973, 3, 1e-9},
	} {
		printed(t, c.what, c.got, c.printed, c.decimals)
		within(t, c.what, c.got, c.num, c.tolerance)
	}
	if r.DOF != 4 || r.Rank != 8 {
		t.Errorf("%d degrees of freedom, rank %d; printed 4, and there are 8 parameters", r.DOF, r.Rank)
	}
}

// Data of Pearson (1901) with the weights 1/u² of York (1966); results of York et al., Am. J. Phys. 72 (2004) 367, with
// more digits from York's iteration in numpy 1.24 (scipy 1.10's ODR agrees to 7 digits). The a-priori uncertainties as
// printed are from memory.
func TestPearsonsPointsWithYorksWeights(t *testing.T) {
	x := []float64{0.0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4}
	y := []float64{5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5}
	ux := fromWeights(1000, 1000, 500, 800, 200, 80, 60, 20, 1.8, 1)
	uy := fromWeights(1, 1.8, 4, 8, 20, 20, 70, 70, 100, 500)

	r := mustSolve(t, lineInBoth(x, ux, y, uy))
	printed(t, "b", r.P[1], -0.480533, 6)
	printed(t, "a", r.P[0], 5.47991, 5)
	printed(t, "u(b)", u(r, 1), 0.057985, 6)
	printed(t, "u(a)", u(r, 0), 0.294971, 6)
	relative(t, "b", r.P[1], -0.480533407446202, 1e-9)
	relative(t, "a", r.P[0], 5.47991022403287, 1e-9)
	relative(t, "u(b)", u(r, 1), 0.0579850090007744, 1e-8)
	relative(t, "u(a)", u(r, 0), 0.294970735493109, 1e-8)
	relative(t, "cov(a, b)", r.Cov.At(0, 1), -0.0164725446581158, 1e-8)
	relative(t, "χ²", r.ChiSquared, 11.8663531940614, 1e-9)
	if r.DOF != 8 {
		t.Errorf("%d degrees of freedom; published n − 2 = 8", r.DOF)
	}

	// With x taken as exact the slope is another (numpy 1.24).
	r = mustSolve(t, polynomial(x, y, uy, 0, 1))
	relative(t, "b with exact x", r.P[1], -0.610812956583935, 1e-12)
	relative(t, "a with exact x", r.P[0], 6.10010931666576, 1e-12)
	within(t, "u(b) with exact x", u(r, 1), 0.0300874488, 5e-11)
	within(t, "u(a) with exact x", u(r, 0), 0.2046626858, 5e-11)
	printed(t, "χ² with exact x", r.ChiSquared, 34.345, 3)
}
