package trend

import (
	"math"
	"strings"
	"testing"
)

// One result has no drift; an assumed one is used, and said to be so.
func TestOneResult(t *testing.T) {
	h := yearly(3, 10)
	tr := must(Of(h, Options{}))(t)
	if tr.Drift != nil || tr.DOF != 0 || tr.P != 1 || tr.Assumption != "One result tells no drift." {
		t.Errorf("drift %v, ν %d, p %g, assumption %q", tr.Drift, tr.DOF, tr.P, tr.Assumption)
	}
	if p, ok := tr.At(at(0)); !ok || p.Error != 10 || math.Abs(p.U-3) > 1e-12 {
		t.Errorf("on its date: %v, %v; want 10 with u 3", p, ok)
	}
	if _, ok := tr.At(at(0.1)); ok {
		t.Error("a prediction from one result")
	}
	if r := tr.Reaches(100, 0.95); r != nil {
		t.Errorf("%+v from one result", r)
	}

	tr = must(Of(h, Options{Assumed: &Assumed{PerYear: 2, U: 1}}))(t)
	if d := tr.Drift; !d.Assumed || d.P != 1 || d.Significant() || !strings.Contains(tr.Assumption, "assumed, not found") {
		t.Errorf("drift %+v, %q", d, tr.Assumption)
	}
	p, _ := tr.At(at(4)) // u: 3 of the result, 4·1 of the drift
	relative(t, "error after 4 years", p.Error, 18)
	relative(t, "its u", p.U, 5)
}

// Where the history tells a drift, the assumed one plays no part.
func TestAssumedGivesWay(t *testing.T) {
	tr := must(Of(yearly(1, 0, 5), Options{Assumed: &Assumed{PerYear: 100, U: 1e-6}}))(t)
	relative(t, "drift", tr.Drift.PerYear, 5)
	if tr.Drift.Assumed {
		t.Error("assumed")
	}
}

func TestTwoResults(t *testing.T) {
	tr := must(Of(yearly(3, 10, 14), Options{}))(t)
	relative(t, "drift", tr.Drift.PerYear, 4)
	relative(t, "u", tr.Drift.U, 3*math.Sqrt2)
	near(t, "k", (tr.Drift.High-4)/tr.Drift.U, 1.959964, 0.0000005) // normal, JCGM 100:2008, table G.2
	if tr.DOF != 0 || !strings.HasPrefix(tr.Assumption, "2 results fix the lines and leave nothing to test them with") {
		t.Errorf("ν %d, %q", tr.DOF, tr.Assumption)
	}
}

// Two results on one date tell of scatter, and of no drift.
func TestSameDateTwice(t *testing.T) {
	h := yearly(1, 0, 1)
	h[1].Time = h[0].Time
	tr := must(Of(h, Options{}))(t)
	if tr.Drift != nil || tr.DOF != 1 {
		t.Errorf("drift %v, ν %d; want none, 1", tr.Drift, tr.DOF)
	}
	near(t, "χ²", tr.ChiSquared, 0.5, 1e-12) // by hand: 2·0.5²

	// A third, a year later: x about its mean −1/3, −1/3, 2/3.
	h = append(h, Point{Time: at(1), Value: 2, U: 1})
	tr = must(Of(h, Options{}))(t)
	relative(t, "drift", tr.Drift.PerYear, 1.5)
	relative(t, "u", tr.Drift.U, math.Sqrt(1.5))

	// As left twice on one date is one adjustment.
	h[1].AsLeft, h[0].AsLeft = true, true
	if tr = must(Of(h, Options{}))(t); len(tr.Segments) != 1 {
		t.Errorf("%d segments, want 1", len(tr.Segments))
	}
}

// As left every year and never found: nothing between the same adjustments.
func TestOnlyAsLeft(t *testing.T) {
	h := yearly(1, 1, 2, 3)
	for i := range h {
		h[i].AsLeft = true
	}
	tr := must(Of(h, Options{}))(t)
	if tr.Drift != nil || len(tr.Segments) != 3 || !strings.Contains(tr.Assumption, "No two results") {
		t.Errorf("drift %v, %d segments, %q", tr.Drift, len(tr.Segments), tr.Assumption)
	}
	if checks := must(Control(h, Options{}))(t); len(checks) != 0 {
		t.Errorf("%d checks of what nothing predicts", len(checks))
	}
}
