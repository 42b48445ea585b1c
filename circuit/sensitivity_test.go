package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// The two-resistor divider, by hand: H = b/(a + b), so dH/da = −b/(a + b)² and dH/db = a/(a + b)².
func TestSensitivityOfTwoResistors(t *testing.T) {
	const a, b = 3.0, 2.0
	l := Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: a}, {Place: Shunt, R: b}}}
	r := l.Solve(0, nil)
	s := r.Sensitivity()
	near(t, "H", r.H, 0.4, 1e-15)
	near(t, "dH/da", s.Arms[0].R, -b/25, 1e-15)
	near(t, "dH/db", s.Arms[1].R, a/25, 1e-15)
	near(t, "dH/dSource", s.Source, -b/25, 1e-15)
	near(t, "dH/dReturn", s.Return, -b/25, 1e-15)
	near(t, "dH/dReturnSeen", s.ReturnSeen, a/25, 1e-15) // in series with b, for source and detector
	near(t, "dH/dStray", s.Arms[1].Stray, a/25, 1e-15)
	near(t, "dH/dLead", s.Arms[1].Lead, -b/25, 1e-15) // as if it stood before the tap
}

// A derivative next to the ladder's value that it belongs to.
type derivative struct {
	name  string
	value *float64
	scale float64 // in the value's unit; stands in for a value of zero where a step is chosen
	dH    complex128
}

func derivatives(l *Ladder, s Sensitivity) []derivative {
	d := []derivative{
		{"source", &l.Source, 0.1, s.Source},
		{"return", &l.Return, 0.1, s.Return},
		{"return seen", &l.ReturnSeen, 0.1, s.ReturnSeen},
		{"sense lead", &l.Input.Lead, 0.1, s.Input.Lead},
		{"input R", &l.Input.R, 0.1, s.Input.R},
		{"input C", &l.Input.C, 1e-12, s.Input.C},
	}
	for k := range l.Arms {
		a, b := &l.Arms[k], s.Arms[k]
		if a.Place == Tap {
			continue
		}
		name := func(what string) string { return fmt.Sprintf("arm %d (%v) %s", k+1, a.Place, what) }
		d = append(d,
			derivative{name("R"), &a.R, 0.1, b.R},
			derivative{name("L"), &a.L, 1e-8, b.L},
			derivative{name("C"), &a.C, 1e-12, b.C},
			derivative{name("stray"), &a.Stray, 0.1, b.Stray},
			derivative{name("lead"), &a.Lead, 0.1, b.Lead},
		)
	}
	return d
}

// Central differences of fourth order, (8·(H(+h) − H(−h)) − (H(+2h) − H(−2h)))/12h. They are off by about 4·(h/Z)⁴, Z what the element sees beside
// itself: a thousandth of the element, or of 0.1 Ω, is small enough off resonance. They carry H's rounding over h, allowed for by the second part of
// the tolerance.
func checkDerivatives(t interface {
	Helper()
	Errorf(string, ...any)
}, name string, l *Ladder, f float64) {
	t.Helper()
	r := l.Solve(f, nil)
	var ws Workspace
	for _, d := range derivatives(l, r.Sensitivity()) {
		at := *d.value
		if math.IsInf(at, 1) {
			if d.dH != 0 {
				t.Errorf("%s at %g Hz: dH by an open %s = %v, want 0", name, f, d.name, d.dH)
			}
			continue
		}
		h := 1e-3 * at
		if at == 0 {
			h = 1e-3 * d.scale
		}
		step := func(by float64) complex128 {
			*d.value = at + by*h
			return l.Transfer(f, &ws)
		}
		difference := (8*(step(1)-step(-1)) - (step(2) - step(-2))) / complex(12*h, 0)
		*d.value = at
		if off := cmplx.Abs(d.dH - difference); !(off <= 1e-9*cmplx.Abs(difference)+1e-14*cmplx.Abs(r.H)/h) {
			t.Errorf("%s at %g Hz: dH by %s = %v, difference gives %v", name, f, d.name, d.dH, difference)
		}
	}
}

func TestSensitivityAgainstDifferences(t *testing.T) {
	for _, s := range samples() {
		for _, f := range []float64{0, 50, 1e3, 1e5} {
			checkDerivatives(t, s.name, &s.ladder, f)
		}
	}
}

func TestSensitivityAgainstDifferencesAnyLadder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLadder().Draw(t, "ladder")
		checkDerivatives(t, "any ladder", l, rapid.SampledFrom([]float64{0, 33, 1e3, 2e4}).Draw(t, "f"))
	})
}

// H has no unit and impedances no other scale than each other: multiplying every R and L by s and dividing every C by s leaves H as it is. So
// ΣR·dH/dR + ΣL·dH/dL − ΣC·dH/dC = 0 (Euler's theorem on homogeneous functions).
func TestSensitivitySum(t *testing.T) {
	for _, s := range samples() {
		r := s.ladder.Solve(1e4, nil)
		var sum complex128
		var size float64
		for _, d := range derivatives(&s.ladder, r.Sensitivity()) {
			term := complex(*d.value, 0) * d.dH
			if d.scale == 1e-12 {
				term = -term
			}
			sum += term
			size += cmplx.Abs(term)
		}
		if cmplx.Abs(sum) > 1e-13*size {
			t.Errorf("%s: sum %v, want 0 beside %g", s.name, sum, size)
		}
	}
}

func TestOutdatedResponsePanics(t *testing.T) {
	l := samples()[0].ladder
	var ws Workspace
	r := l.Solve(1e3, &ws)
	first := slices.Clone(r.Sensitivity().Arms)
	if again := r.Sensitivity().Arms; !slices.Equal(first, again) {
		t.Errorf("asked twice: %v, then %v", first, again)
	}
	l.Transfer(2e3, &ws)
	defer func() {
		if recover() == nil {
			t.Error("no panic for a Response whose Workspace has been used again")
		}
	}()
	r.Sensitivity()
}
