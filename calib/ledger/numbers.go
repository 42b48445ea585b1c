package ledger

import (
	"bytes"
	"encoding/binary"
	"strconv"
)

// A result is mostly numbers of many digits, and those do not compress among text:
// every one costs a break in a repeated line. So a long number leaves a mark in the
// text, and what it was is kept beside it. A number that stood before (the two
// reference phases of a step share most values) is a link to there; any other is its
// digits and its exponent. Signs and short numbers stay in the text.

// numbers are those taken out of a text, in order.
type numbers struct {
	links     []byte // of each: how many numbers back the same one last stood, uvarint; 0: it is new
	lengths   []byte // of each new one: how many digits
	exponents []byte // of each new one: the power of ten of the first digit, varint
	digits    []byte // of each new one
}

const (
	mark      = 0  // stands for a number
	leastLong = 5  // digits of a number worth taking out
	mostLong  = 40 // digits
)

// number is 0.d₁d₂d₃… · 10^(exponent+1), without zeros at either end.
type number struct {
	digits   string
	exponent int
}

// splitNumbers takes the long numbers out of content. It is not ok where content
// holds the mark itself or hardly any numbers.
func splitNumbers(content []byte) (text []byte, n numbers, ok bool) {
	if bytes.IndexByte(content, mark) >= 0 {
		return nil, n, false
	}
	text = make([]byte, 0, len(content))
	last := map[number]int{} // where each number last stood
	count := 0
	for i := 0; i < len(content); {
		token := content[i : i+numberLength(content[i:])]
		if len(token) == 0 {
			text = append(text, content[i])
			i++
			continue
		}
		i += len(token)
		x, long := parseNumber(token)
		if !long {
			text = append(text, token...)
			continue
		}
		text = append(text, mark)
		if before, again := last[x]; again {
			n.links = binary.AppendUvarint(n.links, uint64(count-before))
		} else {
			n.links = append(n.links, 0)
			n.lengths = append(n.lengths, byte(len(x.digits)))
			n.exponents = binary.AppendVarint(n.exponents, int64(x.exponent))
			n.digits = append(n.digits, x.digits...)
		}
		last[x] = count
		count++
	}
	return text, n, count >= 16
}

// joinNumbers puts the numbers back in the text.
func joinNumbers(text []byte, n numbers) ([]byte, error) {
	out := make([]byte, 0, 3*len(text))
	var seen [][2]int // where in out each number stands
	for {
		at := bytes.IndexByte(text, mark)
		if at < 0 {
			break
		}
		out = append(out, text[:at]...)
		text = text[at+1:]
		back, w := binary.Uvarint(n.links)
		if w <= 0 || back > uint64(len(seen)) {
			return nil, errPacked
		}
		n.links = n.links[w:]
		start := len(out)
		if back > 0 {
			from := seen[len(seen)-int(back)]
			out = append(out, out[from[0]:from[1]]...)
		} else {
			exponent, w := binary.Varint(n.exponents)
			if w <= 0 || exponent < -400 || exponent > 400 || len(n.lengths) == 0 || len(n.digits) < int(n.lengths[0]) || n.lengths[0] == 0 {
				return nil, errPacked
			}
			size := int(n.lengths[0])
			out = appendNumber(out, n.digits[:size], int(exponent))
			n.exponents, n.lengths, n.digits = n.exponents[w:], n.lengths[1:], n.digits[size:]
		}
		seen = append(seen, [2]int{start, len(out)})
	}
	if len(n.links)+len(n.lengths)+len(n.exponents)+len(n.digits) > 0 {
		return nil, errPacked
	}
	return append(out, text...), nil
}

// numberLength is the length of the number that b begins with: digits, perhaps a
// point and digits, perhaps an exponent; 0 where it begins with none.
func numberLength(b []byte) int {
	digits := func(i int) int {
		for i < len(b) && '0' <= b[i] && b[i] <= '9' {
			i++
		}
		return i
	}
	end := digits(0)
	if end == 0 {
		return 0
	}
	if end < len(b) && b[end] == '.' {
		if d := digits(end + 1); d > end+1 {
			end = d
		}
	}
	if end < len(b) && (b[end] == 'e' || b[end] == 'E') {
		from := end + 1
		if from < len(b) && (b[from] == '-' || b[from] == '+') {
			from++
		}
		if d := digits(from); d > from {
			end = d
		}
	}
	return end
}

// parseNumber reads a number. It is long where it has many digits and appendNumber
// would write it just so.
func parseNumber(token []byte) (x number, long bool) {
	mantissa, power := token, 0
	if e := bytes.IndexAny(token, "eE"); e >= 0 {
		var err error
		if power, err = strconv.Atoi(string(token[e+1:])); err != nil || power < -350 || power > 350 {
			return x, false
		}
		mantissa = token[:e]
	}
	if len(mantissa) < leastLong {
		return x, false
	}
	whole, fraction, _ := bytes.Cut(mantissa, []byte("."))
	digits := append(append(make([]byte, 0, 24), whole...), fraction...)
	led := bytes.TrimLeft(digits, "0")
	trimmed := bytes.TrimRight(led, "0")
	if len(trimmed) < leastLong || len(trimmed) > mostLong {
		return x, false
	}
	exponent := power + len(whole) - 1 - (len(digits) - len(led))
	if exponent < -400 || exponent > 400 || !bytes.Equal(appendNumber(make([]byte, 0, 64), trimmed, exponent), token) {
		return x, false
	}
	return number{string(trimmed), exponent}, true
}

// appendNumber writes a number as encoding/json writes a float64: plain from 1e-6
// to below 1e21, else with an exponent.
func appendNumber(b, digits []byte, exponent int) []byte {
	switch {
	case exponent < -6 || exponent >= 21:
		b = append(b, digits[0])
		if len(digits) > 1 {
			b = append(append(b, '.'), digits[1:]...)
		}
		b = append(b, 'e')
		if exponent > 0 {
			b = append(b, '+')
		}
		return strconv.AppendInt(b, int64(exponent), 10)
	case exponent < 0:
		b = append(b, "0."...)
		for range -1 - exponent {
			b = append(b, '0')
		}
		return append(b, digits...)
	case exponent >= len(digits)-1:
		b = append(b, digits...)
		for range exponent - len(digits) + 1 {
			b = append(b, '0')
		}
		return b
	}
	b = append(append(b, digits[:exponent+1]...), '.')
	return append(b, digits[exponent+1:]...)
}
