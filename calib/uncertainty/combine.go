package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Combine is the combined standard uncertainty of correlated inputs (GUM 5.2.2,
// equation 16),
//
//	u² = Σ_i Σ_j c_i·c_j·u_i·u_j·r_ij
//
// from sensitivities c, standard uncertainties u and correlation coefficients r
// with ones on the diagonal.
func Combine(c, u []float64, r *mat.SymDense) float64 {
	if len(u) != len(c) || r.SymmetricDim() != len(c) {
		panic("uncertainty: as many uncertainties and rows of correlations as sensitivities are needed")
	}
	variance, size := 0.0, 0.0
	for i := range c {
		for j := range c {
			term := c[i] * u[i] * c[j] * u[j] * r.At(i, j)
			variance += term
			size += math.Abs(term)
		}
	}
	if variance < -1e-12*size { // no more than rounding is below zero
		panic("uncertainty: no quantities have these correlations: their matrix is not positive semi-definite")
	}
	return math.Sqrt(max(variance, 0))
}
