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

const (
	mark      = 0   // stands for a number
	leastLong = 5   // digits of a number worth taking out
	mostLong  = 40  // digits
	farthest  = 400 // power of ten, from 0
)

// number is 0.d₁d₂d₃… · 10^(exponent+1), without zeros at either end.
type number struct {
	digits   string
	exponent int
}

// splitNumbers takes the long numbers out of content. The table has of each number how
// many numbers back the same one last stood, or 0 where it is new (uvarint); then of
// each new one how many digits it has (uvarint); then of each new one its exponent
// (varint). It is not ok where content holds the mark itself or hardly any numbers.
func splitNumbers(content []byte) (text, table, digits []byte, ok bool) {
	if bytes.IndexByte(content, mark) >= 0 {
		return nil, nil, nil, false
	}
	text = make([]byte, 0, len(content))
	var lengths, exponents []byte
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
			table = binary.AppendUvarint(table, uint64(count-before))
		} else {
			table = append(table, 0)
			lengths = binary.AppendUvarint(lengths, uint64(len(x.digits)))
			exponents = binary.AppendVarint(exponents, int64(x.exponent))
			digits = append(digits, x.digits...)
		}
		last[x] = count
		count++
	}
	return text, append(append(table, lengths...), exponents...), digits, count >= 16
}

// joinNumbers puts the numbers back in the text.
func joinNumbers(text, table, packedDigits []byte) ([]byte, error) {
	bad := false
	next := func() int {
		n, w := binary.Uvarint(table)
		if w <= 0 || n > 1<<30 {
			bad = true
			return 0
		}
		table = table[w:]
		return int(n)
	}
	links := make([]int, bytes.Count(text, []byte{mark}))
	fresh := 0
	for i := range links {
		if links[i] = next(); links[i] > i {
			return nil, errPacked
		} else if links[i] == 0 {
			fresh++
		}
	}
	lengths := make([]int, fresh)
	total := 0
	for i := range lengths {
		lengths[i] = next()
		if lengths[i] < 1 || lengths[i] > mostLong {
			return nil, errPacked
		}
		total += lengths[i]
	}
	digits, ok := unpackDigits(packedDigits, total)
	if bad || !ok {
		return nil, errPacked
	}
	out := make([]byte, 0, len(text)+12*len(links))
	seen := make([][2]int, len(links)) // where in out each number stands
	for i, link := range links {
		at := bytes.IndexByte(text, mark)
		out = append(out, text[:at]...)
		text = text[at+1:]
		start := len(out)
		if link > 0 {
			from := seen[i-link]
			out = append(out, out[from[0]:from[1]]...)
		} else {
			exponent, w := binary.Varint(table)
			if w <= 0 || exponent < -farthest || exponent > farthest {
				return nil, errPacked
			}
			table = table[w:]
			out = appendNumber(out, digits[:lengths[0]], int(exponent))
			digits, lengths = digits[lengths[0]:], lengths[1:]
		}
		seen[i] = [2]int{start, len(out)}
	}
	if len(table) > 0 {
		return nil, errPacked
	}
	return append(out, text...), nil
}

// packDigits writes three digits in ten bits.
func packDigits(digits []byte) []byte {
	out := make([]byte, 0, len(digits)*10/24+2)
	var held uint32 // bits not written yet
	bits := 0
	for i := 0; i < len(digits); i += 3 {
		group := uint32(0)
		for j := i; j < i+3; j++ {
			group *= 10
			if j < len(digits) {
				group += uint32(digits[j] - '0')
			}
		}
		held, bits = held<<10|group, bits+10
		for ; bits >= 8; bits -= 8 {
			out = append(out, byte(held>>(bits-8)))
		}
	}
	if bits > 0 {
		out = append(out, byte(held<<(8-bits)))
	}
	return out
}

// unpackDigits reads n digits; it is not ok where packed is not theirs, to the bit.
func unpackDigits(packed []byte, n int) (digits []byte, ok bool) {
	groups := (n + 2) / 3
	if len(packed) != (10*groups+7)/8 {
		return nil, false
	}
	digits = make([]byte, 0, 3*groups)
	var held uint32
	bits := 0
	for range groups {
		for ; bits < 10; bits += 8 {
			held, packed = held<<8|uint32(packed[0]), packed[1:]
		}
		bits -= 10
		group := held >> bits & 1023
		if group > 999 {
			return nil, false
		}
		digits = append(digits, '0'+byte(group/100), '0'+byte(group/10%10), '0'+byte(group%10))
	}
	spare := digits[n:]
	return digits[:n], held&(1<<bits-1) == 0 && bytes.Count(spare, []byte{'0'}) == len(spare)
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
	if exponent < -farthest || exponent > farthest || !bytes.Equal(appendNumber(make([]byte, 0, 64), trimmed, exponent), token) {
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
