package detector

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// scatter is mean and standard deviation of both parts of readings, pooled for the latter.
func scatter(readings []complex128) (mean complex128, deviation float64) {
	n := complex(float64(len(readings)), 0)
	for _, z := range readings {
		mean += z / n
	}
	for _, z := range readings {
		d := z - mean
		deviation += real(d)*real(d) + imag(d)*imag(d)
	}
	return mean, math.Sqrt(deviation / (2 * (real(n) - 1)))
}

// White noise of density e reads with a standard deviation of e·√B, B the chain's; a mean within 3 standard errors. Of
// 16000 numbers the deviation is known to 1/√32000 = 0.56 %: three times that. Readings a settling time apart do not correlate.
func TestTwinWhiteNoise(t *testing.T) {
	const n, e, tau = 8000, 6e-9, 0.3
	for _, c := range chains {
		s := TwinSettings{Frequency: 13.0, Harmonic: 1, TimeConstant: tau, Poles: c.poles, Gain: 1}
		in := Input{White: e, Tones: []Tone{{10e-9, 13, 0.5}}}
		readings := Readings(in, s, Settling(tau, c.poles, 1e-3), n, 7)
		mean, got := scatter(readings)
		want := e * math.Sqrt(c.noiseBandwidth/tau)
		name := fmt.Sprintf("%d poles: ", c.poles)
		within(t, name+"deviation", got/want, 1, 3*0.0056)
		ripple := 100e-9 * Gain(26, tau, c.poles)
		within(t, name+"mean x", real(mean), 10e-9*math.Cos(0.5), 3*want/math.Sqrt(n)+ripple)
		within(t, name+"mean y", imag(mean), 10e-9*math.Sin(0.5), 3*want/math.Sqrt(n)+ripple)
		products := 0.0
		for i := range readings[1:] {
			a, b := readings[i]-mean, readings[i+1]-mean
			products += real(a)*real(b) + imag(a)*imag(b)
		}
		within(t, name+"correlation", products/(2*n*want*want), 0, 3/math.Sqrt(2*n)+0.01)
	}
}

// 1/f noise of density e at 1 Hz reads e·√(B/f) at f.
func TestTwinFlickerNoise(t *testing.T) {
	const n, e = 4000, 50e-9
	for _, f := range []float64{17, 1000} {
		tau := 4 / f
		s := TwinSettings{Frequency: f, Harmonic: 1, TimeConstant: tau, Poles: 4, Gain: 1}
		_, got := scatter(Readings(Input{Flicker: e}, s, Settling(tau, 4, 1e-3), n, 3))
		want := e * math.Sqrt(NoiseBandwidth(tau, 4)/f)
		// three times 1/√16000, and 1.3 % of the sampling
		within(t, fmt.Sprintf("at %g Hz", f), got/want, 1.006, 3*0.008+0.007)
	}
}

// The density against 1/√f, the same with the matched sections' sin a in place of a.
func TestFlickerDensity(t *testing.T) {
	const rate, e = 5000.0, 20e-9
	f := newFlicker(e, rate, 1)
	for ratio := 2e-4; ratio < 0.5; ratio *= 1.05 {
		a := math.Pi * ratio
		got := f.gain * f.response(ratio) / math.Sqrt(rate/2)
		within(t, fmt.Sprintf("at %.3g of the rate", ratio), got/(e/math.Sqrt(ratio*rate))*math.Sqrt(math.Sin(a)/a), 1, 1e-3)
	}
	// The response is that of the recurrence: dc of the sections goes through (1 − zero)/(1 − pole) times each.
	samples := make([]float64, block)
	for range 4000 {
		for i := range samples {
			samples[i] = 1
		}
		for k := 0; k < len(f.sections); k += 2 {
			advance(&f.sections[k], &f.sections[k+1], samples)
		}
	}
	within(t, "dc", samples[block-1]/f.response(0), 1, 1e-9)
}

// White noise's samples: normal, of variance density²·rate/2. Of a million the mean is known to 1e-3 of the deviation, the variance to 1.4e-3,
// the fourth moment 3 to √96/1000 (moments of the normal distribution, common practice).
func TestSourceWhiteNoise(t *testing.T) {
	const n, rate, e = 1_000_000, 4e4, 5e-9
	v := make([]float64, n)
	NewSource(Input{White: e, DC: 1e-6}, rate, 11).Fill(v)
	var m1, m2, m4 float64
	for _, x := range v {
		x = (x - 1e-6) / (e * math.Sqrt(rate/2))
		m1 += x / n
		m2 += x * x / n
		m4 += x * x * x * x / n
	}
	within(t, "mean", m1, 0, 3e-3)
	within(t, "variance", m2, 1, 4.2e-3)
	within(t, "fourth moment", m4, 3, 0.03)
}

// A million samples later a tone is where math.Sin puts it.
func TestSourceTones(t *testing.T) {
	tones := []Tone{{1, 1000, 0.3}, {0.2, 50, -2}, {0.1, 150, 4}}
	const rate = 8618.03
	source := NewSource(Input{Tones: tones, DC: -0.4}, rate, 1)
	v := make([]float64, 1000)
	for k := range 1000 {
		source.Fill(v)
		for i := 0; i < len(v); i += 37 {
			want := -0.4
			for _, tone := range tones {
				want += math.Sqrt2 * tone.Amplitude * math.Sin(2*math.Pi*tone.Frequency*float64(k*1000+i)/rate+tone.Phase)
			}
			within(t, "sample", v[i], want, 2e-9)
		}
	}
}

// However the samples are cut up, and however often, the same settings and seed read the same; another seed does not.
func TestTwinIsDeterministic(t *testing.T) {
	in := Input{Tones: []Tone{{1, 1000, 0}}, White: 1e-3, Flicker: 1e-3}
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.01, Poles: 3, Gain: 1, Stability: 1e-4}
	first := Readings(in, s, 0.1, 5, 42)
	if again := Readings(in, s, 0.1, 5, 42); !slices.Equal(first, again) {
		t.Errorf("%v, then %v", first, again)
	}
	if other := Readings(in, s, 0.1, 5, 43); slices.Equal(first, other) {
		t.Errorf("another seed gives the same: %v", first)
	}
	rapid.Check(t, func(t *rapid.T) {
		rate := SamplingRate(in, s)
		whole, parts := make([]float64, 2000), make([]float64, 2000)
		NewSource(in, rate, 5).Fill(whole)
		source, one, two := NewSource(in, rate, 5), NewTwin(s, rate), NewTwin(s, rate)
		for rest := parts; len(rest) > 0; {
			n := min(len(rest), rapid.IntRange(1, 700).Draw(t, "part"))
			source.Fill(rest[:n])
			two.Advance(rest[:n])
			rest = rest[n:]
		}
		one.Advance(whole)
		for i := range whole {
			if math.Abs(whole[i]-parts[i]) > 1e-12 {
				t.Fatalf("sample %d: %v, in parts %v", i, whole[i], parts[i])
			}
		}
		x1, y1 := one.Read()
		x2, y2 := two.Read()
		if math.Hypot(x1-x2, y1-y2) > 1e-13 {
			t.Fatalf("%v %v, in parts %v %v", x1, y1, x2, y2)
		}
	})
}

func TestTwinStability(t *testing.T) {
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.002, Poles: 4, Gain: 2, OffsetX: 5, Stability: 1e-3}
	readings := Readings(Input{Tones: []Tone{{1, 1000, 0}}}, s, 0.04, 4000, 9)
	_, got := scatter(readings) // none of it in quadrature
	within(t, "deviation", got*math.Sqrt2, 2e-3, 3*2e-3/math.Sqrt(8000))
}

func TestSamplingRate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := TwinSettings{
			Frequency:    rapid.Float64Range(1, 1e6).Draw(t, "f"),
			Harmonic:     rapid.IntRange(1, 9).Draw(t, "n"),
			TimeConstant: rapid.Float64Range(1e-4, 100).Draw(t, "T"),
			Poles:        1, Gain: 1,
		}
		in := Input{Tones: []Tone{{1, s.Frequency, 0}, {1, rapid.Float64Range(0, 1e5).Draw(t, "tone"), 0}}}
		f := s.Frequency * float64(s.Harmonic)
		needed := max(8*f, 8*in.Tones[0].Frequency, 8*in.Tones[1].Frequency, 32/s.TimeConstant)
		rate := SamplingRate(in, s)
		if rate < needed || rate > needed+2*f {
			t.Fatalf("%g Hz, where %g Hz are needed", rate, needed)
		}
		NewTwin(s, rate)
		NewSource(in, rate, 1)
	})
}

func TestTwinAllocatesNothing(t *testing.T) {
	in := Input{Tones: []Tone{{1, 1000, 0}, {1, 50, 0}}, White: 1e-3, Flicker: 1e-3}
	s := TwinSettings{Frequency: 1000, Harmonic: 1, TimeConstant: 0.1, Poles: 4, Gain: 1, Clip: 2, Resolution: 1e-6}
	source, twin := NewSource(in, 1e4, 1), NewTwin(s, 1e4)
	if n := testing.AllocsPerRun(20, func() { twin.Settle(source, 0.1) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}
