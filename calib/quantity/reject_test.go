package quantity

import (
	"strings"
	"testing"
)

func TestParseRejects(t *testing.T) {
	for _, c := range []struct {
		text string
		kind Kind
		want string // part of the message
	}{
		{"", Voltage, `nothing is written; a voltage is written like "70.7 µV"`},
		{" \u00a0 ", Voltage, "nothing is written"},
		{"V", Voltage, "does not begin with a number"},
		{"NaN V", Voltage, "does not begin with a number"},
		{"Inf V", Voltage, "does not begin with a number"},
		{"-inf V", Voltage, "does not begin with a number"},
		{"--1 V", Voltage, "does not begin with a number"},
		{". V", Voltage, "does not begin with a number"},
		{"e5 V", Voltage, "does not begin with a number"},
		{"about 5 V", Voltage, "does not begin with a number"},
		{"(15) V", Voltage, "does not begin with a number"},

		{"10", Resistance, `"10" has no unit; a resistance is written like "10 kΩ"`},
		{"1.00021(15)", Resistance, "has no unit"},
		{"3 kg", Resistance, `"3 kg" has "kg" for a unit; a resistance is written like "10 kΩ"`},
		{"3 V", Resistance, `has "V" for a unit`},
		{"3 Ω", Voltage, `has "Ω" for a unit`},
		{"10 xΩ", Resistance, `has "xΩ" for a unit`},
		{"10 kkΩ", Resistance, `has "kkΩ" for a unit`},
		{"10 k", Resistance, `has "k" for a unit`},
		{"5 K", Temperature, `has "K" for a unit; a temperature is written like "23 °C"`},
		{"5 m°C", Temperature, `has "m°C" for a unit`},
		{"5 mdeg", Angle, `has "mdeg" for a unit`},
		{"5 m%", Ratio, `has "m%" for a unit`},
		{"5 kppm", Ratio, `has "kppm" for a unit`},
		{"5 kmin", Time, `has "kmin" for a unit`},
		{"1 dB", Ratio, `has "dB" for a unit`},

		{"10 V V", Voltage, `has "V V" for a unit`},
		{"10 V Ω", Voltage, `has "V Ω" for a unit`},
		{"10 V 5", Voltage, `has "V 5" for a unit`},
		{"10 V\n5 V", Voltage, `has "V\n5 V" for a unit`},
		{"10 V or so", Voltage, `has "V or so" for a unit`},
		{"1 000 V", Voltage, `has "000 V" for a unit`},
		{"1_000 V", Voltage, `has "_000 V" for a unit`},
		{"1.2.3 V", Voltage, `has ".3 V" for a unit`},
		{"0x10 V", Voltage, `has "x10 V" for a unit`},
		{"1,5 V", Voltage, "has a comma where a decimal point would be right"},
		{"10,000 V", Voltage, "has a comma"},

		{"10 KΩ", Resistance, `has "KΩ" where "kΩ" would be right`},
		{"10 KOHM", Resistance, `has "KOHM" where "kohm" would be right`},
		{"10 k Ω", Resistance, `has "k Ω" where "kΩ" would be right`},
		{"10 gΩ", Resistance, `where "GΩ" would be right`},
		{"10 MHZ", Frequency, `has "MHZ" where "MHz" would be right`}, // not mHz
		{"10 mhz", Frequency, `has "mhz" where "mHz" would be right`}, // not MHz
		{"10 khz", Frequency, `where "kHz" would be right`},
		{"20 VPP", Voltage, `where "Vpp" would be right`},
		{"20 V pp", Voltage, `where "Vpp" would be right`},
		{"20 mV RMS", Voltage, `where "mVrms" would be right`},
		{"20 v", Voltage, `where "V" would be right`},
		{"20 PF", Capacitance, `where "pF" would be right`},
		{"20 PPM", Ratio, `where "ppm" would be right`},

		{"1.2() V", Voltage, "has no uncertainty that can be read"},
		{"1.2(a) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(-3) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(3.) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(1e3) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(3 V", Voltage, "has no uncertainty that can be read"},
		{"1.2 (3) V", Voltage, "has no uncertainty that can be read"},
		{"1.2e3(4) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(3)(4) V", Voltage, "has no uncertainty that can be read"},
		{"1.2(3", Ratio, "has no uncertainty that can be read"},
		{"1.2 ± 0.3 V", Voltage, `has "± 0.3 V" for a unit`},

		{"1e999 V", Voltage, `"1e999 V" is too large`},
		{"1e308 kV", Voltage, "is too large"},
		{"1e99999999999999999999 V", Voltage, "is too large"},
		{"1(9)e308 V", Voltage, "is too large"},
		{"1e-999 V", Voltage, "is too small"}, // and not 0, the source off
		{"1e-99999999999999999999 V", Voltage, "is too small"},
		{"-1e-320 pV", Voltage, "is too small"},
	} {
		got, err := Parse(c.text, c.kind)
		if err == nil {
			t.Errorf("%q was taken for %+v", c.text, got)
		} else if !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: the message is\n%v\nwithout\n%s", c.text, err, c.want)
		}
	}
}
