package quantity

import "testing"

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
		{"0.1\u00a0% + 10\u202fmΩ", Resistance, Spread{0.001, 0.01}},
		{"0 Ω", Resistance, Spread{}},
		{"1e-3 Ω", Resistance, Spread{0, 0.001}},
		{"1e+3 Ω", Resistance, Spread{0, 1000}},
		{"1e-3 % + 1E+1 Ω", Resistance, Spread{1e-5, 10}},
		{"0.02 % + 1 mV", Voltage, Spread{0.0002, 0.001}},
		{"25 ppm", Ratio, Spread{25e-6, 0}},
		{"0.001", Ratio, Spread{0.001, 0}},
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
	const (
		none  = `; one is written like "0.1 %", "10 kΩ" or both with a + between`
		asked = `; a resistance is written like "10 kΩ", its uncertainty also like "0.1 %"`
	)
	for _, c := range []struct {
		text string
		kind Kind
		want string
	}{
		{"", Resistance, `"" is no uncertainty` + none},
		{"+5 %", Resistance, `"+5 %" is no uncertainty` + none},
		{"0.1 % +", Resistance, `"0.1 % +" is no uncertainty` + none},
		{"0.1 % + 1 Ω + 1 Ω", Resistance, `"0.1 % + 1 Ω + 1 Ω" is no uncertainty` + none},
		{"0.001", Resistance, `"0.001" has no unit` + asked}, // 0.1 % or 1 mΩ?
		{"0.1 % + 3", Resistance, `"3" has no unit` + asked},
		{"0.1 % + 3 V", Resistance, `"3 V" has "V" for a unit` + asked},
		{"3 V + 0.1 %", Resistance, `"3 V" has "V" for a unit` + asked},
		{"10 KΩ", Resistance, `"10 KΩ" has "KΩ" where "kΩ" would be right` + asked},
		{"±5 %", Resistance, `"±5 %" does not begin with a number` + asked},
		{"0.1 % + 5 ppm", Resistance, `"0.1 % + 5 ppm" has two parts of one kind; a share and a fixed part add`},
		{"1 Ω + 1 Ω", Resistance, `"1 Ω + 1 Ω" has two parts of one kind; a share and a fixed part add`},
		{"-0.1 %", Resistance, `"-0.1 %" is negative; an uncertainty is not`},
		{"0.1 % + -1 Ω", Resistance, `"0.1 % + -1 Ω" is negative; an uncertainty is not`},
		{"1.0(2) Ω", Resistance, `"1.0(2) Ω": an uncertainty has no uncertainty of its own`},
		{"1.0(2) %", Resistance, `"1.0(2) %": an uncertainty has no uncertainty of its own`},
		{"0.001 + 5 ppm", Ratio, `"0.001 + 5 ppm" has two parts of one kind; a share and a fixed part add`},
		{"3 V", Ratio, `"3 V" has "V" for a unit; a share is written like "0.1 %"`},
		{"0.5 kg", Temperature, `"0.5 kg" has "kg" for a unit; a temperature is written like "0.5 °C", its uncertainty also like "0.1 %"`},
	} {
		if got, err := ParseSpread(c.text, c.kind); err == nil || err.Error() != c.want {
			t.Errorf("%q: %+v and the message\n%v\nwant\n%s", c.text, got, err, c.want)
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
