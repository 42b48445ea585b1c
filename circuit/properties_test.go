package circuit

import (
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// Reciprocity: the open voltage at the tap for 1 A into the input is that at the input for 1 A into the tap. The second is the ladder read
// backwards, with the generator where the detector was.
func TestReciprocity(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLadder().Draw(t, "ladder")
		f := rapid.SampledFrom([]float64{0, 33, 1e3, 1e5}).Draw(t, "f")
		l.Input = openInput
		l.Source = 1 // only so that neither end is shorted
		l.Arms = append(l.Arms, Arm{Place: Shunt, R: 50}, Arm{Place: Tap})
		l.Tap = len(l.Arms) - 1

		back := *l
		back.Arms = slices.Clone(l.Arms)
		slices.Reverse(back.Arms)
		back.Arms = append(back.Arms, Arm{Place: Tap})
		back.Tap = len(back.Arms) - 1

		there, here := l.Solve(f, nil), back.Solve(f, nil)
		near(t, "transfer impedance", there.H*there.InputImpedance, here.H*here.InputImpedance, 1e-12)
	})
}

// Kirchhoff's voltage law along a string: from each joint to the next the open voltage falls by the drop of the arm between; the last joint
// is above common by the drop of the shunt, and all drops with the source's make the EMF.
func TestStringTapsAddUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f := rapid.SampledFrom([]float64{0, 1e3, 1e5}).Draw(t, "f")
		ohms := rapid.SliceOfN(rapid.Float64Range(0.1, 1e5), 2, 12).Draw(t, "resistors")
		l := Ladder{Source: 50, Input: openInput}
		var joints []int
		for k, r := range ohms {
			joints = append(joints, len(l.Arms))
			place := Series
			if k == len(ohms)-1 {
				place = Shunt
			}
			l.Arms = append(l.Arms, Arm{Place: Tap}, Arm{Place: place, R: r, L: 1e-7, C: 1e-12, Stray: 0.01})
		}
		var r Response
		above, sum := complex128(1), complex128(0)
		for n, joint := range joints {
			l.Tap = joint
			r = l.Solve(f, nil)
			var drop complex128
			if n == 0 {
				drop = r.Source * 50
			} else {
				a := l.Arms[joint-1]
				drop = r.Arms[joint-1] * impedanceOf(a, f)
			}
			if cmplx.Abs(above-r.H-drop) > 1e-14 {
				t.Errorf("joint %d: %v below the one before, want %v", n, above-r.H, drop)
			}
			above, sum = r.H, sum+drop
		}
		last := r.Arms[len(l.Arms)-1] * impedanceOf(l.Arms[len(l.Arms)-1], f)
		near(t, "drop of the shunt", last, r.H, 1e-12)
		near(t, "all drops", sum+last, 1, 1e-14)
	})
}

func impedanceOf(a Arm, f float64) complex128 {
	omega := 2 * math.Pi * f
	z := complex(a.R, omega*a.L)
	return 1/(1/z+complex(0, omega*a.C)) + complex(a.Stray+a.Lead, 0)
}

// Conservation of energy: what the EMF delivers, E²·Re(1/input impedance), is found again in the elements, the wires, the source and the detector.
func TestPowerBalance(t *testing.T) {
	const emf = 7
	rapid.Check(t, func(t *rapid.T) {
		l := anyLadder().Draw(t, "ladder")
		r := l.Solve(rapid.SampledFrom([]float64{0, 33, 1e3, 1e5}).Draw(t, "f"), nil)
		p := r.Power(emf)
		heat := func(i complex128, ohm float64) float64 { return emf * emf * ohm * math.Pow(cmplx.Abs(i), 2) }
		total := p.Source + p.Detector +
			heat(r.Source, l.Return) + heat(r.Source-r.Detector, l.ReturnSeen) + heat(r.Detector, l.Input.Lead)
		for k, a := range l.Arms {
			inLead := r.Arms[k]
			if k == l.Tap {
				inLead += r.Detector
			}
			total += p.Arms[k] + heat(r.Arms[k], a.Stray) + heat(inLead, a.Lead)
		}
		delivered := emf * emf * real(r.Source)
		if size := emf * emf * cmplx.Abs(r.Source); math.Abs(total-delivered) > 1e-12*size {
			t.Errorf("dissipated %g W, delivered %g W", total, delivered)
		}
	})
}

// By hand: 10 V over 100 Ω in all is 0.1 A, so 10 mW/Ω.
func TestPower(t *testing.T) {
	l := Ladder{Source: 10, Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 60}, {Place: Shunt, R: 25, Stray: 5}}}
	r := l.Solve(0, nil)
	p := r.Power(10)
	for _, c := range []struct {
		name      string
		got, want float64
	}{{"source", p.Source, 0.1}, {"series", p.Arms[0], 0.6}, {"shunt", p.Arms[1], 0.25}, {"detector", p.Detector, 0}} {
		if math.Abs(c.got-c.want) > 1e-15 {
			t.Errorf("%s: %g W, want %g", c.name, c.got, c.want)
		}
	}
}

// Nyquist's theorem is about passive networks: no output impedance has a negative real part.
func TestOutputIsPassive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLadder().Draw(t, "ladder")
		if r := l.Solve(rapid.SampledFrom([]float64{0, 33, 1e3, 1e5}).Draw(t, "f"), nil); !(real(r.Z) >= 0) {
			t.Errorf("Z = %v", r.Z)
		}
	})
}
