package trend

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"
)

// found is a yearly history, adjusted to 0 whenever it is found beyond ±100.
func found(values ...float64) History {
	h := yearly(1, values...)
	for _, p := range h {
		if math.Abs(p.Value) > 100 {
			p.Value, p.AsLeft = 0, true
			h = append(h, p)
		}
	}
	return h
}

// Of eight yearly intervals: binomial tables give the probability of one or more beyond at
// 5 % each as 0.3366, of three or more as 0.0058. Three in 5 + 3/2 years within are λ = 0.4615
// a year, so 95 % for −ln 0.95/λ = 0.11113 years, 40 d.
func TestRecord(t *testing.T) {
	for _, c := range []struct {
		h      History
		beyond int
		p      float64
		days   time.Duration
	}{
		{found(0, 1, 2, 1, 0, 1, 2, 1, 0), 0, 1, 0},
		{found(0, 1, 2, 120, 0, 1, 2, 1, 0), 1, 0.3366, 0},
		{found(0, 1, 2, 120, 0, -130, 2, 1, 140), 3, 0.0058, 40},
	} {
		r := recordOf(must(c.h.ordered())(t), 100, 0.95)
		if r.Intervals != 8 || r.Beyond != c.beyond || r.Interval/day != c.days {
			t.Errorf("%d of %d, %v; want %d of 8, %d d", r.Beyond, r.Intervals, r.Interval, c.beyond, c.days)
		}
		near(t, "p", r.P, c.p, 0.00005)
	}
}

// An interval that began beyond the limit says nothing of how long the limit holds.
func TestRecordLeavesOutWhatBeganBeyond(t *testing.T) {
	r := recordOf(must(yearly(1, 0, 120, 120, 0, 1).ordered())(t), 100, 0.95)
	if r.Intervals != 2 || r.Beyond != 1 || r.Held != Year || r.Failed != Year {
		t.Errorf("%+v; want 2 intervals of a year, 1 beyond", r)
	}
}

func TestWhatDecides(t *testing.T) {
	steady := yearly(1, 0, 1, 0, 1, 0, 1)
	drifting := yearly(1, 0, 20, 40, 60, 80)
	// Beyond after one year, and again; steady since, by a line of its own. Binomial tables:
	// two or more of five at 5 % each 0.0226. λ = 2/(3 + 2/2) a year, 0.10259 years, 37 d.
	improved := found(0, 120, 130, 0, 1, 0)
	for _, c := range []struct {
		name    string
		h       History
		o       Options
		target  float64
		decides Basis
		text    string
	}{
		{"steady", steady, Options{}, 0.95, ByMaximum, "730 d, the maximum."},
		{"drifting", drifting, Options{}, 0.95, ByDrift, "by the drift (control chart method, ILAC-G24/OIML D 10). By the drift the error is within its limit with 95 % up to"},
		{"one result", yearly(1, 5), Options{}, 0.95, ByMaximum, "No drift is known that would shorten it. The record has no interval"},
		{"one result and a drift assumed", yearly(1, 5), Options{Assumed: &Assumed{PerYear: 90, U: 10}}, 0.95, ByDrift, "The drift is assumed, not found"},
		{"beyond", yearly(1, 90, 105), Options{}, 0.95, ByDrift, "0 d, by the drift"},
		{"one result, beyond", yearly(1, 105), Options{}, 0.95, ByDrift, "beyond its limit with a probability of 100 % already"},
		{"record", improved, Options{SlopeEach: true}, 0.95, ByRecord, "37 d, by the record (interval test and exponential model, NCSLI RP-1). 2 of 5 intervals ended beyond the limit, more than chance makes of a reliability of 95 % (p = 0.023)"},
		{"chance", found(0, 1, 2, 120, 0, 1, 2, 1, 0), Options{SlopeEach: true}, 0.95, ByMaximum, "1 of 8 intervals ended beyond the limit, no more than chance makes of a reliability of 95 % (p = 0.34)."},
	} {
		t.Run(c.name, func(t *testing.T) {
			a := must(Interval(c.h, c.o, 100, c.target, 730*day))(t)
			if a.Decides != c.decides || !strings.Contains(a.Text, c.text) {
				t.Errorf("%s decides: %s\nwant %s: … %s …", a.Decides, a.Text, c.decides, c.text)
			}
			if last := a.Trend.lines.last; !a.Due.Equal(last.Add(a.Interval)) || a.Interval%day != 0 {
				t.Errorf("due %v after %v from %v", a.Due, a.Interval, last)
			}
		})
	}
}

func TestUnusableInterval(t *testing.T) {
	h := yearly(1, 0, 1)
	for _, c := range []struct {
		h             History
		limit, target float64
		maximum       time.Duration
		want          string
	}{
		{h, 0, 0.95, Year, "limit"}, {h, math.Inf(1), 0.95, Year, "limit"},
		{h, 1, 95, Year, "as 0.95"}, {h, 1, 0.95, time.Hour, "a day at least"}, {nil, 1, 0.95, Year, "no results"},
	} {
		if _, err := Interval(c.h, Options{}, c.limit, c.target, c.maximum); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want one with %q", err, c.want)
		}
	}
}

// Whatever the history, the interval is from 0 to the maximum.
func TestNeverLongerThanMaximum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		maximum := time.Duration(rapid.IntRange(1, 3000).Draw(t, "days")) * day
		a, err := Interval(drawHistory(t), Options{SlopeEach: rapid.Bool().Draw(t, "each")},
			rapid.Float64Range(0.1, 1000).Draw(t, "limit"), rapid.Float64Range(0.6, 0.99).Draw(t, "target"), maximum)
		if err != nil {
			t.Fatal(err)
		}
		if a.Interval < 0 || a.Interval > maximum || a.Text == "" {
			t.Fatalf("%v of at most %v: %s", a.Interval, maximum, a.Text)
		}
	})
}

func ExampleInterval() {
	var history History
	for i, v := range []float64{0, 110, 190, 310, 420} { // ppm
		history = append(history, Point{Time: time.Date(2020+i, 3, 12, 0, 0, 0, 0, time.UTC), Value: v, U: 40})
	}
	a, err := Interval(history, Options{}, 1000, 0.95, 10*365*day)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.0f a year, u %.0f\n%s\n", a.Trend.Drift.PerYear, a.Trend.Drift.U, a.Text)
	// Output:
	// 104 a year, u 13
	// 1583 d, by the drift (control chart method, ILAC-G24/OIML D 10). By the drift the error is within its limit with 95 % up to 2028-07-12. 0 of 4 intervals ended beyond the limit. The drift is taken as steady between adjustments.
}
