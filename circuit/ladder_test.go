package circuit

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

func TestCheck(t *testing.T) {
	for _, c := range []struct {
		says  string
		spoil func(l *Ladder)
	}{
		{"no shunt", func(l *Ladder) { l.Arms = []Arm{{Place: Series, R: 1}, {Place: Tap}} }},
		{"ladder's 0 arms", func(l *Ladder) { l.Arms = nil }},
		{"on arm 3, want one of 1 to 2", func(l *Ladder) { l.Tap = 2 }},
		{"on arm 0, want one of 1 to 2", func(l *Ladder) { l.Tap = -1 }},
		{"on arm 1, which is a series arm", func(l *Ladder) { l.Tap = 0 }},
		{"arm 1 (series): R is -5 Ω", func(l *Ladder) { l.Arms[0].R = -5 }},
		{"arm 2 (shunt): L is NaN H", func(l *Ladder) { l.Arms[1].L = math.NaN() }},
		{"arm 2 (shunt): C is +Inf F", func(l *Ladder) { l.Arms[1].C = math.Inf(1) }},
		{"arm 2 (shunt): stray is -1 Ω", func(l *Ladder) { l.Arms[1].Stray = -1 }},
		{"arm 2 (shunt): lead is -1 Ω", func(l *Ladder) { l.Arms[1].Lead = -1 }},
		{"a tap is a joint only", func(l *Ladder) { l.Arms = append(l.Arms, Arm{Place: Tap, R: 1}) }},
		{"no such place", func(l *Ladder) { l.Arms = append(l.Arms, Arm{Place: 7}) }},
		{"source resistance is -50 Ω", func(l *Ladder) { l.Source = -50 }},
		{"return is NaN Ω", func(l *Ladder) { l.Return = math.NaN() }},
		{"return seen by the detector is +Inf Ω", func(l *Ladder) { l.ReturnSeen = math.Inf(1) }},
		{"sense lead is -1 Ω", func(l *Ladder) { l.Input.Lead = -1 }},
		{"input capacitance is -1 F", func(l *Ladder) { l.Input.C = -1 }},
		{"input resistance is 0 Ω", func(l *Ladder) { l.Input.R = 0 }},
		{"input resistance is NaN Ω", func(l *Ladder) { l.Input.R = math.NaN() }},
		{"generator is shorted", func(l *Ladder) { l.Arms[0].R, l.Arms[1].R, l.Arms[1].L = 0, 0, 1e-6 }},
	} {
		l := Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 1e3}, {Place: Shunt, R: 1}}}
		if err := l.Check(); err != nil {
			t.Fatal(err)
		}
		c.spoil(&l)
		if err := l.Check(); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("error %v, want one that says %q", err, c.says)
		}
	}
}

func TestPlaceString(t *testing.T) {
	for p, want := range []string{"series", "shunt", "tap", "Place(3)"} {
		if got := Place(p).String(); got != want {
			t.Errorf("Place %d is %q, want %q", p, got, want)
		}
	}
}

// Shorts, by hand: with nothing but 0 Ω between its terminals a detector sees nothing; else what the wires leave.
func TestShorts(t *testing.T) {
	top := Arm{Place: Series, R: 999}
	short := Arm{Place: Shunt}
	on := func(tap int, arms ...Arm) Ladder {
		return Ladder{Source: 1, Tap: tap, Input: Input{R: 1e6, C: 1e-9}, Arms: arms}
	}
	seen := on(1, top, short)
	seen.ReturnSeen, seen.Input = 0.5, openInput
	stray := on(1, top, Arm{Place: Shunt, Stray: 0.5})
	stray.Input = openInput
	for _, c := range []struct {
		name   string
		ladder Ladder
		h, z   complex128
	}{
		{"short", on(1, top, short), 0, 0},
		{"short behind a lead", on(1, top, Arm{Place: Shunt, Lead: 0.1}), 0, 0},
		{"two shorts side by side", on(1, top, short, short), 0, 0},
		{"three shorts side by side", on(2, top, short, short, short), 0, 0},
		{"short before the tap", on(3, top, short, Arm{Place: Series}, Arm{Place: Shunt, R: 10}), 0, 0},
		{"short beyond the tap", on(1, top, Arm{Place: Shunt, R: 10}, Arm{Place: Series}, short), 0, 0},
		{"joint on a short", on(1, top, Arm{Place: Tap}, short), 0, 0},
		{"short with a stray wire", stray, 0.5 / 1000.5, 0.5 * 1000 / 1000.5},
		{"short, common lead seen", seen, 0.5 / 1000.5, 0.5 * 1000 / 1000.5},
	} {
		if err := c.ladder.Check(); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		for _, f := range []float64{0, 1e3} {
			r := c.ladder.Solve(f, nil)
			near(t, c.name+": H", r.H, c.h, 1e-14)
			near(t, c.name+": Z", r.Z, c.z, 1e-14)
			s := r.Sensitivity()
			for _, d := range derivatives(&c.ladder, s) {
				if cmplx.IsNaN(d.dH) || cmplx.IsInf(d.dH) {
					t.Errorf("%s: dH by %s = %v", c.name, d.name, d.dH)
				}
			}
		}
	}
}

// Two shorts side by side share alike: raising both by x gives x/2, so their derivatives add to that of one alone, by half.
func TestTwoShortsMoveTogether(t *testing.T) {
	l := Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 100}, {Place: Shunt}, {Place: Shunt}}}
	r := l.Solve(0, nil)
	s := r.Sensitivity()
	near(t, "sum of derivatives", s.Arms[1].R+s.Arms[2].R, 0.5/100, 1e-15)
}

func TestTapOnSeriesArmPanics(t *testing.T) {
	defer func() {
		if message, _ := recover().(string); !strings.HasPrefix(message, "circuit: ") {
			t.Errorf("panic with %q, want the package's name", message)
		}
	}()
	l := Ladder{Input: openInput, Arms: []Arm{{Place: Series, R: 1}, {Place: Shunt, R: 1}}}
	l.Solve(0, nil)
}
