package report

import (
	"fmt"
	"math"
	"strings"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// decided says in a sentence or two what the verdict comes from.
func decided(e *calib.Evaluation) string {
	r := e.Result
	if r.Verdict == decision.NotJudged {
		return "The plan states no limit that holds for these steps, so nothing is judged."
	}
	if at, count := pressing(r); at != nil {
		return typeset(bySteps(e, at, count))
	}
	for _, g := range r.ByRange.Gain {
		if g.Outcome == r.Verdict {
			return typeset(fmt.Sprintf("The gain of the %s range decides: it is off by %s where the limit is %s; no step is worse.",
				displayed(g.Range/e.Plan.Detector.ToRMS), gainDeviation(g.Estimate), quantity.Share(g.Limit, 2)))
		}
	}
	return fmt.Sprintf("The steps that were read are good, but %d of %d have no reading; until they are taken the verdict is a conditional pass at best.",
		len(r.Missing), len(e.Plan.Steps))
}

// pressing is the step that presses most on its limit of those with the verdict's
// outcome, and how many there are; nil where there is none.
func pressing(r *calib.Result) (at *calib.StepResult, count int) {
	for i := range r.Steps {
		if s := &r.Steps[i]; s.Outcome == r.Verdict && s.Outcome != decision.NotJudged {
			count++
			if at == nil || shareOfLimit(s) > shareOfLimit(at) {
				at = s
			}
		}
	}
	return at, count
}

// shareOfLimit is the share of its limit that a step's error takes, or the phase where that takes more.
func shareOfLimit(s *calib.StepResult) float64 {
	x := math.Abs(float64(s.Error)) / float64(s.Limit)
	if y := math.Abs(float64(s.PhaseError)) / float64(s.PhaseLimit); y > x || math.IsNaN(x) {
		return y
	}
	return x
}

// bySteps says how many steps have the verdict's outcome, which of them presses most, and why.
func bySteps(e *calib.Evaluation, at *calib.StepResult, count int) string {
	say := placeOf(e.Plan, at.Outcome)
	if why := whyConditional(e, at); why != "" {
		say = why
	}
	n := len(e.Result.Steps)
	most := "nearest to"
	if at.Outcome == decision.Fail || at.Outcome == decision.ConditionalFail {
		most = "farthest beyond"
	}
	which := fmt.Sprintf("%d of %d steps come out as %s. The one %s its limit is", count, n, at.Outcome, most)
	switch {
	case n == 1:
		which = "The only step is"
	case count == n && at.Outcome == decision.Pass:
		which = fmt.Sprintf("All %d steps pass. The one nearest to its limit is", n)
	case count == 1:
		which = fmt.Sprintf("One of %d steps decides:", n)
	}
	say = fmt.Sprintf("%s step %s, %s: %s.", which, at.ID, errorAtLimit(at), say)
	if m := len(e.Result.Missing); m > 0 {
		say += fmt.Sprintf(" Of the plan's %d steps, %d have no reading.", len(e.Plan.Steps), m)
	}
	return say
}

// placeOf says where an error lies that has an outcome by itself.
func placeOf(p *plan.Plan, o decision.Outcome) string {
	say := map[decision.Outcome]string{decision.Pass: "with the whole guard band to spare", decision.ConditionalPass: "but by less than the guard band",
		decision.ConditionalFail: "but by less than the guard band", decision.Fail: "by more than the guard band"}
	if p.Decision.Rule == "risk" {
		say = map[decision.Outcome]string{decision.Pass: "with no more risk than the plan allows", decision.ConditionalPass: "but with more risk of being beyond than the plan allows",
			decision.ConditionalFail: "but it may well be within", decision.Fail: "with little risk of being within"}
	}
	side := "within its limit"
	if o == decision.ConditionalFail || o == decision.Fail {
		side = "beyond its limit"
	}
	if simpleRule(p) {
		return side
	}
	return strings.Replace(side+" "+say[o], " but", ", but", 1)
}

// errorAtLimit is a step's error, or its phase where that is nearer to its limit.
func errorAtLimit(s *calib.StepResult) string {
	if math.Abs(float64(s.PhaseError))/float64(s.PhaseLimit) == shareOfLimit(s) {
		return fmt.Sprintf("with a phase error of %s where the limit is %s", angleOf(float64(s.PhaseError), float64(s.UPhase)), degrees(float64(s.PhaseLimit)))
	}
	return fmt.Sprintf("with an error of %s where the limit is %s", quantity.PlusMinus(float64(s.Error), float64(s.U), "V"), quantity.Format(float64(s.Limit), 3, "V"))
}

// whyConditional is why a step cannot be better than conditional, whatever its error.
func whyConditional(e *calib.Evaluation, s *calib.StepResult) string {
	conditional := s.Outcome == decision.ConditionalPass || s.Outcome == decision.ConditionalFail
	switch {
	case !conditional:
		return ""
	case !e.Result.Fit.Separable || e.Result.Condition != nil:
		return "these readings cannot tell an offset of the detector from a series resistance of the bench, so no step can be better than a conditional pass"
	case s.Beyond:
		return "a reading beyond full scale passes conditionally at best"
	case len(s.Flags) > 0:
		return "a flagged reading passes conditionally at best"
	}
	return ""
}

// angleOf is an angle with its expanded uncertainty, in degrees.
func angleOf(x, U float64) string {
	return sizeOf(calib.Estimate{Value: x, U: U, K: 1, Unit: "rad", Known: true})
}
