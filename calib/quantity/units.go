package quantity

import (
	"fmt"
	"strings"
)

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
	switch near := nearUnit(strings.ReplaceAll(s, " ", ""), k); {
	case s == "":
		return unit{}, 0, fmt.Errorf("has no unit")
	case near != "":
		return unit{}, 0, fmt.Errorf("has %q where %q would be right", s, near)
	case s[0] == ',':
		return unit{}, 0, fmt.Errorf("has a comma where a decimal point would be right")
	case s[0] == '(':
		return unit{}, 0, fmt.Errorf("has no uncertainty that can be read; 1.00021(15) has one, behind the number and before its exponent")
	default:
		return unit{}, 0, fmt.Errorf("has %q for a unit", s)
	}
}

// nearUnit is the right spelling of a unit in wrong capitals or with spaces in
// it; "" where that is not what is wrong. 10 MHZ is meant to be MHz, not mHz.
func nearUnit(s string, k Kind) string {
	same := func(a, b string) bool { return a == b }
	for _, equal := range []func(a, b string) bool{same, strings.EqualFold} {
		for _, u := range kinds[k].units {
			cut := len(s) - len(u.text)
			if u.text == "" || cut < 0 || !strings.EqualFold(s[cut:], u.text) {
				continue
			}
			if cut == 0 {
				return u.text
			}
			for _, p := range prefixes {
				if u.prefixed && equal(s[:cut], p.text) {
					return p.text + u.text
				}
			}
		}
	}
	return ""
}
