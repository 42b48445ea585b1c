package uncertainty

import (
	"math/rand/v2"
	"slices"
	"testing"
)

// Mean, standard deviation and both intervals of 10⁶ values.
func BenchmarkSummarise(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	values := make([]float64, 1_000_000)
	for i := range values {
		values[i] = rng.NormFloat64()
	}
	work := make([]float64, len(values))
	b.ReportAllocs()
	for b.Loop() {
		copy(work, values)
		Summarise(work, 0.95)
	}
}

func BenchmarkDraw(b *testing.B) {
	for _, s := range []Shape{Normal, Rectangular, Triangular, Arcsine, Student} {
		b.Run(s.String(), func(b *testing.B) {
			rng := rand.New(rand.NewPCG(1, 1))
			b.ReportAllocs()
			for b.Loop() {
				Draw(s, 9, rng)
			}
		})
	}
}

// Three quantities and their covariance.
func BenchmarkMomentsAdd(b *testing.B) {
	m, x := NewMoments(3), []float64{1, 2, 3}
	b.ReportAllocs()
	for b.Loop() {
		x[0]++
		m.Add(x...)
	}
}

// A rectangular line with a fifth of normal lines and a scaled t.
func BenchmarkConvolutionFactor(b *testing.B) {
	lines := slices.Concat(lines(Rectangular, 0, 1), lines(Normal, 0, 0.1, 0.15), lines(Student, 4, 0.1))
	for b.Loop() {
		ConvolutionFactor(lines, 0.95)
	}
}
