package quantity

import (
	"math"
	"strings"
	"testing"
)

// near tells whether two numbers agree but for the last bits.
func near(a, b float64) bool { return math.Abs(a-b) <= 4e-16*max(math.Abs(a), math.Abs(b)) }

func TestParse(t *testing.T) {
	const (
		micro, mu   = "\u00b5", "\u03bc"
		omega, sign = "\u03a9", "\u2126"
	)
	for _, c := range []struct {
		text string
		kind Kind
		want Value
	}{
		// The plan's format, "Quantities", row by row. Uncertainties are Spreads, tested with those;
		// dB/oct is a number of poles to the plan, and no quantity.
		{"1.00021(15) M" + omega, Resistance, Value{X: 1.00021e6, U: 150, HasU: true}},
		{"10 kohm", Resistance, Value{X: 10e3}},
		{"10 kOhm", Resistance, Value{X: 10e3}},
		{"10 k" + omega, Resistance, Value{X: 10e3}},
		{"10 k" + sign, Resistance, Value{X: 10e3}},
		{"70.7 " + micro + "V", Voltage, Value{X: 70.7e-6}},
		{"70.7 " + mu + "V", Voltage, Value{X: 70.7e-6}},
		{"70.7 uV", Voltage, Value{X: 70.7e-6}},
		{"20 Vpp", Voltage, Value{X: 20, Convention: PeakToPeak}},
		{"5 Vpk", Voltage, Value{X: 5, Convention: Peak}},
		{"7.0662 Vrms", Voltage, Value{X: 7.0662, Convention: RMS}},
		{"0.1 %", Ratio, Value{X: 0.001}},
		{"25 ppm", Ratio, Value{X: 25e-6}},
		{"25 ppm/K", TemperatureCoefficient, Value{X: 25e-6}},
		{"6 nV/√Hz", NoiseVoltage, Value{X: 6e-9}},
		{"6 nV/rtHz", NoiseVoltage, Value{X: 6e-9}},
		{"90 deg", Angle, Value{X: math.Pi / 2}},
		{"90°", Angle, Value{X: math.Pi / 2}},
		{"23 °C", Temperature, Value{X: 23}},

		// GUM 7.2.2 prints a mass of 100.021 47 g with u = 0.35 mg. There is no kind for a mass: the same
		// figures in volts, in the second and the third form.
		{"100.02147(35) V", Voltage, Value{X: 100.02147, U: 0.00035, HasU: true}},
		{"100.02147(0.00035) V", Voltage, Value{X: 100.02147, U: 0.00035, HasU: true}},

		// Numbers.
		{"-3.5 mV", Voltage, Value{X: -3.5e-3}},
		{"\u22123.5 mV", Voltage, Value{X: -3.5e-3}}, // the minus of typesetting
		{"+3.5 mV", Voltage, Value{X: 3.5e-3}},
		{".5 V", Voltage, Value{X: 0.5}},
		{"5. V", Voltage, Value{X: 5}},
		{"0 V", Voltage, Value{}},
		{"0." + strings.Repeat("0", 400) + "1e401 V", Voltage, Value{X: 1}},
		{"1" + strings.Repeat("0", 400) + "e-400 V", Voltage, Value{X: 1}},
		{"0." + strings.Repeat("3", 400) + "(0.1) V", Voltage, Value{X: 1.0 / 3, U: 0.1, HasU: true}},
		{"1e-6 V", Voltage, Value{X: 1e-6}},
		{"1E6 V", Voltage, Value{X: 1e6}},
		{"1e+6 V", Voltage, Value{X: 1e6}},
		{"1.20(3)e-6 V", Voltage, Value{X: 1.2e-6, U: 3e-8, HasU: true}},
		{"1.20(0.03)e-6 V", Voltage, Value{X: 1.2e-6, U: 3e-8, HasU: true}},
		{"12(3) mΩ", Resistance, Value{X: 0.012, U: 0.003, HasU: true}},
		{"12300(1200) V", Voltage, Value{X: 12300, U: 1200, HasU: true}},
		{"119.8(15) nV", Voltage, Value{X: 119.8e-9, U: 1.5e-9, HasU: true}},
		{"119.8(1.5) nV", Voltage, Value{X: 119.8e-9, U: 1.5e-9, HasU: true}},
		{"0.0(50) mV", Voltage, Value{U: 5e-3, HasU: true}},
		{"5(0) V", Voltage, Value{X: 5, HasU: true}},
		{"0.500(2) %", Ratio, Value{X: 0.005, U: 2e-5, HasU: true}},

		// Spaces: none, several, no-break, narrow no-break, thin, around.
		{"10V", Voltage, Value{X: 10}},
		{"  10 \t V  ", Voltage, Value{X: 10}},
		{"10\u00a0V", Voltage, Value{X: 10}},
		{"10\u202fV", Voltage, Value{X: 10}},
		{"10\u2009V", Voltage, Value{X: 10}},
		{"1%", Ratio, Value{X: 0.01}},

		// Prefixes: SI brochure, 9th edition, Table 7.
		{"1 fF", Capacitance, Value{X: 1e-15}},
		{"1 pF", Capacitance, Value{X: 1e-12}},
		{"1 nF", Capacitance, Value{X: 1e-9}},
		{"1 mF", Capacitance, Value{X: 1e-3}},
		{"1 mHz", Frequency, Value{X: 1e-3}},
		{"1 MHz", Frequency, Value{X: 1e6}},
		{"1 GΩ", Resistance, Value{X: 1e9}},
		{"1 TΩ", Resistance, Value{X: 1e12}},
		{"1 mVpp", Voltage, Value{X: 1e-3, Convention: PeakToPeak}},

		// The remaining units.
		{"1 Vp", Voltage, Value{X: 1, Convention: Peak}},
		{"10 ohms", Resistance, Value{X: 10}},
		{"1 µH", Inductance, Value{X: 1e-6}},
		{"2 min", Time, Value{X: 120}},
		{"2 h", Time, Value{X: 7200}},
		{"300 ms", Time, Value{X: 0.3}},
		{"2 cm", Length, Value{X: 0.02}},
		{"2 mm", Length, Value{X: 0.002}},
		{"2 m", Length, Value{X: 2}},
		{"0.25 mm²", Area, Value{X: 0.25e-6}},
		{"0.25 mm2", Area, Value{X: 0.25e-6}},
		{"0.25 mm^2", Area, Value{X: 0.25e-6}},
		{"1 m²", Area, Value{X: 1}},
		{"1 µm²", Area, Value{X: 1e-12}},
		{"2 mrad", Angle, Value{X: 2e-3}},
		{"-90 deg", Angle, Value{X: -math.Pi / 2}},
		{"23 degC", Temperature, Value{X: 23}},
		{"23 ℃", Temperature, Value{X: 23}},
		{"250 mW", Power, Value{X: 0.25}},
		{"6 nV/sqrt(Hz)", NoiseVoltage, Value{X: 6e-9}},
		{"10 fA/√Hz", NoiseCurrent, Value{X: 1e-14}},
		{"10 fA/rtHz", NoiseCurrent, Value{X: 1e-14}},
		{"100 pF/m", CapacitancePerLength, Value{X: 1e-10}},
		{"0.39 %/K", TemperatureCoefficient, Value{X: 0.0039}},
		{"25 ppm/°C", TemperatureCoefficient, Value{X: 25e-6}},
		{"0.00393 /K", TemperatureCoefficient, Value{X: 0.00393}},
		{"0.00393/K", TemperatureCoefficient, Value{X: 0.00393}},
		{"2 ‰", Ratio, Value{X: 0.002}},
		{"0.25", Ratio, Value{X: 0.25}},
	} {
		got, err := Parse(c.text, c.kind)
		if err != nil {
			t.Error(err)
			continue
		}
		if !near(got.X, c.want.X) || !near(got.U, c.want.U) || got.HasU != c.want.HasU || got.Convention != c.want.Convention {
			t.Errorf("%q: %+v, want %+v", c.text, got, c.want)
		}
	}
}

// A decimal number with a prefix is the float64 that is nearest to it, as if it were written out.
func TestPrefixCostsNoDigit(t *testing.T) {
	for text, want := range map[string]float64{"0.3 pF": 0.3e-12, "70.7 µF": 70.7e-6, "1.1 mF": 1.1e-3, "25.7 fF": 25.7e-15} {
		if got, err := Parse(text, Capacitance); err != nil || got.X != want {
			t.Errorf("%s: %v, %v, want exactly %v", text, got.X, err, want)
		}
	}
}

func TestEveryKindTakesItsOwnExampleAndUnit(t *testing.T) {
	for k := Voltage; k <= Ratio; k++ {
		if _, err := Parse(k.Example(), k); err != nil {
			t.Errorf("%v: %v", k, err)
		}
		unit := k.Unit()
		if unit == "1" {
			unit = ""
		}
		if v, err := Parse("2 "+unit, k); err != nil || v.X != 2 {
			t.Errorf("%v: 2 %s is %v, %v", k, unit, v.X, err)
		}
	}
}
