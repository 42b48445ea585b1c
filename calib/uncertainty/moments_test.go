package uncertainty

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat"
	"pgregory.net/rapid"
)

// Added one by one, or in parts that are merged, the moments are those that gonum 0.17 finds from all values.
func TestMomentsAgainstGonum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, quantities := rapid.IntRange(2, 60).Draw(t, "n"), rapid.IntRange(1, 4).Draw(t, "quantities")
		parts := rapid.IntRange(1, 5).Draw(t, "parts")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		data := mat.NewDense(n, quantities, nil)
		whole, part := NewMoments(quantities), make([]*Moments, parts)
		for k := range part {
			part[k] = NewMoments(quantities)
		}
		for i := range n {
			row := data.RawRowView(i)
			common := rng.NormFloat64()
			for j := range row {
				row[j] = 100 + common + rng.NormFloat64()
			}
			whole.Add(row...)
			part[rng.IntN(parts)].Add(row...)
		}
		merged := NewMoments(quantities)
		for _, p := range part {
			merged.Merge(p)
		}
		var want mat.SymDense
		stat.CovarianceMatrix(&want, data, nil)
		for _, m := range []*Moments{whole, merged} {
			if m.N() != n {
				t.Fatalf("%d values, want %d", m.N(), n)
			}
			if c := m.Covariance(); !mat.EqualApprox(c, &want, 1e-10) {
				t.Fatalf("covariance %v, want %v", mat.Formatted(c), mat.Formatted(&want))
			}
			for j := range quantities {
				within(t, "mean", m.Mean(j), stat.Mean(mat.Col(nil, j, data), nil), 1e-12)
				within(t, "standard deviation", m.SD(j), math.Sqrt(want.At(j, j)), 1e-10)
			}
		}
	})
}

func TestFewMoments(t *testing.T) {
	m := NewMoments(1)
	if m.SD(0) != 0 || m.N() != 0 {
		t.Error("none: not zero")
	}
	m.Add(5)
	if m.SD(0) != 0 || m.Mean(0) != 5 {
		t.Error("one: not itself, with no scatter")
	}
	x := []float64{1}
	if n := testing.AllocsPerRun(5, func() { m.Add(x...) }); n != 0 {
		t.Errorf("%v allocations a value", n)
	}
}
