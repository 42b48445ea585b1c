package detector

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

// line is the part of the settled output that turns at f: z = x + jy times e^−j2πft, averaged under a Hann window.
func line(in Input, s TwinSettings, rate, f float64) complex128 {
	const n = 1 << 16
	source, twin := NewSource(in, rate, 1), NewTwin(s, rate)
	twin.Settle(source, 60*s.TimeConstant)
	sample, sum := make([]float64, 1), complex(0, 0)
	for i := range n {
		source.Fill(sample)
		twin.Advance(sample)
		sine := math.Sin(math.Pi * (float64(i) + 0.5) / n)
		sum += complex(twin.Read()) * cmplx.Rect(2*sine*sine/n, -2*math.Pi*f*float64(i)/rate)
	}
	return sum
}

// A sine of V rms times √2·sine and √2·cosine is V at the difference of the frequencies and V at their sum, turning
// the other way; dc is √2 of it at the reference (product formulas, Abramowitz and Stegun 4.3.31 to 4.3.33). Each comes
// out |H| times as large, the chain's (1 + (2πfT)²)^−n/2; at a sixteenth of the rate or below to within 1.0065ⁿ. The window leaks 2e-12.
func TestTwinRejection(t *testing.T) {
	const r, tau, amplitude = 1000.0, 0.003, 0.7
	for _, poles := range []int{1, 2, 3, 4, 8} {
		s := TwinSettings{Frequency: r, Harmonic: 1, TimeConstant: tau, Poles: poles, Gain: 1}
		for _, c := range []struct {
			name string
			in   Input
			f    float64 // of the ripple
			size float64 // before the filter
		}{
			{"wanted, at twice the reference", Input{Tones: []Tone{{amplitude, r, 0}}}, -2 * r, amplitude},
			{"signal at twice, difference", Input{Tones: []Tone{{amplitude, 2 * r, 1}}}, r, amplitude},
			{"signal at twice, sum", Input{Tones: []Tone{{amplitude, 2 * r, 1}}}, -3 * r, amplitude},
			{"mains 50 Hz, difference", Input{Tones: []Tone{{amplitude, 50, 2}}}, 50 - r, amplitude},
			{"mains 50 Hz, sum", Input{Tones: []Tone{{amplitude, 50, 2}}}, -50 - r, amplitude},
			{"mains 60 Hz, 17th", Input{Tones: []Tone{{amplitude, 17 * 60, 0}}}, 20, amplitude},
			{"a near neighbour", Input{Tones: []Tone{{amplitude, r - 30, 0}}}, -30, amplitude},
			{"dc", Input{DC: -0.5}, -r, 0.5 * math.Sqrt2},
		} {
			rate := 48.618 * r
			want := c.size * Gain(c.f, tau, poles)
			got := cmplx.Abs(line(c.in, s, rate, c.f))
			if most := want * math.Pow(1.0065, float64(poles)); got < want*(1-1e-4)-2e-12 || got > most+2e-12 {
				t.Errorf("%d poles, %s: ripple %.6g, want %.6g to %.6g", poles, c.name, got, want, most)
			}
			if c.f < -r || c.in.DC != 0 {
				within(t, fmt.Sprintf("%d poles, %s: its mean", poles, c.name),
					cmplx.Abs(line(c.in, s, rate, 0)), wantedOf(c.in, r), 1e-9)
			}
		}
	}
}

func wantedOf(in Input, f float64) (v float64) {
	for _, t := range in.Tones {
		if t.Frequency == f {
			v += t.Amplitude
		}
	}
	return v
}

// settled reads once when a part in 1e13 is left.
func settled(in Input, s TwinSettings) complex128 {
	return Readings(in, s, Settling(s.TimeConstant, s.Poles, 1e-13), 1, 1)[0]
}

// x = V·cos φ and y = V·sin φ: a sine of peak P times a unit sine has the mean P/2·cos φ, 0.707106781187 V rms
// (textbook definition), and the reference's peak is √2. To the ripple at twice the reference.
func TestTwinCosineLaw(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := TwinSettings{
			Frequency:    rapid.Float64Range(10, 1e5).Draw(t, "f"),
			Harmonic:     rapid.IntRange(1, 5).Draw(t, "n"),
			Phase:        rapid.Float64Range(-7, 7).Draw(t, "reference's phase"),
			Poles:        rapid.IntRange(1, MaxPoles).Draw(t, "poles"),
			Gain:         rapid.Float64Range(0.9, 1.1).Draw(t, "gain"),
			OffsetX:      rapid.Float64Range(-1, 1).Draw(t, "offset x"),
			OffsetY:      rapid.Float64Range(-1, 1).Draw(t, "offset y"),
			TimeConstant: 1,
		}
		f := s.Frequency * float64(s.Harmonic)
		s.TimeConstant = rapid.Float64Range(5, 50).Draw(t, "periods a time constant") / f
		v, phase := rapid.Float64Range(0, 10).Draw(t, "V"), rapid.Float64Range(-7, 7).Draw(t, "phase")
		got := settled(Input{Tones: []Tone{{v, f, phase}}}, s)
		want := complex(s.Gain, 0)*cmplx.Rect(v, phase-s.Phase) + complex(s.OffsetX, s.OffsetY)
		ripple := s.Gain * v * Gain(2*f, s.TimeConstant, s.Poles) * math.Pow(1.11, float64(s.Poles))
		if cmplx.Abs(got-want) > ripple+1e-9 {
			t.Fatalf("%v, want %v to %g", got, want, ripple)
		}
	})
}

// A square wave and a triangle of 1 V rms hold 0.900316316157 and 0.992740800234 of it in the fundamental, a third and
// a ninth of that in the third harmonic (textbook definitions). Each harmonic is read by itself.
func TestTwinHarmonics(t *testing.T) {
	const f = 100.0
	var square, triangle Input
	for n := 1; n <= 7; n += 2 {
		k, sign := float64(n), float64(1-(n/2%2)*2)
		square.Tones = append(square.Tones, Tone{0.900316316157 / k, k * f, 0})
		triangle.Tones = append(triangle.Tones, Tone{sign * 0.992740800234 / (k * k), k * f, 0})
	}
	for n, want := range map[int][2]float64{
		1: {0.900316316157, 0.992740800234}, 2: {}, 3: {0.300105438719, -0.110304533359}, 4: {},
		5: {0.180063263231, 0.0397096320094}, 6: {}, 7: {0.128616616594, -0.0202600163313},
	} {
		s := TwinSettings{Frequency: f, Harmonic: n, TimeConstant: 0.5, Poles: 4, Gain: 1}
		for i, in := range []Input{square, triangle} {
			got := settled(in, s)
			within(t, fmt.Sprintf("wave %d, harmonic %d: x", i, n), real(got), want[i], 1e-8)
			within(t, fmt.Sprintf("wave %d, harmonic %d: y", i, n), imag(got), 0, 1e-8)
		}
	}
}

// The fundamental of a sine of peak P that is cut at c·P: Fourier's integral over the flat and the round parts gives
// 2/π·(asin c + c·√(1 − c²)) of it (a limiter's describing function, textbook). Cut to almost nothing it is a square
// wave, whose fundamental is 0.900316316157 of its rms, the third harmonic a third of that (textbook).
func TestTwinClipping(t *testing.T) {
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.3, Poles: 4, Gain: 1}
	in := Input{Tones: []Tone{{2, 1000, 0.4}}}
	for _, c := range []float64{2, 1, 0.99, 0.9, 0.7, 0.5, 0.3} {
		s.Clip = c * 2 * math.Sqrt2
		c = min(c, 1)
		want := 2 / math.Pi * (math.Asin(c) + c*math.Sqrt(1-c*c)) * 2
		got := settled(in, s)
		within(t, fmt.Sprintf("cut at %g of the peak", c), cmplx.Abs(got), want, 2e-4*want)
		within(t, fmt.Sprintf("cut at %g of the peak: phase", c), cmplx.Phase(got), 0.4, 2e-4)
	}
	s.Clip = 1
	for n, want := range map[int]float64{1: 0.900316316157, 2: 0, 3: 0.300105438719} {
		s.Harmonic = n
		got := cmplx.Abs(settled(Input{Tones: []Tone{{1e6, 1000, 0.4}}}, s))
		within(t, fmt.Sprintf("square, harmonic %d", n), got, want, 1e-3)
	}
}

// The display's steps: a multiple of the resolution, half of it off at most.
func TestTwinResolution(t *testing.T) {
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.01, Poles: 2, Gain: 1.01, OffsetX: 2e-6}
	for i := range 50 {
		in := Input{Tones: []Tone{{float64(i) * 1.7e-5, 1000, 1}}}
		fine := settled(in, s)
		coarse := s
		coarse.Resolution = 1e-5
		shown := settled(in, coarse)
		for _, v := range [][2]float64{{real(fine), real(shown)}, {imag(fine), imag(shown)}} {
			within(t, "a whole step", v[1]/1e-5, math.Round(v[1]/1e-5), 1e-9)
			within(t, "no more than half off", v[1], v[0], 0.5e-5*(1+1e-9))
		}
	}
}

// Readings that do not wait lean to the reading before by what Settling says is left.
func TestTwinLeansToTheStepBefore(t *testing.T) {
	for _, c := range chains[1:] {
		s := TwinSettings{Frequency: 1e4, Harmonic: 1, TimeConstant: 0.02, Poles: c.poles, Gain: 1, Before: complex(1, -2)}
		for i, left := range remainders {
			got := Readings(Input{Tones: []Tone{{0.1, 1e4, 0}}}, s, c.settling[i]*s.TimeConstant, 1, 1)[0]
			want := complex(left, 0)*(s.Before-0.1) + 0.1
			// a sample late of 1700 a time constant, and ripple
			if cmplx.Abs(got-want) > 2e-3*left*2.2+2e-6 {
				t.Errorf("%d poles: %v, want %v", c.poles, got, want)
			}
		}
	}
}

func TestImpossibleTwinsPanic(t *testing.T) {
	sound := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.1, Poles: 4, Gain: 1}
	with := func(change func(*TwinSettings)) func() {
		return func() {
			s := sound
			change(&s)
			NewTwin(s, 1e4)
		}
	}
	for name, call := range map[string]func(){
		"no reference":          with(func(s *TwinSettings) { s.Frequency = 0 }),
		"no harmonic":           with(func(s *TwinSettings) { s.Harmonic = 0 }),
		"harmonic above half":   with(func(s *TwinSettings) { s.Harmonic = 5 }),
		"no poles":              with(func(s *TwinSettings) { s.Poles = 0 }),
		"no gain":               with(func(s *TwinSettings) { s.Gain = 0 }),
		"clips below nothing":   with(func(s *TwinSettings) { s.Clip = -1 }),
		"negative resolution":   with(func(s *TwinSettings) { s.Resolution = -1 }),
		"negative stability":    with(func(s *TwinSettings) { s.Stability = math.NaN() }),
		"tone above half":       func() { NewSource(Input{Tones: []Tone{{1, 5000, 0}}}, 1e4, 1) },
		"negative noise":        func() { NewSource(Input{White: -1}, 1e4, 1) },
		"rate of nothing":       func() { SamplingRate(Input{}, TwinSettings{TimeConstant: 1, Poles: 1}) },
		"different rates":       func() { NewTwin(sound, 1e4).Settle(NewSource(Input{}, 2e4, 1), 1) },
		"settling before start": func() { NewTwin(sound, 1e4).Settle(NewSource(Input{}, 1e4, 1), -1) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
	with(func(*TwinSettings) {})() // and this does not
}
