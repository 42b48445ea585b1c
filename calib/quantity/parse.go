package quantity

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Value is a number in base units; of an amplitude, in the convention written.
type Value struct {
	X          float64
	U          float64 // standard uncertainty written in parentheses
	HasU       bool    // one was written
	Convention Convention
}

// number, uncertainty in parentheses, exponent, unit.
var written = regexp.MustCompile(`(?s)^([+-]?)(\d+(?:\.\d*)?|\.\d+)(?:\((\d+|\d+\.\d+|\.\d+)\))?(?:[eE]([+-]?\d+))?\s*(.*)$`)

// Parse reads a quantity of a kind. Digits in parentheses are the standard
// uncertainty of the value's last digits: 1.00021(15) is 1.00021 with 0.00015
// (GUM 7.2.2, second form). With a point of their own they are the uncertainty
// as it stands: 119.8(1.5) is 119.8 with 1.5 (third form).
func Parse(s string, k Kind) (Value, error) {
	text := tidy(s)
	if text == "" {
		return Value{}, fmt.Errorf("nothing is written; %s is written like %q", k, k.Example())
	}
	m := written.FindStringSubmatch(text)
	if m == nil {
		return Value{}, fmt.Errorf("%q does not begin with a number; %s is written like %q", s, k, k.Example())
	}
	sign, digits, parentheses, exponent := m[1], m[2], m[3], m[4]
	unit, prefix, err := findUnit(m[5], k)
	if err != nil {
		return Value{}, fmt.Errorf("%q %w; %s is written like %q", s, err, k, k.Example())
	}
	power := 0
	if exponent != "" {
		if power, err = strconv.Atoi(exponent); err != nil {
			return Value{}, beyond(s, exponent[0] == '-')
		}
	}
	scale := unit.scale * math.Pow(prefix, unit.power)
	v := Value{Convention: unit.convention, HasU: parentheses != ""}
	if v.X, err = number(s, sign+digits, power, scale); err != nil || !v.HasU {
		return v, err
	}
	if _, decimals, _ := strings.Cut(digits, "."); !strings.Contains(parentheses, ".") {
		power -= len(decimals)
	}
	v.U, err = number(s, parentheses, power, scale)
	return v, err
}

// number is digits times a power of ten, times a scale, as written in s.
func number(s, digits string, power int, scale float64) (float64, error) {
	x, err := strconv.ParseFloat(fmt.Sprintf("%se%d", digits, power), 64)
	x = scaled(x, scale)
	isZero := strings.Trim(digits, "+-0.") == ""
	if err != nil || math.IsInf(x, 0) || x == 0 && !isZero {
		return 0, beyond(s, x == 0)
	}
	return x, nil
}

func beyond(s string, small bool) error {
	if small {
		return fmt.Errorf("%q is too small", s)
	}
	return fmt.Errorf("%q is too large", s)
}

// scaled multiplies so that a decimal prefix costs no digit: 0.3e-12 is 0.3/1e12.
func scaled(x, scale float64) float64 {
	if inverse := math.Round(1 / scale); scale < 1 && inverse < 1e16 && math.Abs(inverse*scale-1) < 1e-15 {
		return x / inverse
	}
	return x * scale
}

// tidy takes spaces off the ends and makes the special ones, and the minus of typesetting, plain.
func tidy(s string) string { return strings.TrimSpace(special.Replace(s)) }

var special = strings.NewReplacer(
	"\u00a0", " ", // no-break space
	"\u202f", " ", // narrow no-break space
	"\u2009", " ", // thin space
	"\u2212", "-") // minus sign
