package plan

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The limits of the quadrature plan overlap at 20 kHz, where the first holds.
func TestLimitAt(t *testing.T) {
	p := mustParse(t, "quadrature")
	for frequency, want := range map[float64]float64{17: 0.01, 20e3: 0.01, 20.1e3: 0.03, 90e3: 0.03} {
		check(t, "limit", p.LimitAt(0.1, frequency).Reading, want)
	}
	p.Detector.Limits = p.Detector.Limits[1:]
	if l := p.LimitAt(0.1, 17); l != nil {
		t.Errorf("limit %v at 17 Hz, want none", *l)
	}
}

func TestUncertaintyOfAnOpenInput(t *testing.T) {
	check(t, "of +Inf", exactly(math.Inf(1)).U(), 0.0)
	check(t, "share and fixed part", Uncertainty{Relative: 0.01, Absolute: 2}.Of(-300), 5.0)
}

// Values that differ by rounding are one, those that differ in the tenth digit are two, in whatever order they come.
func TestDistinctValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(1e-12, 1e12).Draw(t, "x")
		var d distinct
		first, _ := d.of(x)
		again, fresh := d.of(x * (1 + 4e-16*float64(rapid.IntRange(-4, 4).Draw(t, "ulps"))))
		other, otherFresh := d.of(x * (1 + 1e-9))
		zero, _ := d.of(0)
		if first != 0 || again != 0 || fresh || other != 1 || !otherFresh || zero != 2 {
			t.Fatalf("indices %d %d %d %d", first, again, other, zero)
		}
	})
}

// What a value states itself stays; what stands around it fills the gaps.
func TestOver(t *testing.T) {
	own := Uncertainty{Absolute: 1, Shares: -1, Standard: 3}
	around := Uncertainty{Relative: 0.1, Shape: Rectangular, DOF: 9, Shares: 2, Standard: 1}
	check(t, "its own uncertainty stays", own.over(around), Uncertainty{Absolute: 1, Shares: 2, Standard: 3})
	check(t, "none of its own", unstated.over(around), around)
	check(t, "degrees of freedom alone", own.over(Uncertainty{DOF: 4, Shares: -1, Standard: -1}), Uncertainty{Absolute: 1, DOF: 4, Shares: -1, Standard: 3})
}
