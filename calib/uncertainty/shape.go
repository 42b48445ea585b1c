// Package uncertainty opens an uncertainty into its budget and confirms it by
// Monte Carlo: coverage factors, effective degrees of freedom, coverage
// intervals of simulated values, and whether the two agree.
//
// The methods are those of the GUM (JCGM 100:2008), its Supplement 1 (JCGM
// 101:2008) and, where lines that have limits dominate, EA-4/02 M:2022. All
// uncertainties are standard uncertainties in the unit of what they belong to,
// all coverages probabilities between 0 and 1, all degrees of freedom untruncated;
// 0 or +Inf of them means that u is known. Misuse panics; no function returns an error.
package uncertainty

import "math"

// Shape is the distribution of a quantity about its value. All are symmetric.
type Shape int

// The shapes, each of standard uncertainty u: the first four have it as their
// standard deviation; Student's is t scaled by u (JCGM 101, 6.4.9), of standard
// deviation u·√(ν/(ν−2)) where that exists.
const (
	Normal      Shape = iota
	Rectangular       // half-width √3·u
	Triangular        // half-width √6·u
	Arcsine           // half-width √2·u: the sine of a phase that can be any
	Student           // scaled t with the line's degrees of freedom; normal if they are infinite
)

var shapeNames = [...]string{"normal", "rectangular", "triangular", "arcsine", "scaled t"}

// String is the shape's name as a budget prints it.
func (s Shape) String() string { return shapeNames[s] }

// halfWidth of the shape with standard uncertainty 1 (GUM 4.3.7, 4.3.9; JCGM 101, 6.4.6.4).
func (s Shape) halfWidth() float64 {
	switch s {
	case Rectangular:
		return math.Sqrt(3)
	case Triangular:
		return math.Sqrt(6)
	case Arcsine:
		return math.Sqrt2
	}
	return math.Inf(1)
}

func (s Shape) bounded() bool { return !math.IsInf(s.halfWidth(), 1) }

// factor is the shape's own two-sided coverage factor, from its distribution function.
func (s Shape) factor(coverage, dof float64) float64 {
	switch s {
	case Rectangular:
		return s.halfWidth() * coverage
	case Triangular:
		return s.halfWidth() * (1 - math.Sqrt(1-coverage))
	case Arcsine:
		return s.halfWidth() * math.Sin(math.Pi/2*coverage)
	case Student:
		return StudentFactor(coverage, dof)
	}
	return NormalFactor(coverage)
}
