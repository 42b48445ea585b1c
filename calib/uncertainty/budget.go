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
// the one dominating line (EA-4/02 M:2022, S9).
const dominance = 0.3

// New combines independent lines (GUM 5.1.2, equation 10) and finds the
// coverage factor:
//
//   - Where one line with limits (rectangular, triangular, arcsine) dominates, so
//     that all the others together have at most 0.3 of its standard uncertainty, it
//     is that of the convolution of all lines in their shapes (EA-4/02, S9). Two
//     such lines of one size are left to the next rule, whose factor is a few per
//     cent too large for them; ConvolutionFactor gives theirs.
//   - Otherwise it is Student's t at the effective degrees of freedom (GUM G.4.1,
//     equation G.2b, untruncated), the normal factor if they are infinite.
//
// The effective degrees of freedom count those of every line, whatever its shape;
// the convolution goes by shape alone, so that a line whose degrees of freedom
// are to count there is to be of the shape Student.
func New(lines []Line, coverage float64) Budget {
	checkCoverage(coverage)
	b := Budget{Lines: slices.Clone(lines), Coverage: coverage}
	variance := 0.0
	largest := -1 // line with limits
	for i := range b.Lines {
		l := &b.Lines[i]
		l.Contribution = contribution(*l)
		variance += l.Contribution * l.Contribution
		if l.Shape.bounded() && (largest < 0 || math.Abs(l.Contribution) > math.Abs(b.Lines[largest].Contribution)) {
			largest = i
		}
	}
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
	case variance > 0 && largest >= 0 && b.dominated(largest):
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

// dominated tells whether all other lines together are small beside one.
func (b *Budget) dominated(line int) bool {
	rest := 0.0
	for i := range b.Lines {
		if i != line {
			rest += b.Lines[i].Contribution * b.Lines[i].Contribution
		}
	}
	return math.Sqrt(rest) <= dominance*math.Abs(b.Lines[line].Contribution)
}

func contribution(l Line) float64 {
	if !(l.U >= 0) {
		panic("uncertainty: a standard uncertainty is not negative")
	}
	return l.Sensitivity * l.U
}
