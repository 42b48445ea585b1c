package correct

import (
	"math"
	"strconv"
)

// number is one that a cell begins with.
type number struct {
	x        float64 // infinite where it is too large
	length   int     // in bytes; 0: there is no number
	mark     byte    // the decimal mark; 0: none was written
	exponent bool    // it has one
}

// scan reads the decimal number that b begins with. A comma is a decimal mark only
// where it is said to be. What strconv takes beyond that (NaN, Inf, hexadecimal) is none.
func scan(b []byte, comma bool) (v number) {
	i, sign := 0, 1.0
	switch {
	case len(b) > 0 && b[0] == '+':
		i = 1
	case len(b) > 0 && b[0] == '-':
		i, sign = 1, -1
	case len(b) > 2 && string(b[:3]) == "−": // the minus of typesetting
		i, sign = 3, -1
	}
	first, digits, decimals := i, 0, 0
	mantissa := uint64(0)
	for ; i < len(b); i++ {
		c := b[i]
		if d := c - '0'; d <= 9 {
			mantissa = mantissa*10 + uint64(d) // overflows only where digits are too many for what follows
			digits++
			if v.mark != 0 {
				decimals++
			}
			continue
		}
		if v.mark != 0 || c != '.' && (c != ',' || !comma) {
			break
		}
		v.mark = c
	}
	if digits == 0 {
		return number{}
	}
	power, end := exponent(b, i)
	v.exponent, v.length = end > i, end

	// Clinger 1990: a whole number below 2⁵³ and a power of ten up to 10²² are both exact
	// in a float64, so their product or quotient is rounded once.
	switch power -= decimals; {
	case digits <= 18 && mantissa < 1<<53 && -22 <= power && power <= 0:
		v.x = sign * float64(mantissa) / tens[-power]
	case digits <= 18 && mantissa < 1<<53 && 0 < power && power <= 22:
		v.x = sign * float64(mantissa) * tens[power]
	default:
		v.x = sign * slow(b[first:end])
	}
	return v
}

// tens are the powers of ten that a float64 holds exactly.
var tens = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// exponent reads the one at b[i:], if there is one, and says where it ends.
func exponent(b []byte, i int) (power, end int) {
	k := i + 1
	if i >= len(b) || b[i]|0x20 != 'e' {
		return 0, i
	}
	negative := k < len(b) && b[k] == '-'
	if k < len(b) && (b[k] == '-' || b[k] == '+') {
		k++
	}
	for end = i; k < len(b) && '0' <= b[k] && b[k] <= '9'; end = k {
		power = min(10*power+int(b[k]-'0'), 1e6)
		k++
	}
	if negative {
		power = -power
	}
	return power, end
}

// slow is for the numbers that need more than one rounding.
func slow(b []byte) float64 {
	text := append([]byte(nil), b...)
	for i, c := range text {
		if c == ',' {
			text[i] = '.'
		}
	}
	x, err := strconv.ParseFloat(string(text), 64)
	if err != nil && !math.IsInf(x, 0) {
		panic("correct: " + err.Error()) // scan lets only decimal numbers through
	}
	return x
}
