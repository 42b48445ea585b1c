// Package quantity reads and writes physical quantities as people put them down:
// a number, optionally its standard uncertainty in parentheses (GUM 7.2.2), an SI
// prefix and a unit (SI brochure, 9th edition). Inside, a quantity is a float64 in
// its base unit, of either sign; text is for the edges only. What cannot be read is
// an error that states what was found and how it would be right.
package quantity

import "math"

// Kind says what a quantity measures, and so which units it may be written in.
type Kind int

// The kinds, with their base units.
const (
	Voltage                Kind = iota // V, which may say its convention: Vrms, Vpk, Vpp
	Resistance                         // Ω
	Capacitance                        // F
	Inductance                         // H
	Frequency                          // Hz
	Time                               // s
	Length                             // m
	Area                               // m²
	Angle                              // rad; written in degrees or radians
	Temperature                        // °C; not in K, which is for differences
	Power                              // W
	NoiseVoltage                       // V/√Hz
	NoiseCurrent                       // A/√Hz
	CapacitancePerLength               // F/m
	TemperatureCoefficient             // 1/K
	Ratio                              // 1; written in %, ‰, ppm or as a bare number

	// Of uncertainties only.
	share                 // a Ratio that says %, ‰ or ppm
	temperatureDifference // K
)

// unit is one way to write a kind's unit.
type unit struct {
	text       string
	scale      float64 // base units in one of it
	prefixed   bool    // takes SI prefixes
	power      float64 // that the prefix is raised to: 2 for areas
	convention Convention
}

type kind struct {
	name, unit, example string
	units               []unit
}

func si(text string) unit { return unit{text: text, scale: 1, prefixed: true, power: 1} }

func amplitude(text string, c Convention) unit {
	u := si(text)
	u.convention = c
	return u
}

func plain(text string, scale float64) unit { return unit{text: text, scale: scale, power: 1} }

var shares = []unit{plain("%", 0.01), plain("‰", 0.001), plain("ppm", 1e-6)}

var kinds = [...]kind{
	Voltage: {"a voltage", "V", "70.7 µV", []unit{si("V"),
		amplitude("Vrms", RMS), amplitude("Vpk", Peak), amplitude("Vp", Peak), amplitude("Vpp", PeakToPeak)}},
	Resistance:  {"a resistance", "Ω", "10 kΩ", []unit{si("\u03a9"), si("\u2126"), si("ohm"), si("Ohm"), si("ohms")}},
	Capacitance: {"a capacitance", "F", "25 pF", []unit{si("F")}},
	Inductance:  {"an inductance", "H", "1 µH", []unit{si("H")}},
	Frequency:   {"a frequency", "Hz", "137 Hz", []unit{si("Hz")}},
	Time:        {"a time", "s", "300 ms", []unit{si("s"), plain("min", 60), plain("h", 3600)}},
	Length:      {"a length", "m", "0.5 m", []unit{si("m"), plain("cm", 0.01)}},
	Area: {"an area", "m²", "0.25 mm²", []unit{
		{"m²", 1, true, 2, Unstated}, {"m2", 1, true, 2, Unstated}, {"m^2", 1, true, 2, Unstated}}},
	Angle:                 {"an angle", "rad", "90 deg", []unit{plain("deg", math.Pi/180), plain("°", math.Pi/180), si("rad")}},
	Temperature:           {"a temperature", "°C", "23 °C", []unit{plain("°C", 1), plain("degC", 1), plain("℃", 1)}},
	Power:                 {"a power", "W", "250 mW", []unit{si("W")}},
	NoiseVoltage:          {"a noise density", "V/√Hz", "6 nV/√Hz", []unit{si("V/√Hz"), si("V/rtHz"), si("V/sqrt(Hz)")}},
	NoiseCurrent:          {"a current noise density", "A/√Hz", "10 fA/√Hz", []unit{si("A/√Hz"), si("A/rtHz"), si("A/sqrt(Hz)")}},
	temperatureDifference: {"a temperature", "K", "0.5 °C", []unit{si("K"), plain("°C", 1), plain("degC", 1), plain("℃", 1)}},
	CapacitancePerLength:  {"a capacitance per length", "F/m", "100 pF/m", []unit{si("F/m")}},
	TemperatureCoefficient: {"a temperature coefficient", "1/K", "25 ppm/K", []unit{
		plain("ppm/K", 1e-6), plain("ppm/°C", 1e-6), plain("%/K", 0.01), plain("%/°C", 0.01), plain("/K", 1), plain("1/K", 1), plain("/°C", 1)}},
	Ratio: {"a share", "1", "0.1 %", append(shares, plain("", 1))},
	share: {"a share", "1", "0.1 %", shares},
}

// String is the kind with its article, for messages: "a voltage".
func (k Kind) String() string { return kinds[k].name }

// Unit is the symbol of the base unit.
func (k Kind) Unit() string { return kinds[k].unit }

// Example shows how a quantity of the kind is written.
func (k Kind) Example() string { return kinds[k].example }

// prefixes of the SI, 9th brochure, Table 7, as far as a bench needs them. The
// micro sign (U+00B5), the Greek mu (U+03BC) and the letter u are one, as are
// the Greek omega (U+03A9) and the ohm sign (U+2126) above.
var prefixes = []struct {
	text  string
	scale float64
}{
	{"f", 1e-15}, {"p", 1e-12}, {"n", 1e-9}, {"\u00b5", 1e-6}, {"\u03bc", 1e-6}, {"u", 1e-6}, {"m", 1e-3},
	{"k", 1e3}, {"M", 1e6}, {"G", 1e9}, {"T", 1e12},
}

// Convention says which figure of a sine wave an amplitude is.
type Convention int

// The conventions of amplitudes.
const (
	Unstated Convention = iota
	RMS
	Peak
	PeakToPeak
)

var conventions = [...]string{"unstated", "rms", "peak", "peak-to-peak"}

// String is the convention as plans write it.
func (c Convention) String() string { return conventions[c] }

// ConventionOf reads a convention as plans write it.
func ConventionOf(s string) (Convention, bool) {
	for i, name := range conventions[1:] {
		if s == name {
			return Convention(i + 1), true
		}
	}
	return Unstated, false
}

// ToRMS is what an amplitude of a sine wave in this convention is to be
// multiplied by to be rms: 1, 1/√2 or 1/(2√2).
func (c Convention) ToRMS() float64 {
	switch c {
	case RMS:
		return 1
	case Peak:
		return 1 / math.Sqrt2
	case PeakToPeak:
		return 1 / (2 * math.Sqrt2)
	}
	panic("quantity: an amplitude without a convention cannot be made rms")
}
