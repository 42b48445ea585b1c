package trend

import (
	"fmt"
	"time"
)

// Basis is what decides an interval.
type Basis string

// The bases, in words.
const (
	ByMaximum Basis = "maximum"
	ByDrift   Basis = "drift"
	ByRecord  Basis = "record"
)

// Advice is an interval to the next calibration.
type Advice struct {
	Interval time.Duration // from the last result, whole days, rounded down; 0: due at once
	Due      time.Time
	Decides  Basis
	Text     string // what decides and how, in sentences

	Trend  *Trend
	Reach  *Reach // nil: no drift is known
	Record Record
}

const day = 24 * time.Hour

// Interval advises when to calibrate next, so that the error is still within ±limit
// then with the target reliability (0.95 is common), and never after more than maximum.
// The shortest of three decides:
//
//   - the maximum;
//   - the drift: the date up to which the predicted error is within the limit with that
//     probability: the control chart method of ILAC-G24/OIML D 10;
//   - the record of results found within the limit or beyond: the interval test with
//     the exponential model of reliability of NCSLI RP-1.
func Interval(h History, o Options, limit, target float64, maximum time.Duration) (*Advice, error) {
	switch {
	case !(limit > 0) || !finite(limit):
		return nil, fmt.Errorf("the limit of the error is %g; it must be positive and finite", limit)
	case !(target > 0.5 && target < 1):
		return nil, fmt.Errorf("the target reliability is %g; it must be above 0.5 and below 1, as 0.95", target)
	case maximum < day:
		return nil, fmt.Errorf("the maximum interval is %v; it must be a day at least", maximum)
	}
	t, err := Of(h, o)
	if err != nil {
		return nil, err
	}
	a := &Advice{Interval: maximum, Decides: ByMaximum, Trend: t, Reach: t.Reaches(limit, target),
		Record: recordOf(t.Points, limit, target)}
	last := t.lines.last
	if r := a.Reach; r != nil && !r.Safe.IsZero() {
		a.shorten(r.Safe.Sub(last), ByDrift)
	}
	if a.Record.Interval > 0 {
		a.shorten(a.Record.Interval, ByRecord)
	}
	a.Interval = a.Interval.Truncate(day)
	a.Due = last.Add(a.Interval)
	a.Text = a.explain(target)
	return a, nil
}

func (a *Advice) shorten(interval time.Duration, by Basis) {
	if interval < a.Interval {
		a.Interval, a.Decides = interval, by
	}
}
