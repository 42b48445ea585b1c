package quantity

import (
	"fmt"
	"math"
	"regexp"
	"slices"
	"strings"
)

// Spread is an uncertainty as it is written: a share of the value and a fixed
// part, which add.
type Spread struct {
	Relative float64 // share of the value's size
	Absolute float64 // in the base unit
}

// Of is the uncertainty of a value x.
func (s Spread) Of(x float64) float64 { return s.Relative*math.Abs(x) + s.Absolute }

// The plus of an exponent, 1e+3, joins no parts.
var exponentPlus = regexp.MustCompile(`(\d\.?[eE])\+`)

// ParseSpread reads the uncertainty of a quantity of a kind: "0.1 %", "80 Ω",
// "0.1 % + 10 mΩ". A bare number is a share only of a Ratio, where all is Relative;
// the uncertainty of a temperature, being a difference, may be in K. The convention of
// a voltage is the caller's to compare with the value's.
func ParseSpread(s string, k Kind) (Spread, error) {
	if k == Temperature {
		k = temperatureDifference
	}
	parts := strings.Split(exponentPlus.ReplaceAllString(s, "$1"), "+")
	if slices.ContainsFunc(parts, func(part string) bool { return tidy(part) == "" }) || len(parts) > 2 {
		return Spread{}, fmt.Errorf("%q is no uncertainty; one is written like \"0.1 %%\", %q or both with a + between", s, k.Example())
	}
	var out Spread
	relative, absolute := false, false
	for _, part := range parts {
		v, err := Parse(part, share)
		isShare := err == nil || k == Ratio
		if err != nil {
			v, err = Parse(tidy(part), k)
		}
		switch {
		case err != nil && k == Ratio:
			return Spread{}, err
		case err != nil:
			return Spread{}, fmt.Errorf("%w, its uncertainty also like \"0.1 %%\"", err)
		case v.HasU:
			return Spread{}, fmt.Errorf("%q: an uncertainty has no uncertainty of its own", s)
		case v.X < 0:
			return Spread{}, fmt.Errorf("%q is negative; an uncertainty is not", s)
		case isShare && relative, !isShare && absolute:
			return Spread{}, fmt.Errorf("%q has two parts of one kind; a share and a fixed part add", s)
		case isShare:
			out.Relative, relative = v.X, true
		default:
			out.Absolute, absolute = v.X, true
		}
	}
	return out, nil
}
