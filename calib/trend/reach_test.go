package trend

import (
	"math"
	"testing"
)

// A line through 10 and 14 a year apart, u = 3 each: at x years after the second the
// error is 14 + 4x with u = 3·√((1+x)² + x²), by hand.
func TestReach(t *testing.T) {
	tr := must(Of(yearly(3, 10, 14), Options{}))(t)
	r := tr.Reaches(100, 0.95)
	near(t, "expected, years after the last", inYears(r.Expected)-1, 21.5, 1e-6)
	x := inYears(r.Safe) - 1
	y, u := 14+4*x, 3*math.Sqrt((1+x)*(1+x)+x*x)
	near(t, "probability beyond either limit", 0.5*math.Erfc((100-y)/u/math.Sqrt2)+0.5*math.Erfc((100+y)/u/math.Sqrt2), 0.05, 1e-7)
	if !r.Up {
		t.Error("the lower limit")
	}
	p, _ := tr.At(r.Safe)
	relative(t, "predicted error", p.Error, y)
	relative(t, "its u", p.U, u)
	near(t, "half its 95 % interval", (p.High-p.Low)/2, 1.959964*p.U, 1e-5)
}

// With the other limit out of reach it is where predicted error and one-sided U meet it.
func TestReachOfOneLimit(t *testing.T) {
	tr := must(Of(yearly(1, 10, 40), Options{}))(t)
	p, _ := tr.At(tr.Reaches(1000, 0.95).Safe)
	near(t, "predicted error and one-sided U", p.Error+1.644854*p.U, 1000, 1e-4) // z of 95 %: normal tables
}

// An error near its upper limit that drifts away from it: the lower limit counts.
func TestDriftFromOneLimitToTheOther(t *testing.T) {
	r := must(Of(yearly(0.1, 97, 95), Options{}))(t).Reaches(100, 0.95)
	near(t, "expected", inYears(r.Expected)-1, 97.5, 1e-6)
	if r.Up || r.Safe.After(r.Expected) || inYears(r.Safe) < 80 {
		t.Errorf("safe up to %v, upper limit %v; want the lower limit, a little before %v", r.Safe, r.Up, r.Expected)
	}
}

func TestReachNowAndNever(t *testing.T) {
	for _, c := range []struct {
		name string
		h    History
	}{{"beyond", yearly(1, 99, 101)}, {"one result, beyond", yearly(1, 101)}} {
		r := must(Of(c.h, Options{}))(t).Reaches(100, 0.95)
		if last := c.h[len(c.h)-1].Time; !r.Safe.Equal(last) || !r.Expected.Equal(last) {
			t.Errorf("%s: expected %v, safe up to %v; want %v", c.name, r.Expected, r.Safe, last)
		}
	}
	// In doubt: 99 ± 1 is beyond 100 with Φ(−1) = 16 %.
	r := must(Of(yearly(1, 99), Options{}))(t).Reaches(100, 0.95)
	if !r.Safe.Equal(at(0)) || !r.Expected.IsZero() {
		t.Errorf("in doubt: expected %v, safe up to %v", r.Expected, r.Safe)
	}
	r = must(Of(yearly(1e-3, 0, 1e-3, 0, 1e-3), Options{}))(t).Reaches(100, 0.95)
	if !r.Safe.IsZero() || !r.Expected.IsZero() {
		t.Errorf("steady: expected %v, safe up to %v; want neither within %v", r.Expected, r.Safe, Horizon)
	}
}

// The longer ahead and the surer, the earlier.
func TestSurerIsEarlier(t *testing.T) {
	tr := must(Of(yearly(3, 10, 14, 15, 23), Options{}))(t)
	last := tr.Reaches(100, 0.5).Safe
	for _, p := range []float64{0.8, 0.9, 0.95, 0.99} {
		r := tr.Reaches(100, p)
		if !r.Safe.Before(last) {
			t.Errorf("with %g safe up to %v, not before %v", p, r.Safe, last)
		}
		last = r.Safe
	}
}

func TestNonsensePanics(t *testing.T) {
	tr := must(Of(yearly(3, 10, 14), Options{}))(t)
	for _, c := range [][2]float64{{0, 0.95}, {math.NaN(), 0.95}, {1, 0}, {1, 1}} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("limit %g, probability %g did not panic", c[0], c[1])
				}
			}()
			tr.Reaches(c[0], c[1])
		}()
	}
}
