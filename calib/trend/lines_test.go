package trend

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"time"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// Two results with one standard: its error is in both, and not in their difference. By
// hand: u(slope) = √2·3/2 and u at the last date = √(3² + 4²).
func TestCommonPartIsNotInTheSlope(t *testing.T) {
	h := History{{Time: at(0), Value: 10, U: 5, UCommon: 4, Standards: "R1"}, {Time: at(2), Value: 20, U: 5, UCommon: 4, Standards: "R1"}}
	tr := must(Of(h, Options{}))(t)
	relative(t, "drift", tr.Drift.PerYear, 5)
	relative(t, "u", tr.Drift.U, math.Sqrt2*3/2)
	p, _ := tr.At(at(2))
	relative(t, "u at the last result", p.U, 5)

	h[1].Standards = "R2"
	tr = must(Of(h, Options{}))(t)
	relative(t, "u with another standard", tr.Drift.U, math.Sqrt2*5/2)

	h[0].Standards, h[1].Standards = "", ""
	tr = must(Of(h, Options{}))(t)
	relative(t, "u with standards not named", tr.Drift.U, math.Sqrt2*5/2)
}

// The estimate and its covariance against the textbook's form of generalised least
// squares, (XᵀV⁻¹X)⁻¹XᵀV⁻¹y with the whole covariance V of the results.
func TestLinesAgainstFullCovariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := drawHistory(t)
		tr, err := Of(h, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if tr.Scale != 1 {
			return // that is not the stated covariance
		}
		n, s := len(tr.Points), len(tr.Segments)
		v, x, y := mat.NewDense(n, n, nil), mat.NewDense(n, s+1, nil), mat.NewVecDense(n, nil)
		for i, p := range tr.Points {
			for j, q := range tr.Points {
				if p.Standards == q.Standards && p.Standards != "" {
					v.Set(i, j, p.UCommon*q.UCommon)
				}
			}
			v.Set(i, i, p.U*p.U)
			y.SetVec(i, p.Value)
			x.Set(i, s, inYears(p.Time))
		}
		for k, segment := range tr.Segments {
			for i := segment.From; i <= segment.To; i++ {
				x.Set(i, k, 1)
			}
		}
		var weighted, normal, cov mat.Dense
		if err := weighted.Solve(v, x); err != nil {
			t.Fatal(err)
		}
		normal.Mul(x.T(), &weighted)
		if err := cov.Inverse(&normal); err != nil {
			t.Fatal(err)
		}
		var right, b mat.VecDense
		right.MulVec(weighted.T(), y)
		b.MulVec(&cov, &right)
		var r, vr mat.VecDense
		r.MulVec(x, &b)
		r.SubVec(y, &r)
		if err := vr.SolveVec(v, &r); err != nil {
			t.Fatal(err)
		}
		chi2, u := mat.Dot(&r, &vr), math.Sqrt(cov.At(s, s))
		if math.Abs(tr.Drift.PerYear-b.AtVec(s)) > 1e-7*u || math.Abs(tr.Drift.U-u) > 1e-7*u || math.Abs(tr.ChiSquared-chi2) > 1e-7*(1+chi2) {
			t.Fatalf("drift %g, u %g, χ² %g; want %g, %g, %g", tr.Drift.PerYear, tr.Drift.U, tr.ChiSquared, b.AtVec(s), u, chi2)
		}
	})
}

// drawHistory is a history of 2 to 10 results, the first two in one segment.
func drawHistory(t *rapid.T) History {
	var h History
	x := 0.
	for i := range rapid.IntRange(2, 10).Draw(t, "n") {
		x += rapid.Float64Range(0.1, 2).Draw(t, "step")
		u := rapid.Float64Range(1, 10).Draw(t, "u")
		h = append(h, Point{
			Time: at(x), Value: rapid.Float64Range(-10, 10).Draw(t, "value"), U: u,
			UCommon:   u * rapid.Float64Range(0, 0.95).Draw(t, "share"),
			Standards: rapid.SampledFrom([]string{"", "R1", "R2"}).Draw(t, "standards"),
			AsLeft:    i > 1 && rapid.Float64Range(0, 1).Draw(t, "adjusted") < 0.2,
		})
	}
	return h
}

// With common parts the enlarged χ² is its expectation, as R makes it without.
func TestBirgeWithCommonParts(t *testing.T) {
	h := yearly(5, 0, 60, -20, 70, 10, 80)
	for i := range h {
		h[i].UCommon, h[i].Standards = 4, "R1"
		if i > 2 {
			h[i].Standards = "R2"
		}
	}
	tr := must(Of(h, Options{}))(t)
	relative(t, "χ² after", tr.fit.ChiSquared, float64(tr.DOF))
	if tr.Scale < 2 || tr.Drift.DOF != 4 {
		t.Errorf("scale %g, %d degrees of freedom; want above 2, and 4", tr.Scale, tr.Drift.DOF)
	}
}

func TestAdjustmentBreaksTheLine(t *testing.T) {
	h := History{
		{Time: at(0), Value: 0, U: 1},
		{Time: at(2), Value: 2, U: 1},
		{Time: at(4), Value: -10, U: 1, AsLeft: true}, // given first; as found on that date comes before it
		{Time: at(4), Value: 4, U: 1},
		{Time: at(6), Value: -8, U: 1},
	}
	tr := must(Of(h, Options{}))(t)
	if got := fmt.Sprint(tr.Segments[0].From, tr.Segments[0].To, tr.Segments[1].From, tr.Segments[1].To); got != "0 2 3 4" {
		t.Errorf("segments %s, want 0 2 3 4", got)
	}
	near(t, "drift", tr.Drift.PerYear, 1, 1e-9)
	// Squares of dates about their segments' means: 8 and 2.
	relative(t, "u", tr.Drift.U, 1/math.Sqrt(10))
	for _, c := range []struct{ date, want float64 }{{1, 1}, {3.99, 3.99}, {4, -10}, {5, -9}, {10, -4}} {
		p, _ := tr.At(at(c.date))
		near(t, fmt.Sprint("error at ", c.date), p.Error, c.want, 1e-8)
	}

	// A slope each: the second segment has two results, u = √2/2.
	h[4].Value = -6
	tr = must(Of(h, Options{SlopeEach: true}))(t)
	near(t, "first drift", tr.Segments[0].Drift.PerYear, 1, 1e-9)
	relative(t, "second drift", tr.Drift.PerYear, 2)
	relative(t, "its u", tr.Drift.U, math.Sqrt2/2)

	// Without the last, it has none of its own.
	tr = must(Of(h[:4], Options{SlopeEach: true}))(t)
	if tr.Drift != nil || tr.Segments[0].Drift == nil {
		t.Errorf("drifts %v and %v; want one, and none", tr.Segments[0].Drift, tr.Drift)
	}
}

// Weights, order and origin of the dates play no part.
func TestOrderPlaysNoPart(t *testing.T) {
	h := yearly(1, 3, 5, 4, 8)
	a := must(Of(h, Options{}))(t)
	h[0], h[1], h[2], h[3] = h[2], h[3], h[0], h[1]
	for i := range h {
		h[i].Time = h[i].Time.In(time.FixedZone("", 3600))
	}
	b := must(Of(h, Options{}))(t)
	if a.Drift.PerYear != b.Drift.PerYear || a.Drift.U != b.Drift.U || b.Points[0].Entry != 1 {
		t.Errorf("drift %v and %v, first entry %d", a.Drift, b.Drift, b.Points[0].Entry)
	}
}

func TestUnusableHistories(t *testing.T) {
	date := Point{Time: at(0), Value: 1, U: 1}
	with := func(change func(*Point)) Point { p := date; p.Time = at(1); change(&p); return p }
	for _, c := range []struct {
		h    History
		o    Options
		want string
	}{
		{nil, Options{}, "no results"},
		{History{date, with(func(p *Point) { p.Value = math.NaN() })}, Options{}, "must be finite"},
		{History{date, with(func(p *Point) { p.U = -1 })}, Options{}, "negative"},
		{History{date, with(func(p *Point) { p.U = 0 })}, Options{}, "of all results or of none"},
		{History{date, with(func(p *Point) { p.UCommon = 1 })}, Options{}, "must be the smaller"},
		{History{date, with(func(p *Point) { p.Time = at(200) })}, Options{}, "no history of a detector"},
		{yearly(0, 1), Options{}, "no scatter in 1 result"},
		{yearly(0, 1, 1, 1), Options{}, "no scatter in 3 results"},
		{yearly(0, 1, 2), Options{}, "fit their line exactly"},
		{yearly(0, 1, 2, 3), Options{}, "fit their line exactly"},
		{yearly(1, 1), Options{Assumed: &Assumed{1, 0}}, "u above 0"},
	} {
		if _, err := Of(c.h, c.o); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want one with %q", err, c.want)
		}
	}
}

func TestAssumptionSaysWhatIsTakenForGranted(t *testing.T) {
	shared := yearly(5, 0, 1, 2)
	for i := range shared {
		shared[i].UCommon, shared[i].Standards = 3, "R1"
	}
	adjusted := yearly(1, 0, 1, 2, 3)
	adjusted[2].AsLeft = true
	for _, c := range []struct {
		h    History
		want string
	}{
		{shared, "The drift is taken as steady between adjustments. Results that name the same standards have the common part of their uncertainty as one error."},
		{adjusted, "The drift is taken as steady, and as the same before and after adjustments."},
		{yearly(1, 0, 9, -9, 0), "The results scatter 8.5 times as much as their stated uncertainties explain (p < 0.001)"},
		{yearly(0, 0, 9, -9, 0), "No uncertainties are stated: the scatter of 4 results"},
	} {
		if got := must(Of(c.h, Options{}))(t).Assumption; !strings.Contains(got, c.want) {
			t.Errorf("%q\nwant %q", got, c.want)
		}
	}
}
