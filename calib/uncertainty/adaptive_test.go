package uncertainty

import (
	"math"
	"math/rand/v2"
	"testing"
)

// JCGM 101, 7.9.4 b.
func TestBlockSize(t *testing.T) {
	for p, want := range map[float64]int{0.5: 10_000, 0.95: 10_000, 0.99: 10_000, 0.995: 20_000, 0.9999: 1_000_000} {
		if got := BlockSize(p); got != want {
			t.Errorf("%g: %d, want %d", p, got, want)
		}
	}
}

// The procedure in the supplement's own steps (7.9.4 e to k) says at every block the same.
func TestAdaptiveStopsWhereTheClauseDoes(t *testing.T) {
	const size = 10_000
	rng := rand.New(rand.NewPCG(79, 4))
	a := NewAdaptive(2, 0.95, 2)
	var perBlock [2][4][]float64
	var all [2][]float64
	for a.Blocks() < 200 {
		block := [][]float64{make([]float64, size), make([]float64, size)}
		for i := range size {
			x, y := rng.NormFloat64(), rng.Float64()
			block[0][i], block[1][i] = 10+3.5*(x+y), 40*y*y
		}
		done := true
		for k, values := range block {
			all[k] = append(all[k], values...)
			s := Summarise(append([]float64(nil), values...), 0.95)
			for i, figure := range []float64{s.Mean, s.SD, s.Symmetric.Low, s.Symmetric.High} {
				perBlock[k][i] = append(perBlock[k][i], figure)
			}
			h := float64(len(perBlock[k][0]))
			delta := Tolerance(deviation(all[k]), 2)
			for _, figures := range perBlock[k] {
				if h < 2 || 2*deviation(figures)/math.Sqrt(h) > delta {
					done = false
				}
			}
		}
		a.Add(block)
		if a.Done() != done {
			t.Fatalf("block %d: done %v, by the clause %v", a.Blocks(), a.Done(), done)
		}
		if done {
			break
		}
	}
	// The first result decides: u = 3.6 and so δ = 0.05, and an end of the interval has among 10⁴ values the standard
	// deviation √(p(1−p)/M)/density = 0.0016/0.016, so that about (2·0.1/0.05)² = 16 blocks are needed.
	if !a.Done() || a.Blocks() < 6 || a.Blocks() > 40 {
		t.Errorf("%d blocks, done %v", a.Blocks(), a.Done())
	}
}

// deviation is the standard deviation by its definition.
func deviation(values []float64) float64 {
	mean, squares := 0.0, 0.0
	for _, v := range values {
		mean += v / float64(len(values))
	}
	for _, v := range values {
		squares += (v - mean) * (v - mean)
	}
	return math.Sqrt(squares / float64(len(values)-1))
}

// What does not scatter is steady at the second block; a single block never is.
func TestAdaptiveWithoutUncertainty(t *testing.T) {
	a := NewAdaptive(1, 0.95, 2)
	for h := 1; h <= 2; h++ {
		a.Add([][]float64{{0.1, 0.1, 0.1}})
		if a.Done() != (h == 2) {
			t.Errorf("block %d: done %v", h, a.Done())
		}
	}
}

// The number of blocks foretold after ten is about that at which it stops: s of ten blocks is known to a quarter, so
// the forecast, which goes with its square, to a factor of two.
func TestAdaptiveForecast(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	a := NewAdaptive(1, 0.95, 3)
	forecast := 0
	for !a.Done() {
		a.Add([][]float64{simulate(10_000, rng.Uint64(), (*rand.Rand).NormFloat64)})
		if a.Blocks() == 10 {
			forecast = a.Needed()
		}
	}
	if ratio := float64(forecast) / float64(a.Blocks()); ratio < 0.5 || ratio > 2 {
		t.Errorf("%d foretold, %d needed", forecast, a.Blocks())
	}
}
