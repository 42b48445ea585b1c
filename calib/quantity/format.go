package quantity

import (
	"math"
	"slices"
	"strconv"
	"strings"
)

// unprefixed are the units that take no SI prefix on output. A unit of "1" is not written.
var unprefixed = []string{"", "%", "‰", "ppm", "°C", "°", "deg", "rad", "1/K"}

// Prefix chooses the SI prefix that leaves one to three digits before the point.
// x is scale times the number to write before the prefixed unit.
func Prefix(x float64, unit string) (scale float64, prefixed string) {
	x = math.Abs(x)
	switch {
	case unit == "1":
		return 1, ""
	case slices.Contains(unprefixed, unit):
		return 1, unit
	case x == 0 || math.IsInf(x, 0) || math.IsNaN(x):
		return 1, unit
	case unit == "m²": // of a conductor; the prefix is raised to the power with its unit
		return 1e-6, "mm²"
	}
	// Beyond f and T the number before the unit is longer instead.
	step := min(max(math.Floor(math.Log10(x*(1+1e-12))/3), -5), 4)
	for _, p := range prefixes {
		if math.Round(math.Log10(p.scale)/3) == step {
			return p.scale, p.text + unit
		}
	}
	return 1, unit
}

// behind is the unit with the space that goes before it.
func behind(unit string) string {
	if unit == "" {
		return ""
	}
	return " " + unit
}

// Format writes x with so many significant digits: "70.71 mV". A unit of "1" is
// not written, and a zero is one digit.
func Format(x float64, digits int, unit string) string {
	if !finite(x) {
		_, unit = Prefix(x, unit)
		return strconv.FormatFloat(x, 'f', 0, 64) + behind(unit)
	}
	if x == 0 {
		_, unit = Prefix(x, unit)
		return "0" + behind(unit)
	}
	scale, prefixed := Prefix(rounded(x, place(x, digits)), unit)
	return fixed(x/scale, place(x/scale, digits)) + behind(prefixed)
}

// Plain writes x with no more digits than it has, six at most: "137 Hz", "1.7 kHz", "100 mV".
func Plain(x float64, unit string) string {
	number, unit, _ := strings.Cut(Format(x, 6, unit), " ")
	if strings.Contains(number, ".") {
		number = strings.TrimRight(strings.TrimRight(number, "0"), ".")
	}
	return number + behind(unit)
}

// Concise writes a value with its standard uncertainty, to two digits, in
// parentheses: "1.00021(15) MΩ", "119.8(15) nV". The digits count in the last
// place of the value, with a point among them or not (GUM 7.2.2, second form).
func Concise(x, u float64, unit string) string {
	return withUncertainty(x, u, unit, func(x, u string) string {
		return x + "(" + strings.TrimLeft(strings.Replace(u, ".", "", 1), "0") + ")"
	})
}

// PlusMinus writes a value with an expanded uncertainty, to two digits: "(119.8 ± 1.5) nV".
func PlusMinus(x, U float64, unit string) string {
	return withUncertainty(x, U, unit, func(x, U string) string { return "(" + x + " ± " + U + ")" })
}

// withUncertainty joins a value and an uncertainty of it, both to the place of
// the uncertainty's second digit. A value without uncertainty stands alone, with
// six digits; an uncertainty without limit is said to be one.
func withUncertainty(x, u float64, unit string, join func(x, u string) string) string {
	switch {
	case u < 0:
		panic("quantity: an uncertainty is not negative")
	case u == 0 || !finite(x):
		return Format(x, 6, unit)
	case !finite(u):
		return Format(x, 6, unit) + " ± " + strings.TrimPrefix(Format(u, 1, "1"), "+")
	}
	// Rounded before the prefix is chosen: 999.9996(12) V is 1.0000000(12) kV.
	scale, prefixed := Prefix(max(math.Abs(rounded(x, place(u, 2))), rounded(u, place(u, 2))), unit)
	p := place(u/scale, 2)
	return join(fixed(x/scale, p), fixed(u/scale, p)) + behind(prefixed)
}

// shareUnit chooses between percent and millionths.
func shareUnit(x float64) (scale float64, unit string) {
	if x != 0 && math.Abs(x) < 0.0005 {
		return 1e-6, "ppm"
	}
	return 0.01, "%"
}

// Share writes a ratio with so many significant digits as "0.28 %" or "35 ppm".
func Share(x float64, digits int) string {
	scale, unit := shareUnit(x)
	return Format(x/scale, digits, unit)
}

// SharePlusMinus writes a ratio with its expanded uncertainty: "(0.276 ± 0.076) %".
func SharePlusMinus(x, U float64) string {
	larger := math.Abs(x)
	if finite(U) {
		larger = max(larger, U)
	}
	scale, unit := shareUnit(larger)
	return PlusMinus(x/scale, U/scale, unit)
}

func finite(x float64) bool { return !math.IsInf(x, 0) && !math.IsNaN(x) }

// place is the number of decimals, negative for whole tens, that leaves so many
// significant digits of x. They are counted after rounding: 0.0996 to two is 0.10.
func place(x float64, digits int) int {
	s := strconv.FormatFloat(x, 'e', digits-1, 64)
	exponent, _ := strconv.Atoi(s[strings.IndexByte(s, 'e')+1:]) // always there for a finite x
	return digits - 1 - exponent
}

// fixed writes y to a number of decimals, which may be negative. A zero has no sign.
func fixed(y float64, place int) string {
	zeros := max(-place, 0)
	s := strconv.FormatFloat(y/math.Pow(10, float64(zeros)), 'f', max(place, 0), 64)
	if strings.Trim(s, "-0.") == "" {
		return strings.TrimPrefix(s, "-")
	}
	return s + strings.Repeat("0", zeros)
}

// rounded is the number that fixed writes.
func rounded(y float64, place int) float64 {
	x, _ := strconv.ParseFloat(fixed(y, place), 64) // its text is a number
	return x
}
