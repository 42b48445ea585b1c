package quantity

import (
	"strings"
	"testing"
)

func TestParseSpread(t *testing.T) {
	for _, c := range []struct {
		text string
		kind Kind
		want Spread
	}{
		{"0.1 % + 10 mΩ", Resistance, Spread{0.001, 0.01}}, // the plan's format, "Quantities"
		{"10 mΩ + 0.1 %", Resistance, Spread{0.001, 0.01}},
		{"0.1%+10mΩ", Resistance, Spread{0.001, 0.01}},
		{"0.1 %", Resistance, Spread{0.001, 0}},
		{"25 ppm", Resistance, Spread{25e-6, 0}},
		{"80 Ω", Resistance, Spread{0, 80}},
		{"0 Ω", Resistance, Spread{}},
		{"1e+3 Ω", Resistance, Spread{0, 1000}},
		{"1e-3 % + 1E+1 Ω", Resistance, Spread{1e-5, 10}},
		{"0.02 % + 1 mV", Voltage, Spread{0.0002, 0.001}},
		{"25 ppm", Ratio, Spread{25e-6, 0}},
		{"0.01", Ratio, Spread{0.01, 0}},
		{"0.5 °C", Temperature, Spread{0, 0.5}},
		{"0.5 K", Temperature, Spread{0, 0.5}},
		{"500 mK", Temperature, Spread{0, 0.5}},
		{"5 ppm/K", TemperatureCoefficient, Spread{0, 5e-6}},
		{"20 %", TemperatureCoefficient, Spread{0.2, 0}},
	} {
		got, err := ParseSpread(c.text, c.kind)
		if err != nil || !near(got.Relative, c.want.Relative) || !near(got.Absolute, c.want.Absolute) {
			t.Errorf("%q of %v: %+v, %v, want %+v", c.text, c.kind, got, err, c.want)
		}
	}
}

func TestParseSpreadRejects(t *testing.T) {
	for _, c := range []struct {
		text string
		kind Kind
		want string // part of the message
	}{
		{"", Resistance, `is no uncertainty; one is written like "0.1 %", "10 kΩ" or both`},
		{"+ 0.1 %", Resistance, "is no uncertainty"},
		{"0.1 % +", Resistance, "nothing is written"},
		{"0.1 % + 1 Ω + 1 Ω", Resistance, "is no uncertainty"},
		{"0.1", Resistance, `"0.1" has no unit`},
		{"0.1 % + 3", Resistance, `has no unit`},
		{"0.1 % + 3 V", Resistance, `has "V" for a unit`},
		{"0.1 % + 5 ppm", Resistance, "two parts of one kind"},
		{"1 Ω + 1 Ω", Resistance, "two parts of one kind"},
		{"-0.1 %", Resistance, "is negative"},
		{"0.1 % + -1 Ω", Resistance, "is negative"},
		{"1.0(2) Ω", Resistance, "has no uncertainty of its own"},
		{"1.0(2) %", Resistance, "has no uncertainty of its own"},
		{"0.5 kg", Temperature, `a temperature is written like "0.5 °C"`},
	} {
		got, err := ParseSpread(c.text, c.kind)
		if err == nil {
			t.Errorf("%q was taken for %+v", c.text, got)
		} else if !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: the message is\n%v\nwithout\n%s", c.text, err, c.want)
		}
	}
}

// The parts add, and a share is of the value's size: 0.1 % of 10 kΩ is 10 Ω.
func TestSpreadOf(t *testing.T) {
	s := Spread{Relative: 0.001, Absolute: 0.01}
	for _, x := range []float64{10e3, -10e3} {
		if got := s.Of(x); !near(got, 10.01) {
			t.Errorf("of %g: %g, want 10.01", x, got)
		}
	}
}
