package uncertainty

import (
	"fmt"
	"math"
	"slices"
)

// Line is one input of a budget: an input that is independent of all others,
// such as an error that several readings share.
type Line struct {
	Name        string
	Value       float64 // estimate, in Unit
	U           float64 // standard uncertainty, in Unit
	Unit        string
	Shape       Shape
	DOF         float64 // degrees of freedom of U; 0 or +Inf: infinitely many
	Sensitivity float64 // ∂result/∂input, unit of the result per Unit

	Contribution float64 // Sensitivity·U, with sign, in the result's unit; New fills it
	Share        float64 // of the result's variance, 0 to 1; New fills it
}

// Budget is the combined uncertainty of a result and where it comes from.
type Budget struct {
	Lines    []Line  // in the order given
	U        float64 // combined standard uncertainty, unit of the result
	DOF      float64 // effective degrees of freedom; +Inf possible
	Coverage float64 // of ±Expanded
	K        float64 // coverage factor
	Expanded float64 // K·U
	Basis    string  // the distribution K comes from, in words
}

// dominance is the largest ratio of the rest's standard uncertainty to that of
// the dominating lines (EA-4/02 M:2022, S9 with one, S10 with two of them).
const dominance = 0.3

// New combines independent lines (GUM 5.1.2, equation 10) and finds the
// coverage factor:
//
//   - Where the lines with limits (rectangular, triangular, arcsine) dominate, so
//     that all the others together have at most 0.3 of their combined standard
//     uncertainty, it is that of the convolution of all lines in their shapes. That
//     includes the one or two dominating lines of EA-4/02, S9 to S11; many such
//     lines of one size have nearly the normal factor.
//   - Otherwise it is Student's t at the effective degrees of freedom (GUM G.4.1,
//     equation G.2b, untruncated), the normal factor if they are infinite.
//
// The effective degrees of freedom count those of every line, whatever its shape;
// the convolution goes by shape alone, so that a line whose degrees of freedom
// are to count there is to be of the shape Student.
func New(lines []Line, coverage float64) Budget {
	checkCoverage(coverage)
	b := Budget{Lines: slices.Clone(lines), Coverage: coverage}
	limited, rest := 0.0, 0.0 // variances
	largest := -1             // line with limits
	for i := range b.Lines {
		l := &b.Lines[i]
		l.Contribution = contribution(*l)
		square := l.Contribution * l.Contribution
		if !l.Shape.bounded() {
			rest += square
			continue
		}
		limited += square
		if largest < 0 || square > math.Pow(b.Lines[largest].Contribution, 2) {
			largest = i
		}
	}
	variance := limited + rest
	b.U = math.Sqrt(variance)
	perDOF := 0.0
	for i := range b.Lines {
		l := &b.Lines[i]
		l.Share = 0
		if variance > 0 {
			l.Share = l.Contribution * l.Contribution / variance
		}
		perDOF += l.Share * l.Share / degrees(l.DOF)
	}
	b.DOF = 1 / perDOF

	switch {
	case variance > 0 && math.Sqrt(rest) <= dominance*math.Sqrt(limited):
		b.K = ConvolutionFactor(lines, coverage)
		b.Basis = fmt.Sprintf("convolution of the lines' shapes; %s, %v, is the largest",
			b.Lines[largest].Name, b.Lines[largest].Shape)
	case math.IsInf(b.DOF, 1):
		b.K, b.Basis = NormalFactor(coverage), "normal distribution"
	default:
		b.K = StudentFactor(coverage, b.DOF)
		b.Basis = fmt.Sprintf("Student's t, %.3g effective degrees of freedom", b.DOF)
	}
	b.Expanded = b.K * b.U
	return b
}

func contribution(l Line) float64 {
	if !(l.U >= 0) {
		panic("uncertainty: a standard uncertainty is not negative")
	}
	return l.Sensitivity * l.U
}
