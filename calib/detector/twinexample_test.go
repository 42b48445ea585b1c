package detector_test

import (
	"fmt"

	"rungproof/calib/detector"
)

// A microvolt in 50 µV of mains and 6 nV/√Hz of noise, three readings a settling time apart.
func ExampleReadings() {
	in := detector.Input{
		Tones: []detector.Tone{
			{Amplitude: 1e-6, Frequency: 1000},
			{Amplitude: 50e-6, Frequency: 50, Phase: 1},
			{Amplitude: 5e-6, Frequency: 150},
		},
		White: 6e-9,
	}
	s := detector.TwinSettings{
		Frequency: 1000, Harmonic: 1,
		TimeConstant: 0.1, Poles: 4,
		Clip: 3e-3, Gain: 1.002, Resolution: 1e-9,
	}
	wait := detector.Settling(s.TimeConstant, s.Poles, 1e-4)
	for _, z := range detector.Readings(in, s, wait, 3, 1) {
		fmt.Printf("x %.0f nV, y %.0f nV\n", real(z)*1e9, imag(z)*1e9)
	}
	// Output:
	// x 1000 nV, y 6 nV
	// x 997 nV, y -3 nV
	// x 1000 nV, y 1 nV
}

// The step's first tenth of a second, by the block.
func ExampleTwin_Advance() {
	in := detector.Input{Tones: []detector.Tone{{Amplitude: 1, Frequency: 1000}}}
	s := detector.TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.1, Poles: 1, Gain: 1}
	const rate = 16e3
	source, twin := detector.NewSource(in, rate, 1), detector.NewTwin(s, rate)
	samples := make([]float64, 1600)
	source.Fill(samples)
	twin.Advance(samples)
	x, _ := twin.Read()
	fmt.Printf("%.3f V of 1 V\n", x)
	// Output: 0.632 V of 1 V
}
