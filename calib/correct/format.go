package correct

import (
	"bytes"
	"math"
	"strconv"
)

// style is how a number is written: as the reading beside it.
type style struct {
	mark     byte // decimal mark
	exponent bool // 7.0612e-05
}

// tiny is below what an uncertainty may be to say anything about a float64.
const tiny = 1e-290

// twoDigits is an uncertainty rounded to two digits, digits·10^−place.
func twoDigits(u float64) (digits int64, place int) {
	// The power of two at or below u has the same decimal exponent, or one less.
	two := int(math.Float64bits(u)>>52&0x7ff) - 1023
	place = 1 - int(math.Floor(float64(two)*(math.Ln2/math.Ln10)))
	digits = atPlace(u, place)
	if digits >= 100 { // also where 9.96 is 10
		place--
		digits = atPlace(u, place)
	}
	return digits, place
}

// atPlace is x·10^place, rounded to a whole number that fits.
func atPlace(x float64, place int) int64 {
	if place >= 0 {
		return int64(math.Round(x * math.Pow10(place)))
	}
	return int64(math.Round(x / math.Pow10(-place)))
}

// appendPair writes a value to the place of the second digit of its expanded
// uncertainty, a separator, and that uncertainty to two digits (GUM 7.2.6), each
// with the unit behind it where one is given. A value without uncertainty has ten digits.
func appendPair(out []byte, v, u float64, separator byte, unit string, s style) []byte {
	behind := func(out []byte) []byte {
		if unit == "" {
			return out
		}
		return append(append(out, ' '), unit...)
	}
	if u < tiny {
		if v == 0 {
			v = 0 // without a sign
		}
		out = behind(appendLong(out, v, 'g', 10, s))
		return behind(append(out, separator, '0'))
	}
	digits, place := twoDigits(u)
	if place < -15 || place > 15 {
		s.exponent = true
	}
	switch {
	case math.Abs(v) < 1<<53/math.Pow10(place):
		out = appendDigits(out, atPlace(v, place), place, s)
	case s.exponent: // there, v has fewer digits than that
		out = appendLong(out, v, 'e', 16, s)
	default:
		out = appendLong(out, v, 'f', max(place, 0), s)
	}
	return behind(appendDigits(append(behind(out), separator), digits, place, s))
}

// appendLong writes what appendDigits cannot.
func appendLong(out []byte, v float64, format byte, precision int, s style) []byte {
	from := len(out)
	out = strconv.AppendFloat(out, v, format, precision, 64)
	if point := bytes.IndexByte(out[from:], '.'); point >= 0 {
		out[from+point] = s.mark
	}
	return out
}

// appendDigits writes n·10^−place, in fixed style for a place of -15 to 15.
func appendDigits(out []byte, n int64, place int, s style) []byte {
	if n < 0 {
		out, n = append(out, '-'), -n
	}
	var text [20]byte
	digits := strconv.AppendInt(text[:0], n, 10)
	switch {
	case n == 0 && (s.exponent || place <= 0):
		return append(out, '0')
	case s.exponent:
		out = append(out, digits[0])
		if len(digits) > 1 {
			out = append(append(out, s.mark), digits[1:]...)
		}
		return appendExponent(out, len(digits)-1-place)
	case place <= 0:
		return append(append(out, digits...), zeros[:-place]...)
	case len(digits) <= place:
		out = append(append(out, '0', s.mark), zeros[:place-len(digits)]...)
		return append(out, digits...)
	}
	point := len(digits) - place
	return append(append(append(out, digits[:point]...), s.mark), digits[point:]...)
}

const zeros = "000000000000000"

// appendExponent writes it as strconv does, with a sign and two digits at least.
func appendExponent(out []byte, e int) []byte {
	sign := byte('+')
	if e < 0 {
		sign, e = '-', -e
	}
	out = append(out, 'e', sign)
	if e < 10 {
		out = append(out, '0')
	}
	return strconv.AppendInt(out, int64(e), 10)
}
