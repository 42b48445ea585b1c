package uncertainty

import (
	"math"
	"strconv"
	"strings"
)

// Tolerance is the numerical tolerance δ of an uncertainty (JCGM 101, 7.9.2): u
// rounded to so many significant digits is a whole number of 10^l, and δ = ½·10^l,
// in u's unit. It is 0 for u = 0.
func Tolerance(u float64, digits int) float64 {
	if !(u >= 0) || math.IsInf(u, 1) || digits < 1 {
		panic("uncertainty: a tolerance is of a finite, non-negative uncertainty and one digit or more")
	}
	if u == 0 {
		return 0
	}
	_, exponent, _ := strings.Cut(strconv.FormatFloat(u, 'e', digits-1, 64), "e")
	l, _ := strconv.Atoi(exponent)
	return 0.5 * math.Pow10(l-digits+1)
}

// Validation compares the coverage interval of the linear propagation with that
// of Monte Carlo; all in the unit of the result.
type Validation struct {
	Low, High float64 // distances between the lower and between the upper ends, not negative
	Tolerance float64 // what either may be
	Validated bool
}

// Validate applies JCGM 101, 8.1.3: the interval y ± expanded is validated where
// neither end is further than the tolerance from that of the Monte Carlo interval.
// For the validation to mean something, the Monte Carlo ends themselves should be
// good to a fifth of the tolerance (8.2).
func Validate(y, expanded float64, monteCarlo Interval, tolerance float64) Validation {
	v := Validation{
		Low:       math.Abs(y - expanded - monteCarlo.Low),
		High:      math.Abs(y + expanded - monteCarlo.High),
		Tolerance: tolerance,
	}
	v.Validated = v.Low <= tolerance && v.High <= tolerance
	return v
}
