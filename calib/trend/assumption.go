package trend

import (
	"fmt"
	"strings"
)

// assumption says what had to be taken for granted.
func (t *Trend) assumption(o Options) string {
	var said []string
	say := func(format string, args ...any) { said = append(said, fmt.Sprintf(format, args...)) }
	n := count(len(t.Points), "result")
	switch d := t.Drift; {
	case d == nil && len(t.Points) == 1:
		say("One result tells no drift.")
	case d == nil && o.SlopeEach:
		say("The results since the last adjustment are on one date: they tell no drift.")
	case d == nil:
		say("No two results on different dates lie between the same adjustments: the history tells no drift.")
	case d.Assumed:
		say("The drift is assumed, not found: no two results on different dates lie between the same adjustments.")
	case t.DOF == 0:
		say("%s fix the lines and leave nothing to test them with: the drift is taken as steady and the stated uncertainties as right and normal.", n)
	case o.SlopeEach || len(t.Segments) == 1:
		say("The drift is taken as steady between adjustments.")
	default:
		say("The drift is taken as steady, and as the same before and after adjustments.")
	}
	switch {
	case t.Unstated:
		say("No uncertainties are stated: the scatter of %s about the line stands for all of it, and an error common to them is not counted.", n)
	case t.Scale > 1:
		say("The results scatter %.2g times as much as their stated uncertainties explain (%s): the scatter found counts, and its excess as the detector's own.",
			t.Scale, chance(t.P))
	}
	if t.sharing() {
		say("Results that name the same standards have the common part of their uncertainty as one error.")
	}
	return strings.Join(said, " ")
}

// sharing tells whether two results have an error in common.
func (t *Trend) sharing() bool {
	seen := map[string]bool{}
	for _, p := range t.Points {
		if p.common() > 0 && seen[p.Standards] {
			return true
		}
		seen[p.Standards] = seen[p.Standards] || p.common() > 0
	}
	return false
}

// chance writes a probability of chance.
func chance(p float64) string {
	if p < 0.001 {
		return "p < 0.001"
	}
	return fmt.Sprintf("p = %.2g", p)
}

// count writes a number of things.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
