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

// guardBand is the guard band of the guarded rule: "w = U", "w = 0.83·U".
func guardBand(p *plan.Plan) string {
	if g := p.Decision.Guard; g != 1 {
		return fmt.Sprintf("w = %.3g·U", g)
	}
	return "w = U"
}

// simpleRule tells whether a step passes up to its limit, whatever its uncertainty.
func simpleRule(p *plan.Plan) bool { return p.Decision.Rule != "risk" && p.Decision.Guard == 0 }

// ruleName is the plan's rule of decision in a few words.
func ruleName(p *plan.Plan) string {
	switch {
	case p.Decision.Rule == "risk":
		return fmt.Sprintf("a risk of false acceptance of %.3g %% at most", 100*p.Decision.MaxFalseAccept)
	case simpleRule(p):
		return "simple acceptance"
	}
	return "guarded acceptance, " + guardBand(p)
}

// decisionRule is the plan's rule of decision in full.
func decisionRule(p *plan.Plan) string {
	const limits = "The limit is a share of the value applied plus a share of full scale, as the plan states them. "
	const verdict = " The verdict is the worst outcome of all steps and of the gains that are limited."
	switch d := &p.Decision; {
	case d.Rule == "risk":
		return limits + fmt.Sprintf("Acceptance by risk: pass where, by this measurement, the true error is beyond the limit with a probability of %.3g %% at most (the specific consumer's risk of JCGM 106, clause 9); "+
			"conditional pass up to the limit; beyond it conditional fail as long as a rejection is wrong with a probability of %.3g %% or more, else fail.", 100*d.MaxFalseAccept, 100*d.MaxFalseAccept) + verdict
	case simpleRule(p):
		return limits + "Simple acceptance: a step passes where its error is within the limit and fails beyond it; the uncertainty is not taken off. " +
			"An error at its limit has an even chance of being beyond." + verdict
	default:
		return limits + fmt.Sprintf("Guarded acceptance with %s: pass where |error| ≤ limit − w, conditional pass up to the limit, conditional fail up to limit + w, fail beyond. "+
			"A pass is then wrong with a probability of at most %.2g %%.", guardBand(p), 100*chanceOfWrongPass(d.Guard, d.Coverage)) + verdict
	}
}

// chanceOfWrongPass is the probability that the true error is outside of a limit that the
// measured one keeps clear of by g·U, normally distributed, one-sided
// (ILAC-G8:09/2019, its table of guard bands): U is √2·erf⁻¹(coverage) standard
// uncertainties.
func chanceOfWrongPass(g, coverage float64) float64 { return math.Erfc(g*math.Erfinv(coverage)) / 2 }

// beside tells whether something beside a step's error counts against it: a phase,
// a flag, full scale exceeded, or an offset that cannot be told from a series resistance.
func beside(s *calib.StepResult) bool {
	switch e := math.Abs(float64(s.Error)); {
	case e <= float64(s.Acceptance):
		return s.Outcome > decision.Pass
	case e <= float64(s.Limit):
		return s.Outcome > decision.ConditionalPass
	}
	return false
}

// riskOf is the probability that an outcome is wrong; nothing where the error
// would be accepted and something beside it is not.
func riskOf(s *calib.StepResult) string {
	if beside(s) && s.Outcome > decision.ConditionalPass {
		return ""
	}
	return probability(float64(s.Risk))
}

// probability is a probability in percent, closer where it is nearly 0 or 1.
func probability(p float64) string {
	switch {
	case math.IsNaN(p):
		return ""
	case p < 0.0001:
		return "under 0.01 %"
	case p > 0.9999:
		return "over 99.99 %"
	case p < 0.01 || p > 0.99:
		return fmt.Sprintf("%.2f %%", 100*p)
	}
	return fmt.Sprintf("%.1f %%", 100*p)
}

// acceptedUpTo is a step's acceptance limit.
func acceptedUpTo(s *calib.StepResult) string {
	switch a := float64(s.Acceptance); {
	case math.IsNaN(float64(s.Limit)):
		return ""
	case math.IsNaN(a):
		return "none can pass"
	default:
		return quantity.Format(a, 3, "V")
	}
}

// capability is the limit over U.
func capability(x float64) string {
	switch {
	case math.IsNaN(x):
		return ""
	case x > 1000:
		return "over 1000"
	}
	return quantity.Format(x, 2, "1")
}

// deciding is the rule, and how the step that presses most on its limit stands by it.
func deciding(b *strings.Builder, e *calib.Evaluation) {
	if at, _ := pressing(e.Result); at != nil {
		say := ruleName(e.Plan) + "."
		if !math.IsNaN(float64(at.Limit)) {
			accepted := "accepted up to " + acceptedUpTo(at)
			if math.IsNaN(float64(at.Acceptance)) {
				accepted = "no error accepted"
			}
			say += fmt.Sprintf(" At %s: %s, conformity %s", tail(at.ID, 20), accepted, probability(float64(at.Conformity)))
			if risk := riskOf(at); risk != "" {
				say += ", risk of the outcome " + risk
			}
			say += "."
		}
		if least := leastCapable(e.Result.Steps); least != nil {
			say += fmt.Sprintf(" Limit/U %s at least.", capability(float64(least.Capability)))
		}
		fmt.Fprintln(b, strings.Join(wrap("Rule: ", say, "  "), "\n"))
	}
	b.WriteByte('\n')
}

// leastCapable is the step with the least limit over U; nil where none is limited.
func leastCapable(all []calib.StepResult) (least *calib.StepResult) {
	for i := range all {
		if c := float64(all[i].Capability); !math.IsNaN(c) && (least == nil || c < float64(least.Capability)) {
			least = &all[i]
		}
	}
	return least
}
