package trend

import (
	"math"
	"testing"
)

// E_n by hand, from its definition in ISO 13528: U = 2u.
func TestNormalisedError(t *testing.T) {
	h := History{
		{Time: at(0), Value: 100, U: 5, UCommon: 4, Standards: "R1"},
		{Time: at(1), Value: 112, U: 5, UCommon: 4, Standards: "R1"}, // independent 3 and 3
		{Time: at(2), Value: 124, U: 12, UCommon: 4, Standards: "R2"},
		{Time: at(2), Value: 0, U: 12, AsLeft: true}, // an adjustment: not compared
		{Time: at(3), Value: -34, U: 5},
		{Time: at(4), Value: 0, U: 5, UCommon: 4, Standards: "R1"},
		{Time: at(5), Value: 0, U: math.Sqrt(34), UCommon: 5, Standards: "R1"}, // independent 3; common parts of 4 and 5 leave 1
	}
	want := []struct{ u, en float64 }{
		{2 * 3 * math.Sqrt2, 12 / (6 * math.Sqrt2)},
		{2 * 13, 12. / 26},
		{2 * 13, -34. / 26},
		{2 * math.Sqrt(50), 34 / (2 * math.Sqrt(50))},
		{2 * math.Sqrt(19), 0},
	}
	got := must(Compare(h))(t)
	if len(got) != len(want) {
		t.Fatalf("%d comparisons, want %d", len(got), len(want))
	}
	for i, c := range got {
		relative(t, "U", c.U, want[i].u)
		near(t, "E_n", c.En, want[i].en, 1e-12)
		if c.Agree() != (math.Abs(want[i].en) <= 1) {
			t.Errorf("E_n = %g, agree %v", c.En, c.Agree())
		}
	}
	if _, err := Compare(yearly(0, 1, 2)); err == nil {
		t.Error("compared without uncertainties")
	}
}
