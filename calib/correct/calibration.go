// Package correct corrects experiment data with a calibration: it streams a CSV
// file of any size and adds to each row the corrected value, its expanded
// uncertainty and a warning where one is due.
//
// A detector of gain g and input-referred offset o displays x = g·V + o for a
// voltage V at its input. Corrected is
//
//	V = (x − o)/g
//
// with the standard uncertainty of the correction by GUM 5.2.2, equation (13),
// with (16) for the covariance; ∂V/∂o = −1/g and ∂V/∂g = −V/g:
//
//	u²(V) = (u(o)/g)² + (V·u(g)/g)² + 2·V·r(g,o)·u(g)·u(o)/g²
//
// That is what the calibration leaves unknown, and it is common to all rows of a
// file. The noise and the resolution of the reading itself are no part of it, nor
// is what happened to the detector since (but for the drift, where it is adjusted
// for). The series resistance found in a calibration belongs to the bench and
// plays no part; the bias of a magnitude in the noise is not taken off.
//
// In a file, voltages are in the convention that the detector displays
// (Calibration.ToRMS) unless a unit says its own; inside they are V rms. What
// is wrong with a file is a fault.List; what is wrong with the calibration or the
// options is an error before anything is read; a failure to read or write is what
// the reader or the writer said.
package correct

import (
	"fmt"
	"math"
	"strings"
	"time"

	"rungproof/calib/quantity"
)

// Calibration is what was in force when the readings were taken.
type Calibration struct {
	ID      string    // in the log, for messages
	Serial  string    // of the detector, for messages
	Date    time.Time // of the measurements
	Due     time.Time // the last day it is valid; zero: no limit
	Verdict string    // as result.json writes it

	Gains       []Gain
	Offset      float64 // input-referred, V rms, or its share of the range's full scale
	UOffset     float64 // standard uncertainty
	OffsetShare bool    // Offset and UOffset are shares of full scale

	K     float64 // coverage factor: U = K·u
	ToRMS float64 // what is displayed, times ToRMS, is V rms
	Drift *Drift  // nil: not known
}

// Gain is that of one range, or with Range 0 the one common to all ranges. The
// common one serves readings of which no range is stated, and those on a range
// without an entry of its own; where other ranges have entries, such a range was
// never calibrated, and its rows carry a warning.
type Gain struct {
	Range       float64 // full scale, V rms; 0: common to all
	Value       float64 // 1
	U           float64 // standard uncertainty, 1
	Correlation float64 // with the offset, −1 to 1
	From, To    float64 // smallest and largest |V| that was read, V rms; To 0: not known
}

// Drift is that of all gains together, taken as independent of their errors.
type Drift struct {
	PerYear float64 // 1/a, the year of 365.25 days
	U       float64 // standard uncertainty, 1/a
}

// check says what keeps a calibration from correcting anything.
func (c *Calibration) check() error {
	wrong := func(format string, args ...any) error {
		return fmt.Errorf("the calibration %s cannot correct readings: %s", c.name(), fmt.Sprintf(format, args...))
	}
	switch {
	case len(c.Gains) == 0:
		return wrong("it determined no gain")
	case !finite(c.Offset) || !uncertainty(c.UOffset):
		return wrong("its offset is %v with u = %v", c.Offset, c.UOffset)
	case !(c.K > 0) || !finite(c.K):
		return wrong("its coverage factor is %v", c.K)
	case !(c.ToRMS > 0) || !finite(c.ToRMS):
		return wrong("a displayed volt is %v V rms", c.ToRMS)
	case c.Drift != nil && (!finite(c.Drift.PerYear) || !uncertainty(c.Drift.U)):
		return wrong("the drift is %v a year with u = %v", c.Drift.PerYear, c.Drift.U)
	}
	for i, g := range c.Gains {
		of := "its gain"
		if g.Range != 0 {
			of = "the gain on its range " + c.shown(g.Range)
		}
		switch {
		case !(g.Range >= 0) || !finite(g.Range):
			return wrong("it has a range of %v V", g.Range)
		case g.Value == 0 || !finite(g.Value) || !uncertainty(g.U):
			return wrong("%s is %v with u = %v", of, g.Value, g.U)
		case !(math.Abs(g.Correlation) <= 1):
			return wrong("%s has the correlation %v with the offset", of, g.Correlation)
		case !(0 <= g.From && g.From <= g.To) || !finite(g.To):
			return wrong("%s was read from %v V to %v V", of, g.From, g.To)
		}
		for _, before := range c.Gains[:i] {
			if equal(before.Range, g.Range) {
				return wrong("%s is there twice", of)
			}
		}
	}
	return nil
}

// name is the calibration in messages: "17 of 2026-03-12".
func (c *Calibration) name() string { return c.ID + " of " + c.Date.Format(time.DateOnly) }

// shown is a voltage as the detector displays it.
func (c *Calibration) shown(rms float64) string { return quantity.Plain(rms/c.ToRMS, "V") }

// ranges lists those calibrated.
func (c *Calibration) ranges() string {
	list := []string{}
	for _, g := range c.Gains {
		if g.Range != 0 {
			list = append(list, c.shown(g.Range))
		}
	}
	return strings.Join(list, ", ")
}

// overdue tells whether a date is later than the last day of the calibration.
func (c *Calibration) overdue(date time.Time) bool {
	return !date.IsZero() && !c.Due.IsZero() && !date.Before(c.Due.AddDate(0, 0, 1))
}

// failed tells whether the verdict is a fail, or a conditional one.
func (c *Calibration) failed() bool { return strings.HasSuffix(c.Verdict, "fail") }

func finite(x float64) bool { return !math.IsInf(x, 0) && !math.IsNaN(x) }

func uncertainty(u float64) bool { return u >= 0 && finite(u) }

// equal tells whether two ranges are the same but for rounding.
func equal(a, b float64) bool { return math.Abs(a-b) <= 1e-9*max(math.Abs(a), math.Abs(b)) }
