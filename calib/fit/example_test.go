package fit_test

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"rungproof/calib/fit"
)

// The gain of an amplifier from two readings of its output, each known to 3 mV, and an input of 0.1 V known to 40 µV.
// The input's uncertainty, 0.04 % of itself, is common to both readings and cannot be averaged away; the readings bring
// 3 mV/√2 of 10 V, 0.021 % (GUM 5.1.6).
func ExampleSolve() {
	readings := []float64{10.003, 9.997} // V
	result, err := fit.Solve(fit.Problem{
		N: 2, Sigma: []float64{0.003, 0.003},
		Start: []float64{90, 0.1}, // gain, input in V
		Residuals: func(p, r []float64, jac *mat.Dense) {
			gain, input := p[0], p[1]
			for i, reading := range readings {
				r[i] = reading - gain*input
				jac.SetRow(i, []float64{input, gain})
			}
		},
		Priors: []fit.Prior{{Param: 1, Value: 0.1, U: 40e-6}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("gain %.3f, u %.3f, of which the readings bring %.3f\n",
		result.P[0], math.Sqrt(result.Cov.At(0, 0)), math.Sqrt(result.CovObserved.At(0, 0)))
	fmt.Printf("χ² %.1f with %d degree of freedom\n", result.ChiSquared, result.DOF)
	// Output:
	// gain 100.000, u 0.045, of which the readings bring 0.021
	// χ² 2.0 with 1 degree of freedom
}
