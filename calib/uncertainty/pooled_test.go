package uncertainty

import (
	"fmt"
	"testing"

	"pgregory.net/rapid"
)

// GUM H.5, table H.9 (from memory; its figures reproduce the printed 85 µV): standard deviations, in µV, of five
// voltages on each of ten days. The print pools them to s = 85 µV with J(K − 1) = 40 degrees of freedom.
func TestGUMH5Pooled(t *testing.T) {
	var groups []Group
	for _, s := range []float64{60, 77, 111, 101, 67, 93, 80, 73, 88, 86} {
		groups = append(groups, Group{SumSquares: 4 * s * s, DOF: 4})
	}
	p := Pool(groups)
	within(t, "s, printed", p.SD, 85, 0.5)
	within(t, "ν", p.DOF, 40, 0)
}

// Quantiles of χ² from scipy 1.10: at each, the chance of more is what is left.
func TestChanceOfMore(t *testing.T) {
	left := [6]float64{0.975, 0.95, 0.50, 0.05, 0.025, 0.01}
	for _, row := range []struct {
		nu       float64
		quantile [6]float64
	}{
		{4, [6]float64{0.4844, 0.7107, 3.3567, 9.4877, 11.1433, 13.2767}},
		{8, [6]float64{2.1797, 2.7326, 7.3441, 15.5073, 17.5345, 20.0902}},
		{9, [6]float64{2.7004, 3.3251, 8.3428, 16.9190, 19.0228, 21.6660}},
		{10, [6]float64{3.2470, 3.9403, 9.3418, 18.3070, 20.4832, 23.2093}},
		{20, [6]float64{9.5908, 10.8508, 19.3374, 31.4104, 34.1696, 37.5662}},
		{50, [6]float64{32.3574, 34.7643, 49.3349, 67.5048, 71.4202, 76.1539}},
	} {
		for i, q := range row.quantile {
			const predicted = 3e-9
			p := Pool([]Group{{0.4 * q * predicted * predicted, 1}, {0.6 * q * predicted * predicted, row.nu - 1}})
			// χ² is rounded to 0.00005, its density is below 0.2.
			within(t, fmt.Sprintf("ν = %g, χ² = %g", row.nu, q), p.ChanceOfMore(predicted), left[i], 1e-5)
		}
	}
}

func TestNoScatterOrNonePredicted(t *testing.T) {
	if p := Pool(nil); p != (Pooled{}) || p.ChanceOfMore(1) != 1 {
		t.Error("no readings, no doubt")
	}
	if c := (Pooled{SD: 1, DOF: 3}).ChanceOfMore(0); c != 0 {
		t.Errorf("scatter where none is predicted has the chance 0, not %g", c)
	}
}

// Pooling is the same whatever the grouping, and s lies between the groups' own.
func TestPoolingIsAssociative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		groups := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Group {
			return Group{rapid.Float64Range(0.1, 10).Draw(t, "sum"), float64(rapid.IntRange(1, 9).Draw(t, "ν"))}
		}), 2, 8).Draw(t, "groups")
		all := Pool(groups)
		first := Pool(groups[:1])
		rest := Pool(groups[1:])
		again := Pool([]Group{{first.SD * first.SD * first.DOF, first.DOF}, {rest.SD * rest.SD * rest.DOF, rest.DOF}})
		relative(t, "s", again.SD, all.SD, 1e-12)
		within(t, "ν", again.DOF, all.DOF, 0)
		if all.SD < min(first.SD, rest.SD)*(1-1e-12) || all.SD > max(first.SD, rest.SD)*(1+1e-12) {
			t.Errorf("%g is outside of %g and %g", all.SD, first.SD, rest.SD)
		}
	})
}
