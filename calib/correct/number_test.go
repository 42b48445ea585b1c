package correct

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// strconv is the measure: the nearest float64, to the last bit.
func TestScanAgreesWithStrconv(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`[+-]?(\d{1,22}(\.\d{0,22})?|\.\d{1,22})([eE][+-]?\d{1,3})?`).Draw(t, "number")
		behind := rapid.SampledFrom([]string{"", " µV", "V", ".", "e", "e+", "-", "(5) mV"}).Draw(t, "behind")
		want, _ := strconv.ParseFloat(text, 64) // infinite where it is out of range
		if strings.ContainsAny(text, ".eE") && behind == "." || strings.ContainsAny(text, "eE") {
			behind = ""
		}
		got := scan([]byte(text+behind), false)
		length := len(text)
		if behind == "." {
			length++ // "5." is a number
		}
		if math.Float64bits(got.x) != math.Float64bits(want) || got.length != length {
			t.Errorf("%q is %v, %d bytes; strconv says %v", text+behind, got.x, got.length, want)
		}
		comma := scan([]byte(strings.Replace(text, ".", ",", 1)), true)
		if comma.x != want || comma.length != len(text) {
			t.Errorf("%q with a comma is %v, %d bytes; strconv says %v", text, comma.x, comma.length, want)
		}
	})
}

func TestNoNumber(t *testing.T) {
	for _, text := range []string{"", "-", "+", ".", ",5", "e5", "NaN", "inf", "µ", "−", "--5", "−−5"} {
		if n := scan([]byte(text), false); n.length != 0 {
			t.Errorf("%q is %+v", text, n)
		}
	}
	if n := scan([]byte("−2.5"), false); n.x != -2.5 || n.length != len("−2.5") {
		t.Errorf("the minus of typesetting: %+v", n)
	}
}
