package calib

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat"

	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// uncertaintyOf is a relative rectangular one.
func uncertaintyOf(u float64) plan.Uncertainty {
	return plan.Uncertainty{Relative: u, Shape: plan.Rectangular, Shares: -1, Standard: -1}
}

// noisier adds further noise to readings, in V rms.
func noisier(set *reading.Set, sd float64, random *rand.Rand) *reading.Set {
	out := *set
	out.Readings = append([]reading.Reading(nil), set.Readings...)
	for i := range out.Readings {
		out.Readings[i].X += sd * random.NormFloat64()
	}
	return &out
}

// Repeats that scatter more than predicted make the uncertainty larger, and the
// pulls stay of standard deviation 1; without it they would be several times that.
func TestLargerScatterIsUsed(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	p := *evaluateCase(t, "arrival").Plan
	p.Detector.Resolution = 0
	s := NewSimulator(&p)
	random := rand.New(rand.NewPCG(21, 22))
	var z []float64
	for range 300 {
		e, err := Evaluate(&p, noisier(s.Readings(Truth{Gain: 1, Fine: true}, random), 40e-9, random))
		if err != nil {
			t.Fatal(err)
		}
		if e.Result.Repeatability.Basis != ScatterEnlarged {
			t.Fatalf("the scatter is %q, its ratio %.3g", e.Result.Repeatability.Basis, float64(e.Result.Repeatability.Ratio))
		}
		z = append(z, e.Result.Fit.Offset.Value/e.Result.Fit.Offset.U)
	}
	// The predicted noise differs from step to step and what was added does not,
	// so one factor for all is a rough measure: within a factor of 1.5.
	if _, sd := stat.MeanStdDev(z, nil); sd > 1.5 {
		t.Errorf("pulls of the offset have the standard deviation %.2f", sd)
	}
}

// Clean repeats are called noisy in one of a hundred campaigns, the level of the test.
func TestCleanScatterIsLeftAlone(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	p := *evaluateCase(t, "string").Plan
	p.Detector.Resolution = 0
	s := NewSimulator(&p)
	random := rand.New(rand.NewPCG(23, 24))
	called := 0
	for range 1000 {
		e, err := Evaluate(&p, s.Readings(Truth{Gain: 1, Fine: true}, random))
		if err != nil {
			t.Fatal(err)
		}
		if e.Result.Repeatability.Basis == ScatterEnlarged {
			called++
		}
	}
	if called < 1 || called > 22 { // 10 expected; 22 is four standard deviations more
		t.Errorf("%d of 1000 clean campaigns are called noisy", called)
	}
}

// Where the plan states no noise, the repeats say what it is, with their degrees
// of freedom, and the coverage factor is Student's.
func TestScatterServesWhereNoNoiseIsStated(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	full := *evaluateCase(t, "arrival").Plan
	full.Detector.Resolution = 0
	silent := full
	silent.Detector.Noise, silent.Detector.Stability = 0, 0
	s := NewSimulator(&full)
	random := rand.New(rand.NewPCG(25, 26))
	held := 0
	const campaigns = 500
	for range campaigns {
		e, err := Evaluate(&silent, s.Readings(Truth{Gain: 1, Fine: true}, random))
		if err != nil {
			t.Fatal(err)
		}
		f := &e.Result.Fit
		if e.Result.Repeatability.Basis != ScatterObserved || !(f.Offset.K > 1.962) {
			t.Fatalf("basis %q, k = %g", e.Result.Repeatability.Basis, f.Offset.K)
		}
		if math.Abs(f.Offset.Value) <= f.Offset.Expanded() {
			held++
		}
	}
	if share := float64(held) / campaigns; share < 0.91 || share > 0.99 {
		t.Errorf("%.1f %% of the intervals hold the truth", 100*share)
	}
}

// A magnitude in the noise reads high (Rice 1945); the estimate takes that off,
// down to a signal of one standard deviation of the noise.
func TestMagnitudeInTheNoiseIsUnbiased(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	p := *evaluateCase(t, "string").Plan
	p.Detector.Resolution, p.Detector.Stability = 0, 0
	p.Detector.Noise = 3.2e-6 // filtered: 0.9 µV, as much as the lowest drop
	p.Steps = append([]plan.Step(nil), p.Steps...)
	for i := range p.Steps {
		p.Steps[i].Repeats = 25
	}
	s := NewSimulator(&p)
	random := rand.New(rand.NewPCG(27, 28))
	lowest := len(p.Steps) - 1
	var offset, gain, raw, bottom []float64
	for range 400 {
		set := s.Readings(Truth{Gain: 1, Fine: true}, random)
		e, err := Evaluate(&p, set)
		if err != nil {
			t.Fatal(err)
		}
		f, step := &e.Result.Fit, &e.Result.Steps[lowest]
		offset = append(offset, f.Offset.Value/f.Offset.U)
		gain = append(gain, (f.Gain.Value-1)/f.Gain.U)
		raw = append(raw, float64(step.Reading)/step.Drop)
		bottom = append(bottom, float64(step.Error)/step.Drop)
	}
	if mean := stat.Mean(raw, nil); mean < 1.4 {
		t.Fatalf("the readings at the bottom are %.2f times the drop: not in the noise", mean)
	}
	for name, z := range map[string][]float64{"offset": offset, "gain": gain} {
		if mean := stat.Mean(z, nil); math.Abs(mean) > 0.2 { // its standard error is 0.05
			t.Errorf("%s: pulls have the mean %.2f", name, mean)
		}
	}
	if mean, sd := stat.MeanStdDev(bottom, nil); math.Abs(mean) > 4*sd/20 {
		t.Errorf("the error at the bottom is %.3f of the drop on average, where the reading is high by half of it", mean)
	}
}
