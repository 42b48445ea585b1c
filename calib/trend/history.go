// Package trend is the mathematics of a detector's history: its drift, where the drift
// leads, whether results agree with one another and with what was expected of them,
// and after what interval the next calibration is due.
//
// A history is results of one parameter, each an error (result less reference) with its
// standard uncertainty, all in one unit of the caller's choice; drifts are in that
// unit a year of 365.25 d. Limits are symmetric about an error of 0.
//
// The detector's error is taken as a straight line of time between adjustments, and what
// is drawn from it is by generalised least squares (GUM, JCGM 100:2008, 5.2): results that
// name the same standards share one common error. Where a result rests on something that
// could not be tested, Trend.Assumption says so. A history that cannot be used is an error;
// a limit or a probability that makes no sense is a programmer's mistake, and panics.
package trend

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
	"time"
)

// Year is the Julian year in which drifts are stated.
const Year = 8766 * time.Hour

// longest is the longest history; dates further apart are a slip of the pen, and a
// time.Duration ends at 292 years.
const longest = 150 * Year

// Point is the result of one calibration for one parameter.
type Point struct {
	Entry int64     // the caller's number for it; carried along
	Time  time.Time // of the measurement
	Value float64   // the error: result less reference
	U     float64   // its standard uncertainty; 0 for all points: not stated, to be found from their scatter

	// UCommon is the part of U that all results with the same Standards have in common,
	// 0 ≤ UCommon < U, one error for all of them: U² = UCommon² + independent². With
	// Standards "" nothing is known to be shared.
	UCommon   float64
	Standards string

	AsLeft bool // after an adjustment; else as found, or neither stated
}

// independent is the part of U that a result shares with no other.
func (p Point) independent() float64 {
	c := p.common()
	return math.Sqrt((p.U - c) * (p.U + c))
}

func (p Point) common() float64 {
	if p.Standards == "" {
		return 0
	}
	return p.UCommon
}

// History is results of one parameter of one detector, in any order.
type History []Point

// ordered checks the points and sorts them by date; on one date what is as found comes
// before what is as left.
func (h History) ordered() ([]Point, error) {
	if len(h) == 0 {
		return nil, errors.New("no results: a trend needs one at least")
	}
	points := slices.Clone(h)
	slices.SortStableFunc(points, func(a, b Point) int {
		return cmp.Or(a.Time.Compare(b.Time), cmp.Compare(rank(a), rank(b)))
	})
	unstated := points[0].U == 0
	for _, p := range points {
		name := p.Time.Format(time.DateOnly)
		switch {
		case !finite(p.Value) || !finite(p.U) || !finite(p.UCommon):
			return nil, fmt.Errorf("the result of %s is %g, u %g, of it common %g; all must be finite", name, p.Value, p.U, p.UCommon)
		case p.U < 0 || p.UCommon < 0:
			return nil, fmt.Errorf("the result of %s has u %g, of it common %g; neither can be negative", name, p.U, p.UCommon)
		case (p.U == 0) != unstated:
			return nil, fmt.Errorf("the result of %s has u %g, and that of %s has u %g; state the uncertainty of all results or of none",
				points[0].Time.Format(time.DateOnly), points[0].U, name, p.U)
		case p.UCommon > 0 && p.UCommon >= p.U:
			return nil, fmt.Errorf("the result of %s has u %g, of it common %g; the common part must be the smaller", name, p.U, p.UCommon)
		}
	}
	if first, last := points[0].Time, points[len(points)-1].Time; last.Sub(first) > longest {
		return nil, fmt.Errorf("the results reach from %s to %s; more than %.0f years are no history of a detector",
			first.Format(time.DateOnly), last.Format(time.DateOnly), years(longest))
	}
	return points, nil
}

func rank(p Point) int {
	if p.AsLeft {
		return 1
	}
	return 0
}

// segments numbers the stretches between adjustments: each result as left begins one,
// unless it repeats another as left on the same date.
func segments(points []Point) []int {
	segment := make([]int, len(points))
	for i := 1; i < len(points); i++ {
		p, before := points[i], points[i-1]
		segment[i] = segment[i-1]
		if p.AsLeft && !(before.AsLeft && before.Time.Equal(p.Time)) {
			segment[i]++
		}
	}
	return segment
}

func years(d time.Duration) float64 { return d.Hours() / Year.Hours() }

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }
