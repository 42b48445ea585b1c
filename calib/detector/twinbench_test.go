package detector

import "testing"

func benchmarkTwin(b *testing.B, in Input, poles int) {
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.1, Poles: poles, Gain: 1, Clip: 3}
	in.Tones = append(in.Tones, Tone{Amplitude: 1, Frequency: 1000})
	rate := SamplingRate(in, s)
	source, twin := NewSource(in, rate, 1), NewTwin(s, rate)
	const samples = 100_000
	b.ReportAllocs()
	for b.Loop() {
		twin.Settle(source, samples/rate)
	}
	b.ReportMetric(samples*float64(b.N)/b.Elapsed().Seconds(), "samples/s")
}

// Both channels; the source's making of the samples is counted in.
func BenchmarkTwin(b *testing.B)           { benchmarkTwin(b, Input{}, 4) }
func BenchmarkTwinWhite(b *testing.B)      { benchmarkTwin(b, Input{White: 1e-3}, 4) }
func BenchmarkTwinFlicker(b *testing.B)    { benchmarkTwin(b, Input{White: 1e-3, Flicker: 1e-3}, 4) }
func BenchmarkTwinEightPoles(b *testing.B) { benchmarkTwin(b, Input{}, 8) }

func BenchmarkTwinMains(b *testing.B) {
	benchmarkTwin(b, Input{Tones: []Tone{{1, 50, 0}, {1, 100, 0}, {1, 150, 0}, {1, 250, 0}}}, 4)
}
