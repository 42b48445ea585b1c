package calib

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat"

	"rungproof/calib/plan"
)

// truths are what the campaigns are simulated with.
var truths = map[string]Truth{
	"arrival":    {Gain: 1.0021, Offset: 120e-9, Series: 0.31},
	"string":     {Gain: 0.9991, Offset: -50e-9, Series: 0.021},
	"quadrature": {Gain: 1.0035, Offset: 400e-9, OffsetY: -30e-9, Series: 0.12, Phase: 0.0026},
}

// pulls are the deviations of gain, offset, series resistance and of all errors
// from the truth, each over its standard uncertainty, of many campaigns.
func pulls(t testing.TB, name string, campaigns int, fine bool) map[string][]float64 {
	p := evaluateCase(t, name).Plan
	truth := truths[name]
	truth.Fine = fine
	if fine {
		// The display's share of the predicted scatter goes with its rounding.
		q := *p
		q.Detector.Resolution = 0
		p = &q
	}
	s := NewSimulator(p)
	random := rand.New(rand.NewPCG(7, uint64(len(name))))
	out := map[string][]float64{}
	for range campaigns {
		e, err := Evaluate(p, s.Readings(truth, random))
		if err != nil {
			t.Fatal(err)
		}
		f := &e.Result.Fit
		for k, x := range map[string]struct {
			got  Estimate
			true float64
		}{"gain": {f.Gain, truth.Gain}, "offset": {f.Offset, truth.Offset}, "series resistance": {f.SeriesResistance, truth.Series}} {
			out[k] = append(out[k], (x.got.Value-x.true)/x.got.U)
		}
	}
	return out
}

// 1000 campaigns with the display set fine: pulls of mean 0 ± 0.2 and standard
// deviation 1 ± 0.1. Their statistical errors are 0.03 and 0.02.
func TestPullsOfSimulatedCampaigns(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	for name := range truths {
		t.Run(name, func(t *testing.T) {
			for parameter, z := range pulls(t, name, 1000, true) {
				mean, sd := stat.MeanStdDev(z, nil)
				if math.Abs(mean) > 0.2 || math.Abs(sd-1) > 0.1 {
					t.Errorf("%s: pulls of mean %.3f and standard deviation %.3f", parameter, mean, sd)
				}
			}
		})
	}
}

// With the plan's own display, whose rounding repeats do not average down, the
// stated uncertainty can only be generous.
func TestPullsWithTheDisplaysOwnResolution(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	for name := range truths {
		t.Run(name, func(t *testing.T) {
			for parameter, z := range pulls(t, name, 300, false) {
				mean, sd := stat.MeanStdDev(z, nil)
				if math.Abs(mean) > 0.2 || sd > 1.1 {
					t.Errorf("%s: pulls of mean %.3f and standard deviation %.3f", parameter, mean, sd)
				}
			}
		})
	}
}

// A fault of one range is charged to its steps by its own size, and the sound
// ranges' errors stay where they are without it.
func TestOneFaultyRange(t *testing.T) {
	p := evaluateCase(t, "arrival").Plan
	const faulty, fault = 2, 1.05 // the 1 mV range reads 5 % high
	perRange := *p
	perRange.Fit.Gain = gainPerRange // the sound detector, seen by the fit that the faulty one is judged by
	errors := func(p *plan.Plan, gains map[int]float64) *Result {
		random := rand.New(rand.NewPCG(3, 4))
		e, err := Evaluate(p, NewSimulator(p).Readings(Truth{Gain: 1, Series: 0.2, RangeGain: gains}, random))
		if err != nil {
			t.Fatal(err)
		}
		return e.Result
	}
	sound, broken := errors(&perRange, nil), errors(p, map[int]float64{faulty: fault})
	if plain := errors(p, nil); !broken.ByRange.Used || plain.ByRange.Used {
		t.Fatalf("fit by range used: %v with the fault, %v without", broken.ByRange.Used, plain.ByRange.Used)
	}
	for i := range broken.Steps {
		b, s := &broken.Steps[i], &sound.Steps[i]
		moved := float64(b.Error - s.Error)
		if b.Range != p.Detector.Ranges[faulty] {
			if math.Abs(moved) > 0.1*float64(s.U) {
				t.Errorf("step %s on a sound range: error moved by %.2f U", s.ID, moved/float64(s.U))
			}
			continue
		}
		if want := (fault - 1) * float64(s.Reading); math.Abs(moved-want) > 0.1*math.Abs(want) {
			t.Errorf("step %s on the faulty range: error moved by %.3g V, the fault is %.3g V", s.ID, moved, want)
		}
		if b.Outcome.String() == "pass" {
			t.Errorf("step %s on the faulty range passes", s.ID)
		}
	}
}

func BenchmarkEvaluateArrival(b *testing.B) {
	e := evaluateCase(b, "arrival")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Evaluate(e.Plan, e.Readings); err != nil {
			b.Fatal(err)
		}
	}
}
