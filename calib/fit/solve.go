package fit

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

const (
	maxIterations = 100

	// A step shorter than arrived, in standard uncertainties, is not worth taking.
	arrived = 1e-9

	// Below near, a step that is no shorter than the one before, or that cannot make χ² fall, is rounding: where
	// observations are known to more than seven digits of their value the last digits of float64 keep the step above
	// arrived.
	near = 1e-3
)

// Solve finds the estimate. Where it does not converge the error says what was reached and the result, with Converged
// false, describes that point.
func Solve(p Problem) (*Result, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	jac := mat.NewDense(p.N, len(p.Start), nil)
	at := p.at(append([]float64(nil), p.Start...), jac)
	if !finite(at.chi2) {
		return nil, fmt.Errorf("fit: the residuals are not finite at the start values")
	}
	lambda, last := 0.0, math.Inf(1)
	for i := 0; ; i++ {
		s, err := p.linearise(at, jac)
		if err != nil {
			return nil, err
		}
		step, length := s.newton()
		if length <= arrived || length <= near && length >= last {
			return p.result(at, s, i, length, true), nil
		}
		if i < maxIterations {
			next, damping, ok := p.descend(at, s, step, lambda, jac)
			if ok {
				at, lambda, last = next, damping, length
				continue
			}
			if length <= near {
				return p.result(at, s, i, length, true), nil
			}
		}
		return p.result(at, s, i, length, false), fmt.Errorf(
			"fit: not converged after %d iterations: χ² = %.6g, and the next step would be %.2g standard uncertainties",
			i, at.chi2, length)
	}
}

// descend takes the full step, or one so far damped that χ² does not rise. The damping is kept for the next iteration.
// It is raised by little and lowered by much: raised by 10 at a time, it follows a curved valley (Misra1a from its
// first start) in five times as many evaluations.
func (p *Problem) descend(at point, s *system, step []float64, lambda float64, jac *mat.Dense) (point, float64, bool) {
	const first, weakest, strongest = 1e-4, 1e-6, 1e12
	for lambda <= strongest {
		if lambda > 0 {
			step = s.damped(lambda)
		}
		params := make([]float64, len(step))
		for k, d := range step {
			params[k] = at.p[k] + d
		}
		if next := p.at(params, jac); next.chi2 <= at.chi2+s.rounding {
			if lambda /= 5; lambda < weakest {
				lambda = 0
			}
			return next, lambda, true
		}
		lambda = max(first, 3*lambda)
	}
	return at, lambda, false
}
