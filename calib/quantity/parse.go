package quantity

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Value is a number in base units.
type Value struct {
	X          float64
	U          float64 // standard uncertainty written in parentheses
	HasU       bool    // one was written
	Convention Convention
}

// number, digits in parentheses, exponent, unit.
var written = regexp.MustCompile(`^([+-]?)(\d+(?:\.\d*)?|\.\d+)(?:\((\d+)\))?(?:[eE]([+-]?\d{1,3}))?\s*(.*)$`)

// Parse reads a quantity of a kind. The digits in parentheses are the standard
// uncertainty of the value's last digits (GUM 7.2.2).
func Parse(s string, k Kind) (Value, error) {
	text := tidy(s)
	if text == "" {
		return Value{}, fmt.Errorf("nothing is written; %s is written like %q", k, k.Example())
	}
	m := written.FindStringSubmatch(text)
	if m == nil {
		return Value{}, fmt.Errorf("%q does not begin with a number; %s is written like %q", s, k, k.Example())
	}
	u, prefix, err := findUnit(m[5], k)
	if err != nil {
		return Value{}, fmt.Errorf("%q %w; %s is written like %q", s, err, k, k.Example())
	}
	exponent := 0
	if m[4] != "" {
		exponent, _ = strconv.Atoi(m[4]) // at most three digits, by the pattern
	}
	x, err := strconv.ParseFloat(fmt.Sprintf("%s%se%d", m[1], m[2], exponent), 64)
	scale := u.scale * math.Pow(prefix, u.power)
	v := Value{X: scaled(x, scale), Convention: u.convention}
	if err != nil || math.IsInf(v.X, 0) {
		return Value{}, fmt.Errorf("%q is too large", s)
	}
	if m[3] != "" {
		decimals := 0
		if dot := strings.IndexByte(m[2], '.'); dot >= 0 {
			decimals = len(m[2]) - dot - 1
		}
		digits, err := strconv.ParseFloat(fmt.Sprintf("%se%d", m[3], exponent-decimals), 64)
		v.U, v.HasU = scaled(digits, scale), true
		if err != nil || math.IsInf(v.U, 0) {
			return Value{}, fmt.Errorf("%q is too large", s)
		}
	}
	return v, nil
}

// scaled multiplies so that a decimal prefix costs no digit: 0.3e-12 is 0.3/1e12.
func scaled(x, scale float64) float64 {
	if inverse := math.Round(1 / scale); scale < 1 && inverse < 1e16 && math.Abs(inverse*scale-1) < 1e-15 {
		return x / inverse
	}
	return x * scale
}

// tidy takes spaces off the ends and makes the special ones plain.
func tidy(s string) string {
	return strings.TrimSpace(strings.NewReplacer("\u00a0", " ", "\u202f", " ", "\u2009", " ", "−", "-").Replace(s))
}

// findUnit finds a unit, with its prefix, among those of the kind.
func findUnit(s string, k Kind) (unit, float64, error) {
	for _, u := range kinds[k].units {
		if s == u.text {
			return u, 1, nil
		}
	}
	for _, u := range kinds[k].units {
		if head, ok := strings.CutSuffix(s, u.text); ok && u.prefixed {
			for _, p := range prefixes {
				if head == p.text {
					return u, p.scale, nil
				}
			}
		}
	}
	switch near := nearUnit(s, k); {
	case s == "":
		return unit{}, 0, fmt.Errorf("has no unit")
	case near != "":
		return unit{}, 0, fmt.Errorf("has %q where %q would be right", s, near)
	default:
		return unit{}, 0, fmt.Errorf("has %q for a unit", s)
	}
}

// nearUnit is the right spelling of a unit in wrong capitals; "" where that is not it.
func nearUnit(s string, k Kind) string {
	for _, u := range kinds[k].units {
		if len(s) < len(u.text) || !strings.EqualFold(s[len(s)-len(u.text):], u.text) {
			continue
		}
		head := s[:len(s)-len(u.text)]
		if head == "" {
			return u.text
		}
		if !u.prefixed {
			continue
		}
		for _, p := range prefixes {
			if strings.EqualFold(head, p.text) || head == p.text {
				return p.text + u.text
			}
		}
	}
	return ""
}

// Spread is an uncertainty as it is written: a share of the value and a fixed
// part, which add.
type Spread struct{ Relative, Absolute float64 }

// Of is the uncertainty of a value x.
func (s Spread) Of(x float64) float64 { return s.Relative*math.Abs(x) + s.Absolute }

// ParseSpread reads the uncertainty of a quantity of a kind: "0.1 %", "80 Ω",
// "0.1 % + 10 mΩ".
func ParseSpread(s string, k Kind) (Spread, error) {
	var out Spread
	parts := strings.Split(s, "+")
	if strings.HasPrefix(tidy(s), "+") || len(parts) > 2 {
		return out, fmt.Errorf("%q is no uncertainty; one is written like \"0.1 %%\", %q or both with a + between", s, k.Example())
	}
	relative, absolute := false, false
	for _, part := range parts {
		// A bare number is a share only where the quantity itself is one.
		v, err := Parse(part, Ratio)
		isShare := err == nil && (k == Ratio || strings.TrimRight(tidy(part), "0123456789.eE+-() ") != "")
		if !isShare {
			if v, err = Parse(part, k); err != nil {
				return Spread{}, fmt.Errorf("%w, its uncertainty also like \"0.1 %%\"", err)
			}
		}
		switch {
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
