package quantity

import (
	"math"
	"testing"
)

func TestFormat(t *testing.T) {
	for _, c := range []struct {
		x      float64
		digits int
		unit   string
		want   string
	}{
		{0.070711, 4, "V", "70.71 mV"},
		{-0.070711, 4, "V", "-70.71 mV"},
		{0, 4, "V", "0 V"},
		{math.Copysign(0, -1), 4, "V", "0 V"},
		{0, 4, "1", "0"},
		{1.00021, 4, "1", "1.000"},
		{0.99996, 4, "V", "1.000 V"},     // 999.96 mV carries into the next prefix
		{999.96e-9, 4, "V", "1.000 µV"},  // likewise
		{999.94e-9, 4, "V", "999.9 nV"},  // and this not
		{9.996, 3, "V", "10.0 V"},        // carry into another digit
		{123456, 2, "V", "120 kV"},       // fewer digits than places before the point
		{123456, 2, "1", "120000"},       // likewise
		{1e6, 1, "Ω", "1 MΩ"},            //
		{4.7e-15, 2, "F", "4.7 fF"},      //
		{4.7e-17, 2, "F", "0.047 fF"},    // below the smallest prefix
		{4.7e16, 2, "Ω", "47000 TΩ"},     // above the largest
		{6e-9, 1, "V/√Hz", "6 nV/√Hz"},   //
		{23.04, 3, "°C", "23.0 °C"},      // takes no prefix,
		{0.0015, 2, "deg", "0.0015 deg"}, // nor this,
		{0.0015, 2, "°C", "0.0015 °C"},   //
		{25e-6, 2, "1/K", "0.000025 1/K"},
		{0.25e-6, 2, "m²", "0.25 mm²"}, // the prefix is squared with the unit: SI brochure, 9th edition, 3
		{math.Inf(1), 4, "Ω", "+Inf Ω"},
		{math.NaN(), 4, "1", "NaN"},
	} {
		if got := Format(c.x, c.digits, c.unit); got != c.want {
			t.Errorf("%g %s to %d: %q, want %q", c.x, c.unit, c.digits, got, c.want)
		}
	}
}

func TestConciseAndPlusMinus(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		x, u               float64
		unit               string
		concise, plusMinus string
	}{
		// GUM 7.2.2: 100.021 47(35) g and, with U = 0.79 mg, (100.021 47 ± 0.000 79) g. In volts here, and
		// without the spaces between groups of digits.
		{100.02147, 0.00035, "V", "100.02147(35) V", "(100.02147 ± 0.00035) V"},
		{100.02147, 0.00079, "V", "100.02147(79) V", "(100.02147 ± 0.00079) V"},
		{1.00021e6, 150, "Ω", "1.00021(15) MΩ", "(1.00021 ± 0.00015) MΩ"},
		{119.8e-9, 1.5e-9, "V", "119.8(15) nV", "(119.8 ± 1.5) nV"},
		{-119.8e-9, 1.5e-9, "V", "-119.8(15) nV", "(-119.8 ± 1.5) nV"},
		{119.8e-9, 15e-9, "V", "120(15) nV", "(120 ± 15) nV"},
		{12345, 1234, "1", "12300(1200)", "(12300 ± 1200)"},
		{10.476, 0.27, "V", "10.48(27) V", "(10.48 ± 0.27) V"},

		// The uncertainty's own rounding carries: it has two digits after that.
		{9.996, 0.0996, "V", "10.00(10) V", "(10.00 ± 0.10) V"},
		{5, 0.00996, "V", "5.000(10) V", "(5.000 ± 0.010) V"},
		{5, 0.996, "V", "5.0(10) V", "(5.0 ± 1.0) V"},
		{5, 9.96, "V", "5(10) V", "(5 ± 10) V"},
		// The value's rounding carries into the next prefix.
		{999.9996, 0.12, "V", "1.00000(12) kV", "(1.00000 ± 0.00012) kV"},
		{-999.9996, 0.12, "V", "-1.00000(12) kV", "(-1.00000 ± 0.00012) kV"},
		{0, 999.6, "V", "0.0(10) kV", "(0.0 ± 1.0) kV"},

		// The uncertainty is larger than the value, and sets the prefix.
		{1e-9, 5e-3, "V", "0.0(50) mV", "(0.0 ± 5.0) mV"},
		{-1e-9, 5e-3, "V", "0.0(50) mV", "(0.0 ± 5.0) mV"}, // no -0.0
		{-3, 999.6, "1", "0(1000)", "(0 ± 1000)"},
		{0.31, 12, "Ω", "0(12) Ω", "(0 ± 12) Ω"},
		{0, 0.02, "Ω", "0(20) mΩ", "(0 ± 20) mΩ"},

		{1.5, 0, "V", "1.50000 V", "1.50000 V"}, // none
		{0, 0, "V", "0 V", "0 V"},
		{1.5, inf, "V", "1.50000 V ± Inf", "1.50000 V ± Inf"}, // not known at all, which is not the same as none
		{1.5, math.NaN(), "V", "1.50000 V ± NaN", "1.50000 V ± NaN"},
		{math.NaN(), 1, "V", "NaN V", "NaN V"},
	} {
		if got := Concise(c.x, c.u, c.unit); got != c.concise {
			t.Errorf("%g, u %g %s: %q, want %q", c.x, c.u, c.unit, got, c.concise)
		}
		if got := PlusMinus(c.x, c.u, c.unit); got != c.plusMinus {
			t.Errorf("%g, U %g %s: %q, want %q", c.x, c.u, c.unit, got, c.plusMinus)
		}
	}
}

func TestNegativeUncertaintyPanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("a negative uncertainty was written")
		}
	}()
	PlusMinus(1, -0.1, "V")
}

func TestShares(t *testing.T) {
	for _, c := range []struct {
		x      float64
		digits int
		want   string
	}{
		{0.0028, 2, "0.28 %"}, {35e-6, 2, "35 ppm"}, {0, 2, "0 %"}, {-0.0028, 2, "-0.28 %"},
		{0.0996, 3, "9.96 %"}, {0.0996, 2, "10 %"}, {0.0005, 2, "0.050 %"}, {0.00049, 2, "490 ppm"},
		{1.5, 2, "150 %"}, {12.34, 2, "1200 %"}, {-35e-6, 1, "-40 ppm"}, {math.NaN(), 2, "NaN %"},
	} {
		if got := Share(c.x, c.digits); got != c.want {
			t.Errorf("%g to %d: %q, want %q", c.x, c.digits, got, c.want)
		}
	}
	for _, c := range []struct {
		x, u float64
		want string
	}{
		{0.00276, 0.00076, "(0.276 ± 0.076) %"}, {12.3e-6, 4.5e-6, "(12.3 ± 4.5) ppm"},
		{-12.3e-6, 4.5e-6, "(-12.3 ± 4.5) ppm"}, {1e-6, 0.002, "(0.00 ± 0.20) %"},
		{0, 20e-6, "(0 ± 20) ppm"}, {35e-6, 0, "35.0000 ppm"}, {0, 0, "0 %"},
		{35e-6, math.Inf(1), "35.0000 ppm ± Inf"},
	} {
		if got := SharePlusMinus(c.x, c.u); got != c.want {
			t.Errorf("%g, U %g: %q, want %q", c.x, c.u, got, c.want)
		}
	}
}

func TestPrefix(t *testing.T) {
	for _, c := range []struct {
		x     float64
		unit  string
		scale float64
		want  string
	}{
		{7e-5, "V", 1e-6, "µV"}, {-7e-5, "V", 1e-6, "µV"}, {1e-3, "V", 1e-3, "mV"}, {1000, "V", 1e3, "kV"},
		{999, "V", 1, "V"}, {0, "V", 1, "V"}, {math.Inf(1), "V", 1, "V"}, {1e-20, "V", 1e-15, "fV"},
		{1e20, "V", 1e12, "TV"}, {1e-4, "°C", 1, "°C"}, {1e-4, "1", 1, ""}, {1e-4, "%", 1, "%"},
		{1e-4, "ppm", 1, "ppm"}, {1e-4, "deg", 1, "deg"}, {1e-7, "m²", 1e-6, "mm²"},
	} {
		if scale, got := Prefix(c.x, c.unit); scale != c.scale || got != c.want {
			t.Errorf("%g %s: %g, %q, want %g, %q", c.x, c.unit, scale, got, c.scale, c.want)
		}
	}
}
