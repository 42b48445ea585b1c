package diagnose

import (
	"fmt"
	"sort"

	"rungproof/calib"
)

// lists are the steps whose readings cannot count in full.
func lists(e *calib.Evaluation) []calib.Finding {
	var beyond, flagged []string
	for _, s := range e.Result.Steps {
		if s.Beyond {
			beyond = append(beyond, s.ID)
		}
		if len(s.Flags) > 0 {
			flagged = append(flagged, s.ID+" ("+s.Flags[0]+")")
		}
	}
	var out []calib.Finding
	if len(beyond) > 0 {
		out = one(BeyondScale, "read them again on a larger range.", "readings beyond full scale: %s. These steps pass conditionally at best.", calib.List(beyond))
	}
	if len(flagged) > 0 {
		out = append(out, one(Flagged, "read them again.", "flagged readings: %s. They are left out where the step has others; these steps pass conditionally at best.", calib.List(flagged))...)
	}
	if m := e.Result.Missing; len(m) > 0 {
		out = append(out, one(NoReading, "take them; until then the verdict is a conditional pass at best.", "%d of %d steps have no reading: %s.", len(m), len(e.Plan.Steps), calib.List(m))...)
	}
	return out
}

// unnamed are the standards that the plan lists and no quantity comes from.
func unnamed(e *calib.Evaluation) []calib.Finding {
	used := map[string]bool{}
	for _, s := range e.StandardsUsed() {
		used[s.Name] = true
	}
	var idle []string
	for _, s := range e.Plan.Standards {
		if !used[s.Name] {
			idle = append(idle, s.Name)
		}
	}
	if len(idle) == 0 {
		return nil
	}
	return one(StandardIdle, `name it where a value comes from it: standard = "…" in the quantity's table.`,
		"the plan lists %s, but no quantity names it: the result is not traced to it.", calib.List(idle))
}

// lapsed are the standards used that were past due on the day of the measurements.
func lapsed(e *calib.Evaluation) []calib.Finding {
	var out []calib.Finding
	date := e.Plan.Date
	for _, s := range e.StandardsUsed() {
		if !s.Due.IsZero() && !date.IsZero() && s.Due.Before(date) {
			out = append(out, one(StandardLapsed, "have it recalibrated, and judge again with its new certificate.",
				"the standard %q (certificate %s) was due for recalibration on %s, before the measurements of %s: the result's traceability is in doubt.",
				s.Name, orNone(s.Certificate), s.Due.Format("2006-01-02"), date.Format("2006-01-02"))...)
		}
	}
	return out
}

func orNone(s string) string {
	if s == "" {
		return "not stated"
	}
	return s
}

// probability is a p value for people: two digits, or a bound.
func probability(p float64) string {
	if p < 1e-6 {
		return "p < 0.000001"
	}
	return fmt.Sprintf("p = %.2g", p)
}

// weightedMedian is the median of the known gains, each weighted by the inverse
// of its random uncertainty's square.
func weightedMedian(gains []calib.KeyGain) float64 {
	var known []calib.KeyGain
	total := 0.0
	for _, g := range gains {
		if g.Known {
			known = append(known, g)
			total += 1 / (g.URandom * g.URandom)
		}
	}
	sort.Slice(known, func(i, j int) bool { return known[i].Value < known[j].Value })
	sum := 0.0
	for _, g := range known {
		sum += 1 / (g.URandom * g.URandom)
		if sum >= total/2 {
			return g.Value
		}
	}
	return 1
}
