package circuit_test

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/circuit"
)

// What 20 V peak-to-peak over 1 MΩ and 10 kΩ leaves, and what 0.1 Ω of wire in the rung adds.
func Example() {
	ladder := circuit.Ladder{
		Source: 50,
		Arms: []circuit.Arm{
			{Place: circuit.Series, R: 1e6},
			{Place: circuit.Shunt, R: 10e3},
		},
		Tap:   1,
		Input: circuit.Input{R: math.Inf(1)},
	}
	if err := ladder.Check(); err != nil {
		fmt.Println(err)
		return
	}
	emf := 20 / (2 * math.Sqrt2) // V rms
	r := ladder.Solve(1e3, nil)
	s := r.Sensitivity()
	fmt.Printf("drop %.2f mV rms\n", emf*cmplx.Abs(r.H)*1e3)
	fmt.Printf("wire %.2f µV rms\n", emf*real(s.Arms[1].Stray)*0.1*1e6)
	fmt.Printf("noise %.1f nV/√Hz\n", circuit.ThermalNoise(r.Z, 23)*1e9)
	// Output:
	// drop 70.01 mV rms
	// wire 0.69 µV rms
	// noise 12.7 nV/√Hz
}

// A metre of hook-up wire of gauge 24, there and back.
func ExampleConductor() {
	wire := circuit.Conductor{Material: "copper", Area: circuit.GaugeArea(24), Length: 2}
	ohm, err := wire.Resistance(23)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.1f mΩ\n", ohm*1e3)
	// Output:
	// 170.4 mΩ
}
