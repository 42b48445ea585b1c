package quantity

import (
	"math"
	"testing"
)

func TestPlain(t *testing.T) {
	for _, c := range []struct {
		x    float64
		unit string
		want string
	}{
		{137, "Hz", "137 Hz"},
		{1700, "Hz", "1.7 kHz"},
		{0.1, "V", "100 mV"},
		{-0.1, "V", "-100 mV"},
		{0.09999999999999999, "V", "100 mV"}, // the noise of a float64 goes
		{0, "V", "0 V"},
		{math.Copysign(0, -1), "V", "0 V"},
		{100, "V", "100 V"}, // its zeros are not noise
		{1000, "V", "1 kV"},
		{47e15, "Ω", "47000 TΩ"},
		{1e6, "1", "1000000"},
		{1e-6, "deg", "0.000001 deg"},
		{math.Inf(-1), "V", "-Inf V"},
		{0.3e-6, "V", "300 nV"},         // no 300.000000001
		{1.0 / 3, "V", "333.333 mV"},    // six digits at most
		{999999.6, "Hz", "1 MHz"},       // which carry into the next prefix
		{123456.7, "Hz", "123.457 kHz"}, //
		{23.5, "°C", "23.5 °C"},
		{2.5, "1", "2.5"},
	} {
		if got := Plain(c.x, c.unit); got != c.want {
			t.Errorf("%g %s: %q, want %q", c.x, c.unit, got, c.want)
		}
	}
}
