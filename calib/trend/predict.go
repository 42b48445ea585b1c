package trend

import (
	"fmt"
	"math"
	"time"
)

// Prediction is what the trend expects on a date.
type Prediction struct {
	Time      time.Time
	Error     float64 // of the detector
	U         float64 // standard uncertainty of its line there
	Low, High float64 // 95 % interval of the detector's error on that date: of its line, and of its spread about the line

	// Control limits, 99.73 %: where a calibration on that date, measured as the last one
	// was, should find it.
	ControlLow, ControlHigh float64
}

// At predicts the error on a date, by the segment then in force. It is false where
// the segment has no drift and the date lies outside it: nothing is known there.
func (t *Trend) At(date time.Time) (Prediction, bool) {
	s := 0
	for s+1 < len(t.Segments) && !date.Before(t.Points[t.Segments[s+1].From].Time) {
		s++
	}
	return t.In(s, date)
}

// In predicts the error on a date by the line of a segment, within it or beyond.
func (t *Trend) In(segment int, date time.Time) (Prediction, bool) {
	s := t.Segments[segment]
	if s.Drift == nil && (date.Before(t.Points[s.From].Time) || date.After(t.Points[s.To].Time)) {
		return Prediction{}, false
	}
	x := t.lines.x(date)
	y, u := t.line(segment, x)
	p := Prediction{Time: date, Error: y, U: u}
	half := quantile(0.975, t.dof) * math.Hypot(u, t.Spread)
	p.Low, p.High = y-half, y+half

	last := t.Points[len(t.Points)-1]
	variance := t.fit.Variance(t.lines.measured(last, segment, x))
	half = quantile(inControl, t.dof) * math.Hypot(math.Sqrt(variance), t.Scale*last.independent())
	p.ControlLow, p.ControlHigh = y-half, y+half
	return p, true
}

// inControl is the normal probability of less than +3 standard deviations.
const inControl = 0.998650101968

// line is the error by the line of a segment and its standard uncertainty.
func (t *Trend) line(segment int, x float64) (y, u float64) {
	y, variance := t.fit.P[segment], t.fit.Cov.At(segment, segment)
	if k := t.lines.slope[segment]; k >= 0 {
		y += x * t.fit.P[k]
		variance += x * (2*t.fit.Cov.At(segment, k) + x*t.fit.Cov.At(k, k))
	}
	return y, math.Sqrt(variance)
}

// beyond is the probability that the error is outside ±limit, x years after the last
// result.
func (t *Trend) beyond(x, limit float64) float64 {
	y, u := t.line(len(t.Segments)-1, x)
	u = math.Hypot(u, t.Spread)
	return survival((limit-y)/u, t.dof) + survival((limit+y)/u, t.dof)
}

// Horizon is how far ahead a limit is looked for.
const Horizon = 100 * Year

// Reach says when the error meets its limit.
type Reach struct {
	Limit       float64 // ±
	Probability float64 // as asked for

	// Expected is when the predicted error meets the limit; Safe is the date up to which
	// the error is within the limit with the probability asked for, by the history: with
	// a drift towards one limit it is where predicted error plus one-sided U meets it.
	// The date of the last result: it is so already. Zero: not within Horizon.
	Expected, Safe time.Time
	Up             bool // the limit in question at Safe is the upper one
}

// Reaches finds when the error meets ±limit. It is nil where no drift is known, unless
// the last result already leaves the limit in doubt.
func (t *Trend) Reaches(limit, probability float64) *Reach {
	if !(limit > 0) || !(probability > 0 && probability < 1) {
		panic(fmt.Sprintf("trend: limit %g and probability %g; a limit is above 0, a probability above 0 and below 1", limit, probability))
	}
	r := &Reach{Limit: limit, Probability: probability}
	last := len(t.Segments) - 1
	if y, _ := t.line(last, 0); math.Abs(y) >= limit {
		r.Expected = t.lines.last
	} else if t.Drift != nil && t.Drift.PerYear != 0 {
		r.Expected = t.after((math.Copysign(limit, t.Drift.PerYear) - y) / t.Drift.PerYear)
	}
	x, found := t.leaves(limit, 1-probability)
	if !found && t.Drift == nil {
		return nil
	}
	if found {
		r.Safe = t.after(x)
		y, _ := t.line(last, x)
		r.Up = y >= 0
	}
	return r
}

// leaves finds the first x ≥ 0 where the probability to be beyond the limit is risk. It
// need not rise from the start: an error may drift away from the limit.
func (t *Trend) leaves(limit, risk float64) (x float64, found bool) {
	const step = 1. / 12
	if t.beyond(0, limit) >= risk {
		return 0, true
	}
	if t.Drift == nil {
		return 0, false
	}
	low := 0.
	for t.beyond(low+step, limit) < risk {
		if low += step; low > years(Horizon) {
			return 0, false
		}
	}
	high := low + step
	for range 40 { // to microseconds
		if middle := (low + high) / 2; t.beyond(middle, limit) < risk {
			low = middle
		} else {
			high = middle
		}
	}
	return low, true
}

// after is the date x years after the last result; zero beyond Horizon.
func (t *Trend) after(x float64) time.Time {
	if x > years(Horizon) {
		return time.Time{}
	}
	return t.lines.last.Add(time.Duration(x * float64(Year)))
}
