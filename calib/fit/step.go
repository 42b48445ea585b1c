package fit

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// newton gives the full step Δp, the shortest in p/scale where directions are not determined, and its length in
// standard uncertainties: no parameter, and no combination of parameters, moves by more than that times its own. The
// length squared is what χ² would fall by if the problem were linear.
func (s *system) newton() (step []float64, length float64) {
	c := s.z
	if s.left != nil {
		c = mat.NewVecDense(s.rank, nil)
		c.MulVec(s.left.T(), s.z)
	}
	x := mat.NewVecDense(len(s.scale), nil)
	x.MulVec(s.t, c)
	return s.unscaled(x), mat.Norm(c, 2)
}

// damped gives the step that minimises |A·D·x − b|² + λ|x|².
func (s *system) damped(lambda float64) []float64 {
	m := len(s.scale)
	stack := mat.NewDense(2*m, m, nil)
	stack.Slice(0, m, 0, m).(*mat.Dense).Copy(s.r)
	for k := range m {
		stack.Set(m+k, k, math.Sqrt(lambda))
	}
	rhs := mat.NewVecDense(2*m, nil)
	rhs.SliceVec(0, m).(*mat.VecDense).CopyVec(s.z)
	var qr mat.QR
	qr.Factorize(stack)
	x := mat.NewVecDense(m, nil)
	_ = qr.SolveVecTo(x, false, rhs) // its only error is a warning of the condition, which λ bounds
	return s.unscaled(x)
}

func (s *system) unscaled(x *mat.VecDense) []float64 {
	step := make([]float64, len(s.scale))
	for k, scale := range s.scale {
		step[k] = scale * x.AtVec(k)
	}
	return step
}
