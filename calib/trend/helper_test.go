package trend

import (
	"math"
	"testing"
	"time"
)

// origin is 0 on the axis of years of the published examples.
var origin = time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)

func at(x float64) time.Time { return origin.Add(time.Duration(x * float64(Year))) }

func inYears(t time.Time) float64 { return years(t.Sub(origin)) }

// near checks got to within tolerance of want.
func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tolerance)
	}
}

// relative checks to a relative 1e-9: double arithmetic, well conditioned.
func relative(t *testing.T, what string, got, want float64) {
	t.Helper()
	near(t, what, got, want, 1e-9*math.Abs(want))
}

func must[T any](v T, err error) func(*testing.T) T {
	return func(t *testing.T) T {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
}

// yearly is a result a year from origin on.
func yearly(u float64, values ...float64) History {
	var h History
	for i, v := range values {
		h = append(h, Point{Entry: int64(i + 1), Time: at(float64(i)), Value: v, U: u})
	}
	return h
}
