package fit

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// certified is what NIST states of a data set: coefficients, their standard deviations, and the residual standard
// deviation by which those are scaled.
type certified struct {
	name      string
	problem   Problem
	b, sd     []float64
	rsd       float64
	tolerance float64
}

func (c certified) check(t *testing.T) {
	r := mustSolve(t, c.problem)
	rsd := math.Sqrt(r.ChiSquared / float64(r.DOF)) // all sigmas are 1
	relative(t, "residual standard deviation", rsd, c.rsd, c.tolerance)
	for k := range c.b {
		relative(t, fmt.Sprintf("b%d", k), r.P[k], c.b[k], c.tolerance)
		relative(t, fmt.Sprintf("sd of b%d", k), rsd*u(r, k), c.sd[k], c.tolerance)
	}
}

func TestLinearReferenceData(t *testing.T) {
	var pontiusX, noint1X, noint1Y []float64
	for i := range 40 {
		pontiusX = append(pontiusX, 150000*float64(i%20+1))
	}
	for i := range 11 {
		noint1X, noint1Y = append(noint1X, 60+float64(i)), append(noint1Y, 130+float64(i))
	}
	for _, c := range []certified{
		{"Norris", polynomial(norrisX, norrisY, all(36, 1), 0, 1),
			[]float64{-0.262323073774029, 1.00211681802045},
			[]float64{0.232818234301152, 0.429796848199937e-3}, 0.884796396144373, 1e-12},
		{"Pontius", polynomial(pontiusX, pontiusY, all(40, 1), 0, 2),
			[]float64{0.673565789473684e-3, 0.732059160401003e-6, -0.316081871345029e-14},
			[]float64{0.107938612033077e-3, 0.157817399981659e-9, 0.486652849992036e-16}, 0.205177424076185e-3, 1e-11},
		{"NoInt1", polynomial(noint1X, noint1Y, all(11, 1), 1, 1),
			[]float64{2.07438016528926}, []float64{0.165289256198347e-1}, 3.56753034006338, 1e-13},
		{"NoInt2", polynomial([]float64{4, 5, 6}, []float64{3, 4, 4}, all(3, 1), 1, 1),
			[]float64{0.727272727272727}, []float64{0.420827318078432e-1}, 0.369274472937998, 1e-13},
		// Filip's powers of x, rounded to float64, lose nine of the sixteen digits; centred x would not have the
		// certified coefficients.
		{"Filip", polynomial(filipX, filipY, all(82, 1), 0, 10), filipB, filipSD, 0.334801051324544e-2, 1e-7},
	} {
		t.Run(c.name, c.check)
	}
}

func TestNonlinearReferenceData(t *testing.T) {
	for _, start := range [][]float64{{500, 1e-4}, {250, 5e-4}} {
		t.Run(fmt.Sprint(start), certified{"Misra1a", Problem{
			N: 14, Sigma: all(14, 1), Start: start,
			Residuals: func(p, r []float64, jac *mat.Dense) { // y = b1·(1 − e^(−b2·x))
				for i, x := range misra1aX {
					fall := math.Exp(-p[1] * x)
					r[i] = misra1aY[i] - p[0]*(1-fall)
					jac.SetRow(i, []float64{1 - fall, p[0] * x * fall})
				}
			}},
			[]float64{2.3894212918e+02, 5.5015643181e-04},
			[]float64{2.7070075241e+00, 7.2668688436e-06}, 1.0187876330e-01, 1e-9}.check)
	}
}
