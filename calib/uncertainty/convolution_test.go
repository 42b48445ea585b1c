package uncertainty

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

// JCGM 101, 9.2.2 to 9.2.4, whose half-widths have closed forms or were found by exact convolution, and the single
// shapes of EA-4/02 M:2022, divided by u.
func TestConvolutionOfPublications(t *testing.T) {
	four := func(s Shape) []Line { return lines(s, 0, 1, 1, 1, 1) }
	within(t, "9.2.2, four normal", ConvolutionFactor(four(Normal), 0.95), 3.919927969080/2, 1e-8)
	within(t, "9.2.3, four rectangular", ConvolutionFactor(four(Rectangular), 0.95), math.Sqrt(3)*(2-math.Pow(0.6, 0.25)), 1e-7)
	within(t, "9.2.4, one ten times", ConvolutionFactor(lines(Rectangular, 0, 1, 1, 1, 10), 0.95), 17.015814100/math.Sqrt(103), 1e-7)

	within(t, "rectangular", ConvolutionFactor(lines(Rectangular, 0, 2), 0.95), 1.6454482672, 1e-10)
	within(t, "triangular", ConvolutionFactor(lines(Triangular, 0, 2), 0.95), 1.9017671853, 1e-10)
	within(t, "arcsine", ConvolutionFactor(lines(Arcsine, 0, 2), 0.95), 1.4098540139, 1e-10)
	within(t, "scaled t", ConvolutionFactor(lines(Student, 9, 2), 0.95), 2.262157, 0.51e-6) // scipy 1.10
	within(t, "normal", ConvolutionFactor(lines(Normal, 9, 2), 0.95), 1.959964, 0.51e-6)
}

// The integral, which a single line does without, against the same closed forms: two lines of a shape make another of
// it, or a negligible line is added.
func TestConvolutionIntegral(t *testing.T) {
	for _, p := range []float64{0.5, 0.95, 0.99} {
		two := lines(Rectangular, 0, 1, 1)
		within(t, "two rectangles: a triangle", ConvolutionFactor(two, p), Triangular.factor(p, 0), 1e-7)
		for _, s := range []Shape{Rectangular, Triangular, Arcsine} {
			l := append(lines(s, 0, 1), lines(Normal, 0, 1e-9)...)
			within(t, s.String(), ConvolutionFactor(l, p), s.factor(p, 0), 1e-5)
		}
		for _, nu := range []float64{1, 1.5, 2, 4.3, 50, 1e5, 1e9} {
			l := append(lines(Student, nu, 1), lines(Normal, 0, 1e-9)...)
			relative(t, "scaled t", ConvolutionFactor(l, p), StudentFactor(p, nu), 1e-7)
		}
		// The scales of Cauchy's distribution (ν = 1) add (textbook).
		relative(t, "two of Cauchy", ConvolutionFactor(lines(Student, 1, 1, 2), p), 3/math.Sqrt(5)*StudentFactor(p, 1), 1e-7)
		within(t, "infinite ν", ConvolutionFactor(lines(Student, 0, 3, 4), p), NormalFactor(p), 1e-7)
	}
}

// A trapezoid of two rectangles, EA-4/02 M:2022 S10: k = (1 − √((1−p)(1−β²)))/√((1+β²)/6) with β the ratio of the
// shorter to the longer parallel side, while x is in the slope: (1−p)(1+β) ≤ 1−β.
func TestTrapezoid(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := rapid.Float64Range(0.5, 0.99).Draw(t, "p")
		beta := rapid.Float64Range(0.001, 1).Draw(t, "share of the largest β") * p / (2 - p)
		l := lines(Rectangular, 0, 1+beta, 1-beta)
		within(t, "k", ConvolutionFactor(l, p), (1-math.Sqrt((1-p)*(1-beta*beta)))/math.Sqrt((1+beta*beta)/6), 1e-6)
	})
}

// boxes is the probability of ±x for two rectangles of half-widths a and b and a normal of standard deviation s, found
// without a transform: the distribution function of a rectangle plus a normal is a difference of integrals of Φ,
// ∫Φ(y/s)dy = y·Φ(y/s) + s·φ(y/s), and that is averaged over the other rectangle.
func boxes(x, a, b, s float64) float64 {
	integral := func(y float64) float64 { return y*distuv.UnitNormal.CDF(y/s) + s*distuv.UnitNormal.Prob(y/s) }
	below := func(x float64) float64 { return (integral(x+a) - integral(x-a)) / (2 * a) }
	return quad.Fixed(func(r float64) float64 { return below(x-r) - below(-x-r) }, -b, b, 200, quad.Legendre{}, 1) / (2 * b)
}

func TestTwoRectanglesAndNormal(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := rapid.Float64Range(0.1, 10).Draw(t, "a"), rapid.Float64Range(0.1, 10).Draw(t, "b")
		s := rapid.Float64Range(0.2, 3).Draw(t, "s")
		p := rapid.Float64Range(0.5, 0.99).Draw(t, "p")
		u := math.Sqrt(a*a/3 + b*b/3 + s*s)
		l := slices.Concat(lines(Rectangular, 0, a/math.Sqrt(3), b/math.Sqrt(3)), lines(Normal, 0, s))
		within(t, "coverage", boxes(ConvolutionFactor(l, p)*u, a, b, s), p, 1e-8)
	})
}

// The factor depends on neither order nor unit nor sign, and splitting a normal line changes nothing.
func TestConvolutionInvariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Line {
			return Line{U: rapid.Float64Range(0.3, 3).Draw(t, "u"), Sensitivity: 1,
				Shape: Shape(rapid.IntRange(0, 4).Draw(t, "shape")), DOF: rapid.Float64Range(3, 100).Draw(t, "ν")}
		}), 2, 5).Draw(t, "lines")
		l = append(l, lines(Normal, 0, 5)...)
		k := ConvolutionFactor(l, 0.95)
		other := slices.Clone(l[:len(l)-1])
		other = append(other, lines(Normal, 0, 3, 4)...)
		slices.Reverse(other)
		for i := range other {
			other[i].Sensitivity = -1e-9
		}
		within(t, "rearranged", ConvolutionFactor(other, 0.95), k, 1e-7)
	})
}
