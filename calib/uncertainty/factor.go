package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// NormalFactor is the two-sided coverage factor of a normal distribution:
// k with P(|X| ≤ k·u) = coverage.
func NormalFactor(coverage float64) float64 {
	checkCoverage(coverage)
	return -distuv.UnitNormal.Quantile((1 - coverage) / 2)
}

// StudentFactor is the two-sided coverage factor of Student's distribution,
// t_p(ν) of GUM G.3.2. The degrees of freedom need not be whole; where a
// procedure wants them truncated (GUM G.4.1, note 1), truncate before. 0 or +Inf
// stand for infinitely many.
func StudentFactor(coverage, dof float64) float64 {
	z := NormalFactor(coverage)
	switch nu := degrees(dof); {
	case nu > 1e4:
		// Abramowitz and Stegun 26.7.5: the next term is below 1e-11. The library
		// loses digits with ν, and has none left when it is infinite.
		z2 := z * z
		return z * (1 + (z2+1)/(4*nu) + (z2*(5*z2+16)+3)/(96*nu*nu))
	default:
		return -distuv.StudentsT{Sigma: 1, Nu: nu}.Quantile((1 - coverage) / 2)
	}
}

// degrees reads the convention for stated degrees of freedom.
func degrees(dof float64) float64 {
	switch {
	case dof == 0:
		return math.Inf(1)
	case dof >= 1:
		return dof
	}
	panic("uncertainty: degrees of freedom are 1 or more, or 0 for infinitely many")
}

func checkCoverage(p float64) {
	if !(p > 0 && p < 1) {
		panic("uncertainty: a coverage is a probability between 0 and 1")
	}
}
