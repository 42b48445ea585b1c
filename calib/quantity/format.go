package quantity

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Prefix chooses the SI prefix that leaves one to three digits before the point.
// x is scale times the number to write before the prefixed unit.
func Prefix(x float64, unit string) (scale float64, prefixed string) {
	if unit == "1" || unit == "" || unit == "°C" || unit == "rad" || unit == "1/K" {
		return 1, strings.TrimPrefix(unit, "1")
	}
	x = math.Abs(x)
	if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) {
		return 1, unit
	}
	step := math.Floor(math.Log10(x*(1+1e-12)) / 3)
	for _, p := range prefixes {
		if math.Round(math.Log10(p.scale)/3) == step {
			return p.scale, p.text + unit
		}
	}
	switch {
	case step < -5:
		return 1e-15, "f" + unit
	case step > 4:
		return 1e12, "T" + unit
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
// not written.
func Format(x float64, digits int, unit string) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return strings.TrimSpace(fmt.Sprint(x, " ", strings.TrimPrefix(unit, "1")))
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	scale, prefixed := Prefix(rounded, unit)
	y := rounded / scale
	decimals := 0
	if y != 0 {
		decimals = max(0, digits-1-int(math.Floor(math.Log10(math.Abs(y)*(1+1e-12)))))
	}
	return strconv.FormatFloat(y, 'f', decimals, 64) + behind(prefixed)
}

// place is the number of decimals, negative for whole tens, at which u has two
// significant digits.
func place(u float64) int {
	digits := strconv.FormatFloat(math.Abs(u), 'e', 1, 64) // rounded first: 0.0996 is 0.10
	exponent, _ := strconv.Atoi(digits[strings.IndexByte(digits, 'e')+1:])
	return 1 - exponent
}

// fixed writes y at a decimal place, which may be negative.
func fixed(y float64, place int) string {
	if place >= 0 {
		s := strconv.FormatFloat(y, 'f', place, 64)
		if strings.Trim(s, "-0.") == "" {
			return strings.TrimPrefix(s, "-")
		}
		return s
	}
	unit := math.Pow(10, float64(-place))
	return strconv.FormatFloat(math.Round(y/unit)*unit, 'f', 0, 64)
}

// usable tells whether u can set the place to round to.
func usable(x, u float64) bool {
	return u > 0 && !math.IsInf(u, 0) && !math.IsNaN(x) && !math.IsInf(x, 0)
}

// Concise writes a value with its standard uncertainty, to two digits, in
// parentheses: "1.00021(15) MΩ" (GUM 7.2.2).
func Concise(x, u float64, unit string) string {
	if !usable(x, u) {
		return Format(x, 6, unit)
	}
	scale, prefixed := Prefix(math.Max(math.Abs(x), u), unit)
	y, v := x/scale, u/scale
	p := place(v)
	digits := fixed(v, p)
	if strings.HasPrefix(digits, "0.") {
		digits = strings.TrimLeft(strings.Replace(digits, ".", "", 1), "0")
	}
	return fixed(y, p) + "(" + digits + ")" + behind(prefixed)
}

// PlusMinus writes a value with an expanded uncertainty: "(119.8 ± 1.5) nV".
func PlusMinus(x, u float64, unit string) string {
	if !usable(x, u) {
		return Format(x, 6, unit)
	}
	scale, prefixed := Prefix(math.Max(math.Abs(x), u), unit)
	p := place(u / scale)
	return "(" + fixed(x/scale, p) + " ± " + fixed(u/scale, p) + ")" + behind(prefixed)
}

// shareUnit chooses between percent and millionths.
func shareUnit(x float64) (scale float64, unit string) {
	if math.Abs(x) < 0.0005 {
		return 1e-6, "ppm"
	}
	return 0.01, "%"
}

// Share writes a ratio with so many significant digits as "0.28 %" or "35 ppm".
func Share(x float64, digits int) string {
	if x == 0 {
		return "0 %"
	}
	scale, unit := shareUnit(x)
	return fixed(x/scale, place(x/scale)+digits-2) + " " + unit
}

// SharePlusMinus writes a ratio with its expanded uncertainty: "(0.276 ± 0.076) %".
func SharePlusMinus(x, u float64) string {
	if !usable(x, u) {
		return Share(x, 3)
	}
	scale, unit := shareUnit(math.Max(math.Abs(x), u))
	p := place(u / scale)
	return "(" + fixed(x/scale, p) + " ± " + fixed(u/scale, p) + ") " + unit
}
