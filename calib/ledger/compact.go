package ledger

import (
	"bytes"
	"encoding/json"
	"fmt"
	"strconv"
)

// significant digits that Compact leaves: a hundredth of a ppm and better. A
// calibration's relative uncertainties begin two decades above.
const significant = 9

// Compact drops the whitespace of a result and rounds its numbers to nine significant
// digits. Digits beyond those are what most of a result's bytes in the log are spent
// on, and no instrument gave them.
func Compact(result []byte) ([]byte, error) {
	var dense bytes.Buffer
	if err := json.Compact(&dense, result); err != nil {
		return nil, fmt.Errorf("the result is no JSON: %w", err)
	}
	b := dense.Bytes()
	out := make([]byte, 0, len(b))
	for i := 0; i < len(b); {
		size := numberLength(b[i:])
		switch {
		case b[i] == '"':
			size = stringLength(b[i:])
			fallthrough
		case size == 0:
			size = max(size, 1)
			out = append(out, b[i:i+size]...)
		default:
			rounded, err := roundNumber(b[i : i+size])
			if err != nil {
				return nil, err
			}
			out = append(out, rounded...)
		}
		i += size
	}
	return out, nil
}

// roundNumber gives the nearest number of as many significant digits as are left.
func roundNumber(token []byte) ([]byte, error) {
	if len(token) <= significant {
		return token, nil
	}
	x, err := strconv.ParseFloat(string(token), 64)
	if err != nil {
		return nil, err
	}
	near, err := strconv.ParseFloat(strconv.FormatFloat(x, 'e', significant-1, 64), 64)
	if err != nil {
		return nil, err
	}
	return json.Marshal(near)
}

// stringLength is the length of the JSON string that b begins with, quotes included.
func stringLength(b []byte) int {
	for i := 1; i < len(b); i++ {
		switch b[i] {
		case '\\':
			i++
		case '"':
			return i + 1
		}
	}
	return len(b)
}
