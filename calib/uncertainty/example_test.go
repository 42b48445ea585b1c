package uncertainty_test

import (
	"fmt"
	"math"
	"math/rand/v2"

	"rungproof/calib/uncertainty"
)

// A drop of 1 µV from a divider: the resistor has limits of ±1 %, the readings
// scatter by 2 nV with 9 degrees of freedom.
func ExampleNew() {
	b := uncertainty.New([]uncertainty.Line{
		{Name: "resistor", Value: 1, U: 0.01 / math.Sqrt(3), Unit: "Ω", Shape: uncertainty.Rectangular, Sensitivity: 1e-6},
		{Name: "readings", U: 2e-9 / math.Sqrt(10), Unit: "V", Shape: uncertainty.Student, DOF: 9, Sensitivity: 1},
	}, 0.95)
	for _, l := range b.Lines {
		fmt.Printf("%-8s %5.2f nV %5.1f %%\n", l.Name, l.Contribution*1e9, 100*l.Share)
	}
	fmt.Printf("u = %.2f nV, k = %.2f, U = %.1f nV\n%s\n", b.U*1e9, b.K, b.Expanded*1e9, b.Basis)
	// Output:
	// resistor  5.77 nV  98.8 %
	// readings  0.63 nV   1.2 %
	// u = 5.81 nV, k = 1.66, U = 9.6 nV
	// convolution of the lines' shapes; resistor, rectangular, is the largest
}

// The square of a quantity that is 1 with a standard uncertainty of 0.3.
func ExampleSummarise() {
	rng := rand.New(rand.NewPCG(1, 2))
	values := make([]float64, 1_000_000)
	for i := range values {
		x := 1 + 0.3*uncertainty.Draw(uncertainty.Normal, 0, rng)
		values[i] = x * x
	}
	s := uncertainty.Summarise(values, 0.95)
	fmt.Printf("%.2f, u = %.2f\n", s.Mean, s.SD)
	fmt.Printf("symmetric %.1f to %.1f, shortest %.1f to %.1f\n", s.Symmetric.Low, s.Symmetric.High, s.Shortest.Low, s.Shortest.High)

	v := uncertainty.Validate(1, 1.96*0.6, s.Symmetric, uncertainty.Tolerance(s.SD, 2))
	fmt.Println("linear propagation validated:", v.Validated)
	// Output:
	// 1.09, u = 0.61
	// symmetric 0.2 to 2.5, shortest 0.0 to 2.3
	// linear propagation validated: false
}

func ExampleAdaptive() {
	rng := rand.New(rand.NewPCG(1, 2))
	a := uncertainty.NewAdaptive(1, 0.95, 1)
	kept := uncertainty.NewKept(1_000_000)
	for !a.Done() {
		block := make([]float64, uncertainty.BlockSize(0.95))
		for i := range block {
			block[i] = 50 + 2*rng.NormFloat64()
		}
		kept.Add(block...)
		a.Add([][]float64{block})
	}
	fmt.Printf("%d trials, u = %.0f\n", kept.Added(), uncertainty.Summarise(kept.Values(), 0.95).SD)
	// Output: 20000 trials, u = 2
}

// Three steps read 4, 4 and 5 times, predicted to scatter by 2 nV.
func ExamplePooled_ChanceOfMore() {
	p := uncertainty.Pool([]uncertainty.Group{{30e-18, 3}, {24e-18, 3}, {46e-18, 4}})
	fmt.Printf("%.1f nV with %g degrees of freedom; chance of as much: %.1f %%\n", p.SD*1e9, p.DOF, 100*p.ChanceOfMore(2e-9))
	// Output: 3.2 nV with 10 degrees of freedom; chance of as much: 0.5 %
}
