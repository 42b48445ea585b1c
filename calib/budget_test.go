package calib

import (
	"math"
	"strings"
	"testing"

	"rungproof/calib/uncertainty"
)

// The lines of every budget add up to the u that the fit reports: for the fit's
// parameters, the gains by range, and each step's error.
func TestBudgetsAddUp(t *testing.T) {
	for _, name := range []string{"arrival", "string", "quadrature", "one-amplitude"} {
		t.Run(name, func(t *testing.T) {
			e := evaluateCase(t, name)
			want := map[string]float64{OfGain: e.Result.Fit.Gain.U}
			if f := &e.Result.Fit; f.Separable {
				want[OfOffset], want[OfSeries] = f.Offset.U, f.SeriesResistance.U
			} else {
				want[OfOffset], want[OfSeries] = f.Intercept.U, f.AsSeries.U
			}
			for _, g := range e.Result.ByRange.Gain {
				for k, full := range e.Plan.Detector.Ranges {
					if full == g.Range {
						want[e.rangeName(k)] = g.U
					}
				}
			}
			for _, s := range e.Result.Steps {
				want[s.ID] = s.u()
			}
			for of, u := range want {
				b, err := e.Budget(of)
				if err != nil {
					t.Errorf("%s: %v", of, err)
					continue
				}
				sum, shares := 0.0, 0.0
				for _, l := range b.Lines {
					sum += l.Contribution * l.Contribution
					shares += l.Share
				}
				near(t, of+": root sum of squares", math.Sqrt(sum), u, 1e-6*u)
				near(t, of+": u", b.U, u, 1e-6*u)
				near(t, of+": sum of shares", shares, 1, 1e-9)
			}
		})
	}
}

// What a budget says would be gained is gained: U after, found by doing the
// estimate again, is what the plan with that input improved gives.
func TestImprovementIsTrue(t *testing.T) {
	e := evaluateCase(t, "arrival")
	b, err := e.Budget(OfGain)
	if err != nil {
		t.Fatal(err)
	}
	first := b.Improve[0]
	if first.Name != "amplitude 1 V" && first.Name != "amplitude 20 V" {
		t.Fatalf("the largest line is %s", first.Name)
	}
	better := *e.Plan
	better.Generator.Amplitudes = append(better.Generator.Amplitudes[:0:0], better.Generator.Amplitudes...)
	for i := range better.Generator.Amplitudes {
		if a := &better.Generator.Amplitudes[i]; strings.HasSuffix(first.Name, a.Shown) {
			a.EMF.Absolute /= improvement
		}
	}
	improved, err := Evaluate(&better, e.Readings)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "U of gain", first.After, improved.Result.Fit.Gain.Expanded(), 1e-4*first.After) // the point of linearisation differs
	if first.After >= b.Expanded {
		t.Errorf("U would grow from %g to %g", b.Expanded, first.After)
	}
}

// EA-4/02 M:2022, S9: where one rectangular input dominates, the coverage factor
// is that of the convolution, 1.65 for a rectangle with little beside it.
func TestOneRectangularInputDominates(t *testing.T) {
	e := evaluateCase(t, "arrival")
	p := *e.Plan
	p.Generator.Amplitudes = append(p.Generator.Amplitudes[:0:0], p.Generator.Amplitudes...)
	for i := range p.Generator.Amplitudes {
		p.Generator.Amplitudes[i].Measured = false
		p.Generator.Amplitudes[i].EMF.Relative, p.Generator.Amplitudes[i].EMF.Absolute = 0, 0
	}
	p.Generator.Amplitude = uncertaintyOf(0.01 / math.Sqrt(3))
	got, err := Evaluate(&p, e.Readings)
	if err != nil {
		t.Fatal(err)
	}
	g := got.Result.Fit.Gain
	near(t, "u of gain", g.U, 0.01/math.Sqrt(3), 2e-4)
	near(t, "k of gain", g.K, 1.65, 0.02)
	b, err := got.Budget(OfGain)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "k by the convolution of all lines", b.K, uncertainty.ConvolutionFactor(b.Lines, 0.95), 1e-6)
}

func TestBudgetOfSomethingElse(t *testing.T) {
	e := evaluateCase(t, "arrival")
	for _, of := range []string{"", "gains", "3 µV", "A99", "100 Ω"} {
		if _, err := e.Budget(of); err == nil || !strings.Contains(err.Error(), "is none of gain, offset, series-resistance") {
			t.Errorf("budget of %q: %v", of, err)
		}
	}
}
