package report

import (
	"math"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/quantity"
)

// decisionTable lists how each judged step stands to its limit.
func decisionTable(e *calib.Evaluation) grid {
	listed := e.Result.Steps
	if len(listed) > mostSteps {
		listed = pressingMost(listed)
	}
	var all []calib.StepResult
	for _, s := range listed {
		if s.Outcome != decision.NotJudged {
			all = append(all, s)
		}
	}
	g := grid{Wide: true, Rows: len(all)}
	number := func(head string, of func(s *calib.StepResult) string) column {
		return texts(head, "number", func(i int) string { return typeset(of(&all[i])) })
	}
	g.addFilled(
		texts("step", "", func(i int) string { return all[i].ID }),
		number("error ± U", func(s *calib.StepResult) string { return quantity.PlusMinus(float64(s.Error), float64(s.U), "V") }),
		number("k", func(s *calib.StepResult) string { return factor(s.K) }),
		number("limit", func(s *calib.StepResult) string { return shown(float64(s.Limit), 3) }),
		number("accepted up to", acceptedUpTo),
		number("probability of conformity", func(s *calib.StepResult) string { return probability(float64(s.Conformity)) }),
		column{Head: "outcome", Symbol: func(i int) mark { return markOf(all[i].Outcome) }},
		number("risk of the outcome", riskOf),
		number("limit / U", func(s *calib.StepResult) string { return capability(float64(s.Capability)) }),
	)
	none, blank := false, false
	for i := range all {
		none = none || math.IsNaN(float64(all[i].Acceptance)) && !math.IsNaN(float64(all[i].Limit))
		blank = blank || riskOf(&all[i]) == ""
	}
	g.Notes = []string{"The rule: " + ruleName(e.Plan) + ". An error passes up to the acceptance limit. The probability of conformity is that of the true error being within the limit; " +
		"the risk of the outcome is that of a passed step being beyond it, or of a failed one within (JCGM 106, clauses 7 and 9: normally distributed, this measurement alone)."}
	if blank {
		g.Notes = append(g.Notes, "Where no risk stands, the error alone would not have been rejected, but something beside it counts: a phase, a flag, full scale exceeded, or an offset that cannot be told from a series resistance.")
	}
	if none {
		g.Notes = append(g.Notes, "Where none can pass, U is so large that not even an error of zero would be accepted.")
	}
	g.Notes = append(g.Notes, "Where the limit is under 3 U, the bench's uncertainty decides the outcome more than the detector does.")
	return g
}
