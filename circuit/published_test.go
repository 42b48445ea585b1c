package circuit

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"
)

// The AC divider of two layouts and the tapped string: closed forms in complex arithmetic, which ngspice 39 reproduces.
func TestDividerLayouts(t *testing.T) {
	detector := Input{R: 10e6, C: 125e-12}
	top := Arm{Place: Series, R: 1e6, C: 0.3e-12}
	wireInRung := Ladder{Source: 50, Tap: 1, Input: detector, Arms: []Arm{top, {Place: Shunt, R: 1e3, Stray: 0.2}}}
	wireInSense := Ladder{Source: 50, Tap: 1, Input: detector, Arms: []Arm{top, {Place: Shunt, R: 1e3}}}
	wireInSense.Input.Lead = 0.2
	onString := func(tap int) Ladder {
		return Ladder{Source: 50, Tap: tap, Input: detector, Arms: []Arm{
			top, {Place: Tap},
			{Place: Series, R: 900}, {Place: Tap},
			{Place: Series, R: 90}, {Place: Tap},
			{Place: Series, R: 9}, {Place: Shunt, R: 1, Stray: 0.2},
		}}
	}
	cases := []struct {
		name      string
		ladder    Ladder
		f         float64
		magnitude float64
		degrees   float64
		printed   float64 // half a unit of the phase's last printed digit, degrees
	}{
		{"wire in the rung", wireInRung, 0, 0.000999050866715833, 0, 0},
		{"wire in the rung", wireInRung, 17, 0.000999050867139445, 0.00106976191159, 5e-15},
		{"wire in the rung", wireInRung, 1e3, 0.000999052332499781, 0.0629270526889, 5e-14},
		{"wire in the rung", wireInRung, 1e5, 0.00101351390627272, 6.17672660983, 5e-12},
		{"wire in the sense lead", wireInSense, 0, 0.000998851296017322, 0, 0},
		{"wire in the sense lead", wireInSense, 17, 0.000998851296440849, 0.00106976197245, 5e-15},
		{"wire in the sense lead", wireInSense, 1e3, 0.000998852761508809, 0.0629270562690, 5e-14},
		{"wire in the sense lead", wireInSense, 1e5, 0.00101331144990671, 6.17672695239, 5e-12},
		{"string, top joint", onString(1), 17, 0.000999050867139445, 0.00106976191159, 5e-15},
		{"string, 100 Ω", onString(3), 0, 1.00093877516386e-4, 0, 0},
		{"string, 100 Ω", onString(3), 17, 1.00093877567686e-4, 0.00175742929732, 5e-15},
		{"string, 100 Ω", onString(3), 1e3, 1.00094055024320e-4, 0.103378066097, 5e-13},
		{"string, 100 Ω", onString(3), 1e5, 1.01853383159363e-4, 10.2125781857, 5e-11},
		{"string, 10 Ω", onString(5), 0, 1.01892888050136e-5, 0, 0},
		{"string, 10 Ω", onString(5), 17, 1.01892888102448e-5, 0.00182627094249, 5e-15},
		{"string, 10 Ω", onString(5), 1e3, 1.01893069062140e-5, 0.107427574627, 5e-13},
		{"string, 10 Ω", onString(5), 1e5, 1.03687209568248e-5, 10.6175196761, 5e-11},
		{"string, 1 Ω", onString(7), 0, 1.19874093826682e-6, 0, 0},
		{"string, 1 Ω", onString(7), 17, 1.19874093888228e-6, 0.00183315585622, 5e-15},
		{"string, 1 Ω", onString(7), 1e3, 1.19874306785984e-6, 0.107832569552, 5e-13},
		{"string, 1 Ω", onString(7), 1e5, 1.21985101003906e-6, 10.6580191587, 5e-11},
	}
	var ws Workspace
	for _, c := range cases {
		h := c.ladder.Transfer(c.f, &ws)
		if got := cmplx.Abs(h); math.Abs(got/c.magnitude-1) > 1e-12 {
			t.Errorf("%s at %g Hz: magnitude %.15g, want %.15g", c.name, c.f, got, c.magnitude)
		}
		if got := cmplx.Phase(h) * 180 / math.Pi; math.Abs(got-c.degrees) > 1.01*c.printed {
			t.Errorf("%s at %g Hz: phase %.15g°, want %.15g°", c.name, c.f, got, c.degrees)
		}
	}
}

// Output impedance of the layout with the wire in the rung, as for the noise at its tap (closed form; ngspice's noise analysis agrees).
func TestOutputImpedance(t *testing.T) {
	l := Ladder{Source: 50, Tap: 1, Input: Input{R: 10e6, C: 125e-12}, Arms: []Arm{
		{Place: Series, R: 1e6, C: 0.3e-12}, {Place: Shunt, R: 1e3, Stray: 0.2},
	}}
	r := l.Solve(1e3, nil)
	near(t, "Z", r.Z, complex(999.1002011154, -0.7858672615), 1e-13)
	if got := ThermalNoise(r.Z, 300-273.15) * 1e9; math.Abs(got-4.068523113) > 5e-10 {
		t.Errorf("noise at the tap %.10g nV/√Hz, want 4.068523113", got)
	}
}

// √(4kTR) with k of the SI of 2019; a handbook has 4.07 nV/√Hz for 1 kΩ at 300 K.
func TestThermalNoise(t *testing.T) {
	for _, c := range []struct{ ohm, kelvin, nanovolt float64 }{
		{50, 290, 0.894861}, {50, 300, 0.910159},
		{1e3, 290, 4.001941}, {1e3, 293.15, 4.023617}, {1e3, 296.15, 4.044152}, {1e3, 300, 4.070355},
		{10e3, 300, 12.871592}, {100e3, 300, 40.703548}, {1e6, 300, 128.715920}, {10e6, 300, 407.035478},
	} {
		got := ThermalNoise(complex(c.ohm, 123), c.kelvin-273.15) * 1e9
		if math.Abs(got-c.nanovolt) > 0.51e-6 { // printed to 1e-6
			t.Errorf("%g Ω at %g K: %.7f nV/√Hz, want %.6f", c.ohm, c.kelvin, got, c.nanovolt)
		}
	}
}

// What a 1 MΩ series arm leaves, as is common practice to reckon: two figures hold.
func TestCommonPractice(t *testing.T) {
	for _, c := range []struct{ peakToPeak, rung, rms float64 }{
		{20, 10e3, 70e-3},
		{0.2, 10e3, 0.7e-3},
		{0.2, 1e3, 70e-6},
		{0.2, 100, 7e-6},
	} {
		l := Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 1e6}, {Place: Shunt, R: c.rung}}}
		drop := c.peakToPeak * cmplx.Abs(l.Transfer(1e3, nil))
		if c.peakToPeak == 20 && math.Abs(drop/200e-3-1) > 0.02 {
			t.Errorf("%g V peak-to-peak over %g Ω leaves %g V peak-to-peak, want about 200 mV", c.peakToPeak, c.rung, drop)
		}
		if rms := drop / (2 * math.Sqrt2); math.Abs(rms/c.rms-1) > 0.02 {
			t.Errorf("%g V peak-to-peak over %g Ω leaves %g V rms, want about %g", c.peakToPeak, c.rung, rms, c.rms)
		}
	}
}

// n sections of 1 Ω in series and 1 Ω across leave 1/F(2n+1) at the end, and a resistance of F(2n+1)/F(2n) at the input, F the Fibonacci numbers
// (textbooks of network theory, from memory; n = 1 gives 1/2 and 2 Ω by sight).
func TestLongLadder(t *testing.T) {
	for _, n := range []int{1, 2, 30, 300} {
		l := Ladder{Tap: 2*n - 1, Input: openInput}
		for range n {
			l.Arms = append(l.Arms, Arm{Place: Series, R: 1}, Arm{Place: Shunt, R: 1})
		}
		a, b := big.NewInt(0), big.NewInt(1) // F(0), F(1)
		for range 2 * n {
			a.Add(a, b)
			a, b = b, a
		}
		f2n, _ := a.Float64()
		f2n1, _ := b.Float64()
		r := l.Solve(0, nil)
		near(t, fmt.Sprintf("H of %d sections", n), r.H, complex(1/f2n1, 0), 1e-12)
		near(t, fmt.Sprintf("input of %d sections", n), r.InputImpedance, complex(f2n1/f2n, 0), 1e-12)
	}
}
