package quantity

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// drawn is a number of any size that a bench knows, of either sign, and a kind.
func drawn(t *rapid.T) (x float64, k Kind) {
	x = math.Pow(10, rapid.Float64Range(-18, 15).Draw(t, "log x"))
	if rapid.Bool().Draw(t, "negative") {
		x = -x
	}
	return x, Kind(rapid.IntRange(int(Voltage), int(Ratio)).Draw(t, "kind"))
}

// What Format writes to n digits is read as the value to half a step of the last digit.
func TestFormatIsReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, k := drawn(t)
		digits := rapid.IntRange(1, 15).Draw(t, "digits")
		text := Format(x, digits, k.Unit())
		v, err := Parse(text, k)
		if err != nil {
			t.Fatal(err)
		}
		step := math.Pow(10, float64(1-digits)) // of a number with 1 before the point, the worst
		if math.Abs(v.X-x) > (step/2+1e-15)*math.Abs(x) || v.HasU {
			t.Fatalf("%v is written %q and read as %+v", x, text, v)
		}
	})
}

// What Concise writes is read with an uncertainty within half a step of its second digit, and a value
// within the same; written again it is the same text.
func TestConciseIsReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, k := drawn(t)
		u := math.Abs(x) * math.Pow(10, rapid.Float64Range(-11, 6).Draw(t, "log relative u"))
		text := Concise(x, u, k.Unit())
		v, err := Parse(text, k)
		if err != nil {
			t.Fatal(err)
		}
		// Half a hundredth of 1.00; 0.995 is written 1.0, its last digit a tenth.
		allowed := 0.05/0.995*u + 4e-16*math.Abs(x)
		if !v.HasU || math.Abs(v.U-u) > allowed || math.Abs(v.X-x) > allowed {
			t.Fatalf("%v, u %v is written %q and read as %+v", x, u, text, v)
		}
		if again := Concise(v.X, v.U, k.Unit()); again != text {
			t.Fatalf("%q is written again as %q", text, again)
		}
	})
}

// A prefix leaves one to three digits before the point, but for sizes beyond f and T.
func TestPrefixLeavesOneToThreeDigits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := math.Pow(10, rapid.Float64Range(-15, 14.99).Draw(t, "log x"))
		scale, _ := Prefix(x, "V")
		if y := x / scale; y < 1-1e-11 || y >= 1000 {
			t.Fatalf("%v V: %v before the prefixed unit", x, y)
		}
	})
}

// Every float64 can be written, with its unit behind it, and a finite one neither as Inf nor as NaN; but 1.8e302 m² is
// beyond a float64 in mm².
func TestEveryNumberIsWritten(t *testing.T) {
	extremes := []float64{0, math.SmallestNonzeroFloat64, math.MaxFloat64, -math.MaxFloat64, math.Inf(1), math.Inf(-1), math.NaN()}
	number := rapid.OneOf(rapid.Float64(), rapid.SampledFrom(extremes))
	rapid.Check(t, func(t *rapid.T) {
		x, u := number.Draw(t, "x"), math.Abs(number.Draw(t, "u"))
		unit := rapid.SampledFrom([]string{"V", "1", "°C", "m²", "1/K"}).Draw(t, "unit")
		symbol := strings.TrimSuffix(unit, "1")
		for _, text := range []string{Format(x, 4, unit), Plain(x, unit), Concise(x, u, unit), PlusMinus(x, u, unit)} {
			if finite(u) && !strings.HasSuffix(text, symbol) {
				t.Fatalf("%v, u %v is written %q, without %s", x, u, text, unit)
			}
			if finite(1e6*x) && finite(1e6*u) && strings.ContainsAny(text, "IN") {
				t.Fatalf("%v, u %v is written %q", x, u, text)
			}
		}
		Share(x, 2) // has no panic
		SharePlusMinus(x, u)
		if scale, _ := Prefix(x, unit); !(scale > 0) {
			t.Fatalf("%v %s: the scale is %v", x, unit, scale)
		}
	})
}
