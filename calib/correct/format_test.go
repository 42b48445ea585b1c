package correct

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// GUM 7.2.6: two digits of the uncertainty are usual, and the estimate is rounded to
// them; 7.2.2 has the form 100,021 47 g with 0,35 mg.
func TestPairs(t *testing.T) {
	point, comma, e := style{mark: '.'}, style{mark: ','}, style{mark: '.', exponent: true}
	for _, c := range []struct {
		v, u float64
		s    style
		want string
	}{
		{100.0214712, 0.00035, point, "100.02147;0.00035"},
		{70.278884, 0.0855, comma, "70,279;0,086"},
		{70.278884, 0.0996, point, "70.28;0.10"}, // 0.0996 to two digits is 0.10
		{-0.00012, 0.05, point, "0.000;0.050"},   // a zero has no sign
		{-3, 0.05, point, "-3.000;0.050"},
		{1234.4, 12, point, "1234;12"},
		{123456, 1234, point, "123500;1200"},
		{12, 1234, point, "0;1200"},
		{5e20, 3e17, point, "5.0000e+20;3.0e+17"},
		{7.0278884e-5, 8.5539e-8, point, "0.000070279;0.000000086"},
		{7.0278884e-5, 8.5539e-8, e, "7.0279e-05;8.6e-08"},
		{-6e-9, 8.5539e-8, e, "-6e-09;8.6e-08"},
		{1e-9, 8.5539e-8, e, "1e-09;8.6e-08"},
		{1e-12, 8.5539e-8, e, "0;8.6e-08"},
		{2.5e-20, 1e-21, comma, "2,50e-20;1,0e-21"},
		{1.0 / 3, 0, comma, "0,3333333333;0"},
		{math.Copysign(0, -1), 0, point, "0;0"},
		{2.5, 0, point, "2.5;0"},
		{1e300, 1e-12, e, "1.0000000000000001e+300;1.0e-12"},
	} {
		if got := string(appendPair(nil, c.v, c.u, ';', "", c.s)); got != c.want {
			t.Errorf("%v with U %v is written as %s, not %s", c.v, c.u, got, c.want)
		}
	}
	if got := string(appendPair(nil, 70.278884, 0.0855, ',', "µV", point)); got != "70.279 µV,0.086 µV" {
		t.Error(got)
	}
}

// What is written is within half a unit of its last place; U has two digits.
func TestWrittenIsRead(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := math.Pow(10, rapid.Float64Range(-280, 280).Draw(t, "log U"))
		v := u * rapid.Float64Range(-1, 1).Draw(t, "v") * math.Pow(10, rapid.Float64Range(-2, 14).Draw(t, "log v/U"))
		s := style{mark: '.', exponent: rapid.Bool().Draw(t, "exponent")}
		first, second, _ := strings.Cut(string(appendPair(nil, v, u, ' ', "", s)), " ")
		v2, err1 := strconv.ParseFloat(first, 64)
		u2, err2 := strconv.ParseFloat(second, 64)
		if err1 != nil || err2 != nil {
			t.Fatal(first, second)
		}
		// The last place of U: that of two digits of what was written.
		last := math.Pow(10, math.Floor(math.Log10(u2)+1e-9)-1)
		if math.Abs(u2-u) > 0.5000001*last || u2/last > 99.5 || u2/last < 9.9 {
			t.Errorf("U %v is written as %s", u, second)
		}
		if math.Abs(v2-v) > 0.5000001*last+1e-15*math.Abs(v) {
			t.Errorf("%v with U %v is written as %s", v, u, first)
		}
		if digits := strings.Trim(strings.Split(second, "e")[0], "0."); len(strings.Replace(digits, ".", "", 1)) > 2 {
			t.Errorf("U %v has more than two digits: %s", u, second)
		}
	})
}
