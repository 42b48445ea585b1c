package quantity

import (
	"strconv"
	"testing"
)

// asked is how the message says what would be accepted.
var asked = map[Kind]string{
	Voltage:     `a voltage is written like "70.7 µV"`,
	Resistance:  `a resistance is written like "10 kΩ"`,
	Capacitance: `a capacitance is written like "25 pF"`,
	Frequency:   `a frequency is written like "137 Hz"`,
	Time:        `a time is written like "300 ms"`,
	Angle:       `an angle is written like "90 deg"`,
	Temperature: `a temperature is written like "23 °C"`,
	Ratio:       `a share is written like "0.1 %"`,
}

func TestParseRejects(t *testing.T) {
	const (
		noNumber      = "does not begin with a number"
		noUnit        = "has no unit"
		comma         = "has a comma where a decimal point would be right"
		noUncertainty = "has no uncertainty that can be read; 1.00021(15) has one, behind the number and before its exponent"
	)
	for _, c := range []struct {
		text string
		kind Kind
		want string // of the message, between the text and what would be accepted
	}{
		{"V", Voltage, noNumber},
		{"NaN V", Voltage, noNumber},
		{"Inf V", Voltage, noNumber},
		{"-inf V", Voltage, noNumber},
		{"--1 V", Voltage, noNumber},
		{". V", Voltage, noNumber},
		{"e5 V", Voltage, noNumber},
		{"about 5 V", Voltage, noNumber},
		{"(15) V", Voltage, noNumber},

		{"10", Resistance, noUnit},
		{"1.00021(15)", Resistance, noUnit},
		{"3 kg", Resistance, `has "kg" for a unit`},
		{"3 V", Resistance, `has "V" for a unit`},
		{"3 Ω", Voltage, `has "Ω" for a unit`},
		{"10 xΩ", Resistance, `has "xΩ" for a unit`},
		{"10 kkΩ", Resistance, `has "kkΩ" for a unit`},
		{"10 k", Resistance, `has "k" for a unit`},
		{"5 K", Temperature, `has "K" for a unit`},
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
		{"1,5 V", Voltage, comma},
		{"10,000 V", Voltage, comma},

		{"10 KΩ", Resistance, `has "KΩ" where "kΩ" would be right`},
		{"10 KOHM", Resistance, `has "KOHM" where "kohm" would be right`},
		{"10 k Ω", Resistance, `has "k Ω" where "kΩ" would be right`},
		{"10 gΩ", Resistance, `has "gΩ" where "GΩ" would be right`},
		{"10 MHZ", Frequency, `has "MHZ" where "MHz" would be right`}, // not mHz
		{"10 mhz", Frequency, `has "mhz" where "mHz" would be right`}, // not MHz
		{"10 khz", Frequency, `has "khz" where "kHz" would be right`},
		{"20 VPP", Voltage, `has "VPP" where "Vpp" would be right`},
		{"20 V pp", Voltage, `has "V pp" where "Vpp" would be right`},
		{"20 mV RMS", Voltage, `has "mV RMS" where "mVrms" would be right`},
		{"20 v", Voltage, `has "v" where "V" would be right`},
		{"20 PF", Capacitance, `has "PF" where "pF" would be right`},
		{"20 PPM", Ratio, `has "PPM" where "ppm" would be right`},

		{"1.2() V", Voltage, noUncertainty},
		{"1.2(a) V", Voltage, noUncertainty},
		{"1.2(-3) V", Voltage, noUncertainty},
		{"1.2(3.) V", Voltage, noUncertainty},
		{"1.2(1e3) V", Voltage, noUncertainty},
		{"1.2(3 V", Voltage, noUncertainty},
		{"1.2 (3) V", Voltage, noUncertainty},
		{"1.2e3(4) V", Voltage, noUncertainty},
		{"1.2(3)(4) V", Voltage, noUncertainty},
		{"1.2(3", Ratio, noUncertainty},
		{"1.2 ± 0.3 V", Voltage, `has "± 0.3 V" for a unit`},
	} {
		want := strconv.Quote(c.text) + " " + c.want + "; " + asked[c.kind]
		if got, err := Parse(c.text, c.kind); err == nil || err.Error() != want {
			t.Errorf("%q: %+v and the message\n%v\nwant\n%s", c.text, got, err, want)
		}
	}
}

// Nothing but spaces is nothing.
func TestParseRejectsNothing(t *testing.T) {
	const want = `nothing is written; a voltage is written like "70.7 µV"`
	for _, text := range []string{"", "  ", " \u00a0\t\u202f\n"} {
		if got, err := Parse(text, Voltage); err == nil || err.Error() != want {
			t.Errorf("%q: %+v, %v, want %s", text, got, err, want)
		}
	}
}

// Beyond what a float64 holds: the largest is 1.8e308, the smallest 4.9e-324 (binary64 of IEEE 754).
func TestParseRejectsWhatIsBeyondReach(t *testing.T) {
	for text, want := range map[string]string{
		"1e999 V":                   `"1e999 V" is too large`,
		"-1e999 V":                  `"-1e999 V" is too large`,
		"1e308 kV":                  `"1e308 kV" is too large`,
		"1(9)e308 V":                `"1(9)e308 V" is too large`,
		"1e99999999999999999999 V":  `"1e99999999999999999999 V" is too large`,
		"1e-999 V":                  `"1e-999 V" is too small`, // and not 0, the source off
		"0.1(1)e-999 V":             `"0.1(1)e-999 V" is too small`,
		"0.0(1)e-999 V":             `"0.0(1)e-999 V" is too small`,
		"-1e-320 pV":                `"-1e-320 pV" is too small`,
		"1e-99999999999999999999 V": `"1e-99999999999999999999 V" is too small`,
	} {
		if got, err := Parse(text, Voltage); err == nil || err.Error() != want {
			t.Errorf("%q: %+v, %v, want %s", text, got, err, want)
		}
	}
}
