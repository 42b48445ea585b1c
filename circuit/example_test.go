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

// A decade box under a top resistor that comes out a little different in every trial of a simulation.
func ExampleLadder_Compile() {
	ladder := circuit.Ladder{
		Source: 50,
		Arms: []circuit.Arm{
			{Place: circuit.Series, R: 1e6},
			{Place: circuit.Shunt, R: 10e3, Stray: 0.1},
		},
		Tap:   1,
		Input: circuit.Input{R: 10e6, C: 125e-12},
	}
	compiled, err := ladder.Compile(1e3, []circuit.Variable{
		{Element: circuit.ArmR, Arm: 0},
		{Element: circuit.ArmR, Arm: 1},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	var box circuit.Compiled
	for _, top := range []float64{0.999e6, 1.001e6} {
		compiled.Contract([]float64{top}, &box)
		for _, setting := range []float64{100, 1e3} {
			fmt.Printf("top %g Ω, box %g Ω: %.3f ppm\n", top, setting, math.Sqrt(box.Squared(setting))*1e6)
		}
	}
	// Output:
	// top 999000 Ω, box 100 Ω: 100.184 ppm
	// top 999000 Ω, box 1000 Ω: 999.950 ppm
	// top 1.001e+06 Ω, box 100 Ω: 99.984 ppm
	// top 1.001e+06 Ω, box 1000 Ω: 997.954 ppm
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
