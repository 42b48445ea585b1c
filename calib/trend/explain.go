package trend

import (
	"fmt"
	"strings"
	"time"
)

// explain says what decides the interval, and then what the others would have had it be.
func (a *Advice) explain(target float64) string {
	drift, record := a.explainDrift(target), a.explainRecord(target)
	days := fmt.Sprintf("%d d", a.Interval/day)
	var said []string
	switch a.Decides {
	case ByDrift:
		said = []string{days + ", by the drift (control chart method, ILAC-G24/OIML D 10).", drift, record}
	case ByRecord:
		said = []string{days + ", by the record (interval test and exponential model, NCSLI RP-1).", record, drift}
	default:
		said = []string{days + ", the maximum.", drift, record}
	}
	return strings.Join(append(said, a.Trend.Assumption), " ")
}

func (a *Advice) explainDrift(target float64) string {
	last := a.Trend.lines.last
	switch r := a.Reach; {
	case r == nil:
		return "No drift is known that would shorten it."
	case r.Safe.Equal(last):
		return fmt.Sprintf("The last results leave the error beyond its limit with a probability of %.3g %% already.",
			100*a.Trend.beyond(0, r.Limit))
	case r.Safe.IsZero():
		return fmt.Sprintf("By the drift the error stays within its limit with %s for more than %.0f years.", percent(target), years(Horizon))
	default:
		return fmt.Sprintf("By the drift the error is within its limit with %s up to %s.", percent(target), r.Safe.Format(time.DateOnly))
	}
}

func (a *Advice) explainRecord(target float64) string {
	r := a.Record
	switch found := fmt.Sprintf("%d of %s ended beyond the limit", r.Beyond, count(r.Intervals, "interval")); {
	case r.Intervals == 0:
		return "The record has no interval that began within the limit."
	case r.Beyond == 0:
		return found + "."
	case r.Interval == 0:
		return fmt.Sprintf("%s, no more than chance makes of a reliability of %s (%s).", found, percent(target), chance(r.P))
	default:
		return fmt.Sprintf("%s, more than chance makes of a reliability of %s (%s): by the exponential model that is met for %d d.",
			found, percent(target), chance(r.P), r.Interval/day)
	}
}

func percent(p float64) string { return fmt.Sprintf("%.4g %%", 100*p) }
