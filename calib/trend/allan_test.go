package trend

import (
	"testing"
)

// The 1000 points of NIST SP 1065, tables 30 and 31; recomputed to ten digits
// with numpy 1.24.
func TestAllanNIST(t *testing.T) {
	y := make([]float64, 1000)
	n := 1234567890
	for i := range y {
		y[i] = float64(n) / 2147483647
		n = 16807 * n % 2147483647
	}
	relative(t, "last point", y[999], 0.7264947764233196)
	for _, c := range []struct {
		m                            int
		plain, overlapping, modified float64 // printed
		pairs                        int
		full                         [3]float64
	}{
		{1, 2.922319e-01, 2.922319e-01, 2.922319e-01, 999, [3]float64{2.922318781e-01, 2.922318781e-01, 2.922318781e-01}},
		{10, 9.965736e-02, 9.159953e-02, 6.172376e-02, 99, [3]float64{9.965736063e-02, 9.159953420e-02, 6.172376382e-02}},
		{100, 3.897804e-02, 3.241343e-02, 2.170921e-02, 9, [3]float64{3.897804331e-02, 3.241343026e-02, 2.170920914e-02}},
	} {
		for e, printed := range []float64{c.plain, c.overlapping, c.modified} {
			s := must(Allan(y, 1, c.m, Estimator(e)))(t)
			near(t, "printed deviation", s.Deviation, printed, 0.5e-6*decade(printed))
			near(t, "deviation", s.Deviation, c.full[e], 0.5e-9*decade(printed))
			if Estimator(e) == Plain && s.Terms != c.pairs {
				t.Errorf("m = %d: %d pairs, want %d", c.m, s.Terms, c.pairs)
			}
		}
	}
}

// decade is the power of ten that starts a number below 1.
func decade(x float64) float64 {
	d := 1.
	for x < d {
		d /= 10
	}
	return d
}

// The nine points of NBS that NIST SP 1065 gives with their deviations.
func TestAllanNBS(t *testing.T) {
	y := []float64{892, 809, 823, 798, 671, 644, 883, 903, 677}
	for _, c := range []struct {
		e    Estimator
		m    int
		want float64
		last float64 // half of the last printed digit
	}{
		{Plain, 1, 91.22945, 5e-6}, {Plain, 2, 115.8082, 5e-5},
		{Overlapping, 1, 91.22945, 5e-6}, {Overlapping, 2, 85.95287, 5e-6},
		{Modified, 1, 91.22945, 5e-6}, {Modified, 2, 74.78849, 5e-6},
	} {
		s := must(Allan(y, 3, c.m, c.e))(t)
		near(t, "deviation", s.Deviation, c.want, c.last)
		if s.Tau != 3*float64(c.m) {
			t.Errorf("τ = %g s over %d readings 3 s apart", s.Tau, c.m)
		}
	}
	if got := Allans(y, 1, Overlapping); len(got) != 3 || got[2].Averaged != 4 || got[2].Terms != 2 {
		t.Errorf("%+v; want means of 1, 2 and 4, the last with 2 terms", got)
	}
	if got := Allans(y, 1, Modified); len(got) != 2 { // 4 takes 11 readings
		t.Errorf("%+v; want means of 1 and 2", got)
	}
	if _, err := Allan(y, 1, 5, Plain); err == nil {
		t.Error("means of 5 out of nine readings")
	}
}

// A constant beside the readings changes nothing, however large.
func TestAllanOfDeviationsFromAConstant(t *testing.T) {
	y := []float64{892, 809, 823, 798, 671, 644, 883, 903, 677}
	for i := range y {
		y[i] += 1e9
	}
	near(t, "deviation", must(Allan(y, 1, 2, Modified))(t).Deviation, 74.78849, 5e-6)
}
