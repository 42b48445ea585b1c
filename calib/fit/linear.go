package fit

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/lapack"
	"gonum.org/v1/gonum/lapack/lapack64"
	"gonum.org/v1/gonum/mat"
)

// rankLimit is the singular value, relative to the largest, below which a direction counts as not determined. The
// columns are of unit length, so that the units of the parameters play no part (van der Sluis, Numer. Math. 14 (1969)
// 14). Rounding, in the factorisation and in Jacobians that come out of a solved network, makes of two equal columns a
// singular value of 1e-16 to 1e-13; at 1e-11 a parameter is 1e11 times less certain than with the others known, and a
// step has five digits left.
const rankLimit = 1e-11

// blockSize is the number of columns that the factorisation works on at a time.
const blockSize = 64

// system is the problem linearised at a point, each row divided by its standard uncertainty and each column times its
// scale: A·D·x ≈ b with x = Δp/scale. It is factored as A·D = Q·R (Golub and Van Loan, Matrix Computations, 5.2) and,
// where R is not of full rank, R = U·S·Vᵀ. All is stored transposed, a column in one piece: (A·D)ᵀ = L·Qᵀ with L = Rᵀ.
type system struct {
	rows     int            // n + priors, at least m
	lq       blas64.General // (m+1) × rows: L and the Householder vectors of Q; the last row is (Qᵀ·b)ᵀ
	tau      []float64      // the Householder vectors' factors
	scale    []float64      // D: m
	r        *mat.TriDense  // R: m × m
	z        *mat.VecDense  // the first m of Qᵀ·b
	rank     int
	t        *mat.Dense  // m × rank: R⁻¹, or V·S⁻¹ of the determined directions; t·tᵀ is the covariance of p/scale
	left     *mat.Dense  // m × rank: U of the determined directions; nil at full rank
	null     [][]float64 // V of the directions that are not determined
	rounding float64     // of χ²: a rise of no more than that means nothing
}

// linearise takes the derivatives at a point from jac.
func (p *Problem) linearise(at point, jac *mat.Dense) (*system, error) {
	m, rows := len(p.Start), len(at.b)
	s := &system{rows: rows, tau: make([]float64, min(rows, m+1)), scale: make([]float64, m)}
	s.lq = blas64.General{Rows: m + 1, Cols: rows, Stride: rows, Data: make([]float64, (m+1)*rows)}
	for i, sigma := range p.Sigma {
		for k, d := range jac.RawRowView(i) {
			s.column(k)[i] = d / sigma
		}
	}
	for j, prior := range p.Priors {
		s.column(prior.Param)[p.N+j] = 1 / prior.U
	}
	for k := range m {
		norm := floats.Norm(s.column(k), 2)
		if !finite(norm) {
			return nil, fmt.Errorf("fit: a derivative by parameter %d is not finite", k)
		}
		switch s.scale[k] = 1 / norm; {
		case p.Scale != nil:
			s.scale[k] = p.Scale[k]
		case math.IsInf(s.scale[k], 1): // nothing depends on this parameter
			s.scale[k] = 1
		}
		floats.Scale(s.scale[k], s.column(k))
	}
	s.rounding = s.roundingOf(at)
	copy(s.column(m), at.b)
	s.factor()
	return s, s.invert()
}

// column gives column k of A·D, or b for k = m.
func (s *system) column(k int) []float64 { return s.lq.Data[k*s.rows : (k+1)*s.rows] }

// roundingOf bounds the rounding of χ²: each prediction is at least as uncertain as its terms' last digits, and χ² is a
// sum of many terms.
func (s *system) roundingOf(at point) float64 {
	const epsilon = 0x1p-52
	size := make([]float64, s.rows) // of the prediction's terms, in standard uncertainties
	for k, scale := range s.scale {
		for i, a := range s.column(k) {
			size[i] += math.Abs(a * at.p[k] / scale)
		}
	}
	noise := epsilon * floats.Norm(size, 2)
	return noise*(2*math.Sqrt(at.chi2)+noise) + epsilon*float64(s.rows)*at.chi2
}

func (s *system) factor() {
	m := len(s.scale)
	work := make([]float64, blockSize*(m+1))
	lapack64.Gelqf(s.lq, s.tau, work, len(work))
	s.r = mat.NewTriDense(m, mat.Upper, nil)
	for k := range m {
		for i := range k + 1 {
			s.r.SetTri(i, k, s.column(k)[i])
		}
	}
	s.z = mat.NewVecDense(m, append([]float64(nil), s.column(m)[:m]...))
}

// invert finds the rank and with it t. The estimated condition settles the usual case cheaply: it is within a factor m
// of the ratio of the singular values, and the estimate seldom off by more than 3.
func (s *system) invert() error {
	m := len(s.scale)
	rcond := lapack64.Trcon(lapack.MaxColumnSum, s.r.RawTriangular(), make([]float64, 3*m), make([]int, m))
	s.rank = m
	var svd mat.SVD
	if rcond < 10*float64(m)*rankLimit {
		if !svd.Factorize(s.r, mat.SVDThin) {
			return fmt.Errorf("fit: the singular values of the linearised problem could not be found")
		}
		s.rank = svd.Rank(rankLimit)
	}
	switch s.rank {
	case 0:
		return fmt.Errorf("fit: no observation changes with any parameter at the values reached")
	case m:
		var inverse mat.TriDense
		if err := inverse.InverseTri(s.r); err != nil {
			return fmt.Errorf("fit: the linearised problem: %w", err)
		}
		s.t = mat.DenseCopyOf(&inverse)
		return nil
	}
	var u, v mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	values := svd.Values(nil)
	s.left = mat.DenseCopyOf(u.Slice(0, m, 0, s.rank))
	s.t = mat.NewDense(m, s.rank, nil)
	s.t.Apply(func(_, j int, v float64) float64 { return v / values[j] }, v.Slice(0, m, 0, s.rank))
	for j := s.rank; j < m; j++ {
		s.null = append(s.null, mat.Col(nil, j, &v))
	}
	return nil
}

// basis gives an orthonormal basis of what the parameters can do to the rows, rank × rows: (A·D)ᵀ = t⁻ᵀ·basis, so that
// D·t·basis is the derivative of the estimate with respect to the weighted observations and priors. It overwrites lq.
func (s *system) basis() *mat.Dense {
	m := len(s.scale)
	q := blas64.General{Rows: m, Cols: s.rows, Stride: s.rows, Data: s.lq.Data[:m*s.rows]}
	work := make([]float64, blockSize*m)
	lapack64.Orglq(q, s.tau[:m], work, len(work))
	basis := mat.NewDense(m, s.rows, q.Data)
	if s.left == nil {
		return basis
	}
	part := mat.NewDense(s.rank, s.rows, nil)
	part.Mul(s.left.T(), basis)
	return part
}
