package uncertainty

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// Kept are all up to the limit; beyond it every 2^j-th from the first on, and half the limit at least.
func TestKeptIsEveryNth(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		limit, n := rapid.IntRange(2, 20).Draw(t, "limit"), rapid.IntRange(0, 500).Draw(t, "n")
		k := NewKept(limit)
		for i := range n {
			k.Add(float64(i))
		}
		v := k.Values()
		if k.Added() != n || len(v) > limit || len(v) < min(n, limit/2) {
			t.Fatalf("%d of %d kept, %d counted", len(v), n, k.Added())
		}
		if n <= limit && len(v) != n {
			t.Fatalf("%d of %d kept with room for %d", len(v), n, limit)
		}
		for i := range v {
			stride := 1.0
			if len(v) > 1 {
				stride = v[1]
			}
			if v[i] != float64(i)*stride || stride != math.Exp2(math.Round(math.Log2(stride))) {
				t.Fatalf("kept %v", v)
			}
		}
	})
}

// The doc's bound: over repeated samples thinned to half the limit and more, the probability below the end of the
// 95 % interval scatters by √(p(1−p)/n) with n kept.
func TestThinningCostsWhatItSays(t *testing.T) {
	const repeats, n, limit = 400, 20_000, 1000 // 625 are kept
	m := NewMoments(1)
	rng := rand.New(rand.NewPCG(3, 4))
	kept := 0
	for range repeats {
		k := NewKept(limit)
		for range n {
			k.Add(rng.Float64())
		}
		kept = len(k.Values())
		m.Add(Summarise(k.Values(), 0.95).Symmetric.Low)
	}
	want := math.Sqrt(0.025 * 0.975 / float64(kept))
	relative(t, "scatter of the lower end", m.SD(0), want, 4/math.Sqrt(2*repeats))
	within(t, "mean of the lower end", m.Mean(0), 0.025, 1.0/float64(kept)+4*want/math.Sqrt(repeats))
}
