package calib

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The compiled forward model gives the drops that the circuit itself gives.
func TestDropDrawsAgreeWithTheCircuit(t *testing.T) {
	for _, name := range []string{"arrival", "string", "quadrature", "one-amplitude"} {
		f := newForward(evaluateCase(t, name).Plan)
		d, err := newDropDraws(f)
		if err != nil {
			t.Fatal(err)
		}
		random := rand.New(rand.NewPCG(5, 6))
		for range 5 {
			d.draw(random)
			f.compute(d.nu, 0)
			for i := range f.drops {
				size, _ := f.drops[i].size()
				near(t, name+": drop", d.Sizes[i], size, 1e-12*math.Abs(size))
			}
		}
	}
}

func BenchmarkForwardModel(b *testing.B) {
	p := evaluateCase(b, "arrival").Plan
	b.ReportAllocs()
	b.RunParallel(func(pb *testing.PB) {
		d, err := newDropDraws(newForward(p))
		if err != nil {
			b.Fatal(err)
		}
		random := rand.New(rand.NewPCG(1, 2))
		for pb.Next() {
			d.draw(random)
		}
	})
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "trials/s")
}

// The draws alone, for comparison: as many normal variates as the arrival case has inputs.
func BenchmarkNormalVariates(b *testing.B) {
	n := len(newForward(evaluateCase(b, "arrival").Plan).inputs)
	b.RunParallel(func(pb *testing.PB) {
		random := rand.New(rand.NewPCG(1, 2))
		sum := 0.0
		for pb.Next() {
			for range n {
				sum += random.NormFloat64()
			}
		}
		if math.IsNaN(sum) {
			b.Error("not a number was drawn")
		}
	})
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "trials/s")
}
