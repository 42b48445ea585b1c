package detector_test

import (
	"fmt"
	"math"

	"rungproof/calib/detector"
)

// 6 nV/√Hz at the input, through two poles of 300 ms.
func ExampleNoiseBandwidth() {
	b := detector.NoiseBandwidth(0.3, 2)
	fmt.Printf("%.4f Hz, %.2f nV rms\n", b, 6*math.Sqrt(b))
	// Output: 0.4167 Hz, 3.87 nV rms
}

// How long to wait after a step until it has settled to 99.9 %.
func ExampleSettling() {
	fmt.Printf("%.2f s\n", detector.Settling(0.3, 2, 0.001))
	// Output: 2.77 s
}

// A magnitude of 100 nV in noise of 20 nV rms reads 2 nV high.
func ExampleRiceMean() {
	mean, slope := detector.RiceMean(100e-9, 20e-9)
	fmt.Printf("%.2f nV, slope %.4f\n", mean*1e9, slope)
	// Output: 102.02 nV, slope 0.9793
}
