package uncertainty

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// JCGM 101, 7.7: of 1 to M, in any order, the symmetric interval is [y(r), y(r+q)] with r and q by the clause's rules.
func TestPositionsOfTheEnds(t *testing.T) {
	for _, c := range []struct {
		m           int
		p           float64
		low, length float64
	}{
		{10_000, 0.95, 250, 9500}, // q = pM, r = (M − q)/2
		{1_000_000, 0.99, 5000, 990_000},
		{1001, 0.95, 25, 951},  // pM + ½ = 951.45; (M − q)/2 = 25
		{1000, 0.955, 23, 955}, // (M − q)/2 = 22.5
		{21, 0.95, 1, 20},
		{10, 0.95, 1, 9}, // too few: all
		{1, 0.95, 1, 0},
	} {
		values := make([]float64, c.m)
		for i, v := range rand.New(rand.NewPCG(1, 2)).Perm(c.m) {
			values[i] = float64(v + 1)
		}
		s := Summarise(values, c.p)
		if want := (Interval{c.low, c.low + c.length}); s.Symmetric != want {
			t.Errorf("%d values, %g: symmetric %v, want %v", c.m, c.p, s.Symmetric, want)
		}
		if want := (Interval{1, 1 + c.length}); s.Shortest != want { // all as short: the first
			t.Errorf("%d values, %g: shortest %v, want %v", c.m, c.p, s.Shortest, want)
		}
	}
}

// NIST StRD NumAcc3 and NumAcc4 (pattern from memory): certified means 1000000.2 and 10000000.2, standard deviation
// 0.1. The data themselves are rounded by 1e-10 and 1e-9.
func TestNumAcc(t *testing.T) {
	for _, base := range []float64{1e6, 1e7} {
		values := []float64{base + 0.2}
		for range 500 {
			values = append(values, base+0.1, base+0.3)
		}
		all, halves := NewMoments(1), [2]*Moments{NewMoments(1), NewMoments(1)}
		for i, v := range values {
			all.Add(v)
			halves[i/400%2].Add(v)
		}
		halves[0].Merge(halves[1])
		s := Summarise(values, 0.95)
		for name, got := range map[string][2]float64{
			"sorted": {s.Mean, s.SD}, "one by one": {all.Mean(0), all.SD(0)}, "merged": {halves[0].Mean(0), halves[0].SD(0)},
		} {
			within(t, name+" mean", got[0], base+0.2, 1e-15*base)
			within(t, name+" standard deviation", got[1], 0.1, 1e-15*base)
		}
	}
}

// Intervals from tails alone are those of sorted values, whatever the data, and the shortest is no longer than any.
func TestTailsSuffice(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) float64 {
			return float64(rapid.IntRange(-20, 20).Draw(t, "ties")) // and many of them
		}), 1, 300).Draw(t, "values")
		p := rapid.Float64Range(0.01, 0.999).Draw(t, "p")
		sorted := slices.Sorted(slices.Values(values))
		s := Summarise(values, p)
		if s.Symmetric != Symmetric(sorted, p) || s.Shortest != Shortest(sorted, p) {
			t.Fatalf("%v and %v, of sorted values %v and %v", s.Symmetric, s.Shortest, Symmetric(sorted, p), Shortest(sorted, p))
		}
		if length := s.Symmetric.High - s.Symmetric.Low; s.Shortest.High-s.Shortest.Low > length {
			t.Fatalf("the shortest, %v, is longer than %v", s.Shortest, s.Symmetric)
		}
		slices.Sort(values)
		if !slices.Equal(values, sorted) {
			t.Fatal("the values are others than before")
		}
	})
}

// The lower end of the shortest interval of an exponential distribution is 0, and the upper −ln(1−p) (its density
// falls); that of the symmetric ones are its quantiles.
func TestShortestOfExponential(t *testing.T) {
	s := Summarise(simulate(trials, 7, (*rand.Rand).ExpFloat64), 0.95)
	within(t, "low", s.Shortest.Low, 0, 1e-4)
	within(t, "high", s.Shortest.High, -math.Log(0.05), 4*0.0044) // √(p(1−p)/M)/density
	within(t, "symmetric low", s.Symmetric.Low, -math.Log(0.975), 4*0.00016)
	within(t, "symmetric high", s.Symmetric.High, -math.Log(0.025), 4*0.0063)
}

func TestSummariseAllocatesNothing(t *testing.T) {
	values := simulate(10_000, 1, (*rand.Rand).NormFloat64)
	if n := testing.AllocsPerRun(5, func() { Summarise(values, 0.95) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}
