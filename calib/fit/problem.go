// Package fit estimates parameters by non-linear least squares from observations and from prior knowledge of the
// parameters themselves.
//
// There are n observations with standard uncertainties σ and m parameters p; a prior value of a parameter, with its
// uncertainty U, is one more observation, of that parameter alone. The estimate minimises
//
//	χ² = Σ ((observed_i − predicted_i(p)) / σ_i)² + Σ ((prior_j − p_k(j)) / U_j)²
//
// and its covariance is the combined covariance of the result (GUM, JCGM 100:2008, 5.2), from the stated uncertainties
// as they are: it is not rescaled by χ²/dof. All observations and priors are independent of each other.
//
// Each quantity is in whatever unit the caller chose; residuals are observed − predicted; all uncertainties are
// standard uncertainties. The method is Gauss–Newton, damped after Levenberg and Marquardt (J. SIAM 11 (1963) 431)
// where a full step would make χ² rise, on an orthogonal factorisation of the weighted rows. Slices of a wrong length
// panic; values that cannot be used and a fit that does not converge are errors.
package fit

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Problem is what is observed, what is known beforehand and how the one follows from the other.
type Problem struct {
	N     int       // number of observations
	Sigma []float64 // n standard uncertainties of the observations
	Start []float64 // m values to start from; a combination of parameters that is not determined stays where it starts

	// Scale is the typical size of each parameter, in which a direction counts as determined or not (see
	// Result.Undetermined) and a step as short. Nil takes the uncertainty that each parameter would have with all others known, and is the
	// better choice unless a whole column of the Jacobian may be nothing but rounding.
	Scale []float64

	// Residuals fills r, of length n, with observed − predicted and jac, n × m and zero before the call, with
	// ∂predicted/∂p at p. It must not change p. An observation may be a rotated pair, by an angle that depends on p
	// too, as long as r and jac are rotated alike.
	Residuals func(p []float64, r []float64, jac *mat.Dense)

	Priors []Prior
}

// Prior is a value that one parameter is known to have from elsewhere. A parameter may have none, one or several.
type Prior struct {
	Param int     // index of the parameter
	Value float64 // in the parameter's unit
	U     float64 // its standard uncertainty, > 0
}

func (p *Problem) check() error {
	m := len(p.Start)
	switch {
	case p.N < 1 || m < 1:
		panic("fit: a problem needs at least one observation and one parameter")
	case len(p.Sigma) != p.N:
		panic(fmt.Sprintf("fit: %d uncertainties for %d observations", len(p.Sigma), p.N))
	case p.Scale != nil && len(p.Scale) != m:
		panic(fmt.Sprintf("fit: %d scales for %d parameters", len(p.Scale), m))
	}
	for i, s := range p.Sigma {
		if !positive(s) {
			return fmt.Errorf("fit: the standard uncertainty of observation %d is %g; it must be positive and finite", i, s)
		}
	}
	for k, v := range p.Start {
		if !finite(v) {
			return fmt.Errorf("fit: the start value of parameter %d is %g; it must be finite", k, v)
		}
	}
	for k, s := range p.Scale {
		if !positive(s) {
			return fmt.Errorf("fit: the scale of parameter %d is %g; it must be positive and finite", k, s)
		}
	}
	for j, prior := range p.Priors {
		if prior.Param < 0 || prior.Param >= m {
			panic(fmt.Sprintf("fit: prior %d is for parameter %d of %d", j, prior.Param, m))
		}
		if !finite(prior.Value) || !positive(prior.U) {
			return fmt.Errorf("fit: the prior value of parameter %d is %g with standard uncertainty %g; "+
				"both must be finite, the uncertainty positive",
				prior.Param, prior.Value, prior.U)
		}
	}
	return nil
}

// point is a set of parameter values and how well the observations and priors agree with it.
type point struct {
	p    []float64
	r    []float64 // n: observed − predicted
	b    []float64 // the same in standard uncertainties, then the priors' (value − p)/U, then zeros up to length m
	chi2 float64   // |b|²
}

// at evaluates the problem; jac is left holding the derivatives at params.
func (p *Problem) at(params []float64, jac *mat.Dense) point {
	pt := point{p: params, r: make([]float64, p.N), b: make([]float64, max(p.N+len(p.Priors), len(params)))}
	jac.Zero()
	p.Residuals(params, pt.r, jac)
	for i, r := range pt.r {
		pt.b[i] = r / p.Sigma[i]
	}
	for j, prior := range p.Priors {
		pt.b[p.N+j] = (prior.Value - params[prior.Param]) / prior.U
	}
	for _, b := range pt.b {
		pt.chi2 += b * b
	}
	return pt
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

func positive(x float64) bool { return x > 0 && finite(x) }
