package circuit

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

var openInput = Input{R: math.Inf(1)}

// near fails the test where got is off by more than a relative tolerance of a complex number's magnitude.
func near(t interface {
	Helper()
	Errorf(string, ...any)
}, what string, got, want complex128, tolerance float64) {
	t.Helper()
	if !(cmplx.Abs(got-want) <= tolerance*cmplx.Abs(want)) {
		t.Errorf("%s = %v, want %v (off by %.2g relative)", what, got, want, cmplx.Abs(got-want)/cmplx.Abs(want))
	}
}

type sample struct {
	name   string
	ladder Ladder
}

// samples are ladders that between them have every kind of part in every kind of place.
func samples() []sample {
	coax := Input{Lead: 0.15, R: 10e6, C: 125e-12}
	return []sample{
		{"one rung with parasitics", Ladder{
			Source: 50, Tap: 1, Input: coax,
			Arms: []Arm{
				{Place: Series, R: 1e6, L: 2e-6, C: 0.3e-12, Stray: 0.05, Lead: 0.02},
				{Place: Shunt, R: 1e3, L: 0.4e-6, C: 12e-12, Stray: 0.2},
			},
		}},
		{"four-terminal rung, common lead seen", Ladder{
			Source: 50, Tap: 1, Return: 0.3, ReturnSeen: 0.07, Input: coax,
			Arms: []Arm{
				{Place: Series, R: 99e3, C: 0.5e-12},
				{Place: Shunt, R: 10, L: 30e-9, C: 3e-12, Stray: 0.01, Lead: 0.4},
			},
		}},
		{"several shunts", Ladder{
			Source: 600, Tap: 4, ReturnSeen: 0.5, Input: Input{R: 1e6, C: 1e-9, Lead: 20},
			Arms: []Arm{
				{Place: Shunt, R: 5e3, C: 100e-12, Stray: 0.1},
				{Place: Series, R: 2.2e3, L: 1e-3},
				{Place: Shunt, R: 470, Lead: 0.1},
				{Place: Series, R: 1e4, C: 2e-12},
				{Place: Shunt, R: 100, L: 1e-6, Stray: 0.05, Lead: 0.3},
				{Place: Shunt, R: 4.7e3, C: 47e-12},
			},
		}},
		{"string with a tap joint", Ladder{
			Source: 50, Tap: 4, Return: 0.1, Input: Input{R: 10e6, C: 125e-12},
			Arms: []Arm{
				{Place: Series, R: 1e6, C: 0.3e-12},
				{Place: Tap},
				{Place: Series, R: 900, L: 0.1e-6},
				{Place: Series, R: 90, L: 0.1e-6},
				{Place: Tap},
				{Place: Series, R: 9},
				{Place: Shunt, R: 1, Stray: 0.2, L: 20e-9},
			},
		}},
		{"going on beyond the tap", Ladder{
			Source: 75, Tap: 1, Return: 0.2, ReturnSeen: 0.1, Input: Input{Lead: 2, R: 5e5, C: 200e-12},
			Arms: []Arm{
				{Place: Series, R: 47e3, C: 1e-12},
				{Place: Shunt, R: 1e3, Stray: 0.2, Lead: 0.1, C: 20e-12},
				{Place: Series, R: 10e3, L: 50e-6, C: 1e-12},
				{Place: Shunt, R: 330, L: 1e-6, Stray: 0.1},
				{Place: Series, R: 1e3},
				{Place: Shunt, R: 68, C: 5e-12},
				{Place: Series, R: 12}, // leads nowhere
			},
		}},
		{"close to the generator, behind a lead that goes on", Ladder{
			Source: 0.01, Tap: 3, ReturnSeen: 0.02, Input: Input{R: 1e6, C: 100e-12, Lead: 1},
			Arms: []Arm{
				{Place: Shunt, R: 1e5, C: 10e-12},
				{Place: Shunt, R: 1e4, Lead: 0.1},
				{Place: Series, R: 3, L: 1e-6},
				{Place: Tap},
			},
		}},
		{"heavily loaded", Ladder{
			Source: 50, Tap: 1, Input: Input{R: 1e4, C: 10e-9},
			Arms: []Arm{
				{Place: Series, R: 1e6, C: 0.2e-12},
				{Place: Shunt, R: 1e6, Stray: 1, Lead: 1},
				{Place: Series, R: 2e6},
				{Place: Shunt, R: 5e5},
			},
		}},
	}
}

// anyLadder draws one with up to 9 arms, sound but for values that no workshop would choose.
func anyLadder() *rapid.Generator[*Ladder] {
	return rapid.Custom(func(t *rapid.T) *Ladder {
		spread := func(name string, low, high float64) float64 {
			return math.Pow(10, rapid.Float64Range(math.Log10(low), math.Log10(high)).Draw(t, name))
		}
		maybe := func(name string, low, high float64) float64 {
			if rapid.Bool().Draw(t, "no "+name) {
				return 0
			}
			return spread(name, low, high)
		}
		l := &Ladder{
			Source: maybe("source", 1, 1e3), Return: maybe("return", 1e-3, 1), ReturnSeen: maybe("return seen", 1e-3, 10),
			Input: Input{Lead: maybe("sense", 1e-3, 10), R: math.Inf(1), C: maybe("input C", 1e-12, 1e-9)},
		}
		if rapid.Bool().Draw(t, "loaded") {
			l.Input.R = spread("input R", 1e4, 1e8)
		}
		var taps []int
		for k := range rapid.IntRange(1, 9).Draw(t, "arms") {
			place := Place(rapid.IntRange(0, 2).Draw(t, "place"))
			if k == 0 {
				place = Shunt
			}
			a := Arm{Place: place}
			if place != Tap {
				a.R = spread("R", 1, 1e6)
				a.L, a.C = maybe("L", 1e-9, 1e-4), maybe("C", 1e-13, 1e-9)
				a.Stray, a.Lead = maybe("stray", 1e-3, 1), maybe("lead", 1e-3, 1)
			}
			l.Arms = append(l.Arms, a)
		}
		l.Arms = rapid.Permutation(l.Arms).Draw(t, "order")
		for k, a := range l.Arms {
			if a.Place != Series {
				taps = append(taps, k)
			}
		}
		l.Tap = rapid.SampledFrom(taps).Draw(t, "tap")
		if err := l.Check(); err != nil {
			t.Fatalf("%v", err)
		}
		return l
	})
}

func TestSamplesAreSound(t *testing.T) {
	for _, s := range samples() {
		if err := s.ladder.Check(); err != nil {
			t.Errorf("%s: %v", s.name, err)
		}
	}
}
