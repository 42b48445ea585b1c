package report

import (
	"fmt"
	"math"
	"sort"
	"strings"
	"time"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// gainTables are the gains by range and, with several frequencies, by frequency.
func gainTables(e *calib.Evaluation) []grid {
	r, toRMS := e.Result, e.Plan.Detector.ToRMS
	out := []grid{gainTable(e, r.ByRange, "Gain by range", "range", func(g calib.KeyGain) string { return displayed(g.Range / toRMS) })}
	if r.ByFreq != nil {
		g := gainTable(e, r.ByFreq, "Gain by frequency", "frequency", func(g calib.KeyGain) string { return quantity.Plain(g.Frequency, "Hz") })
		g.addFilled(texts("phase against the reference ± U", "number", func(i int) string {
			for _, f := range r.Fit.Phase {
				if f.Frequency == r.ByFreq.Gain[i].Frequency {
					return typeset(sizeOf(f.Estimate))
				}
			}
			return ""
		}))
		out = append(out, g)
	}
	return out
}

func gainTable(e *calib.Evaluation, gains *calib.Gains, caption, key string, name func(calib.KeyGain) string) grid {
	all := gains.Gain
	g := grid{Caption: caption, Rows: len(all)}
	g.addFilled(
		texts(key, "number", func(i int) string { return name(all[i]) }),
		texts("deviation from 1 ± U", "number", func(i int) string { return typeset(gainDeviation(all[i].Estimate)) }),
		texts("U from the readings alone", "number", func(i int) string { return fromReadings(all[i].Estimate) }),
	)
	judged := false
	for _, x := range all {
		judged = judged || x.Outcome != decision.NotJudged
	}
	if judged {
		g.addFilled(texts("limit", "number", func(i int) string {
			if math.IsNaN(all[i].Limit) {
				return "none"
			}
			return quantity.Share(all[i].Limit, 2)
		}), column{Head: "outcome", Symbol: func(i int) mark { return markOf(all[i].Outcome) }})
		g.Notes = append(g.Notes, "Judged by the rule of the steps: "+ruleName(e.Plan)+".")
	}
	if p := float64(gains.PCommon); !math.IsNaN(p) {
		says := "These gains differ by no more than chance explains"
		if p < 0.01 {
			says = "One common gain does not explain the readings"
		}
		g.Notes = append(g.Notes, fmt.Sprintf("%s: %s.", says, chance(p)))
	}
	if gains.Used {
		g.Notes = append(g.Notes, "The errors of the steps and the verdict come from this fit.")
	}
	return g
}

// mostSteps is how many steps the page lists.
const mostSteps = 400

// stepTable lists the steps: of very many, those with the worst outcomes and, among equals, nearest to their limits.
func stepTable(e *calib.Evaluation) grid {
	p, toRMS := e.Plan, e.Plan.Detector.ToRMS
	all := e.Result.Steps
	g := grid{Wide: true}
	if len(all) > mostSteps {
		g.Notes = append(g.Notes, fmt.Sprintf("Shown are %d of %d steps: those with the worst outcomes, then those nearest to their limits. All of them are in result.json.", mostSteps, len(all)))
		all = pressingMost(all)
	}
	g.Rows = len(all)
	g.addFilled(
		texts("step", "", func(i int) string { return all[i].ID }),
		texts("amplitude", "number", func(i int) string { return amplitude(p, &p.Steps[all[i].Index]) }),
		texts("settings", "words", func(i int) string { return strings.Join(benchSettings(p, &p.Steps[all[i].Index]), ", ") }),
		texts("range", "number", func(i int) string { return displayed(all[i].Range / toRMS) }),
	)
	if p.Detector.Reads == plan.InPhase || varies(p, func(s *plan.Step) bool { return s.Phase != 0 }) {
		g.addFilled(texts("ref. phase", "number", func(i int) string { return typeset(degrees(p.Steps[all[i].Index].Phase)) }))
	}
	number := func(head string, of func(s *calib.StepResult) string) column {
		return texts(head, "number", func(i int) string { return typeset(of(&all[i])) })
	}
	g.addFilled(
		number("expected (u)", func(s *calib.StepResult) string { return quantity.Concise(s.Expected, s.UExpected, "V") }),
		number("reading (u)", func(s *calib.StepResult) string {
			return quantity.Concise(float64(s.Reading), float64(s.UReading), "V")
		}),
		number("error ± U", func(s *calib.StepResult) string { return quantity.PlusMinus(float64(s.Error), float64(s.U), "V") }),
		number("limit", func(s *calib.StepResult) string { return shown(float64(s.Limit), 3) }),
		number("phase error ± U", func(s *calib.StepResult) string {
			if math.IsNaN(float64(s.PhaseError)) {
				return ""
			}
			return angleOf(float64(s.PhaseError), float64(s.UPhase))
		}),
		number("phase limit", func(s *calib.StepResult) string {
			if math.IsNaN(float64(s.PhaseLimit)) {
				return ""
			}
			return degrees(float64(s.PhaseLimit))
		}),
		column{Head: "outcome", Symbol: func(i int) mark { return markOf(all[i].Outcome) }},
		number("n", func(s *calib.StepResult) string { return fmt.Sprint(s.Repeats) }),
		texts("flags", "words", func(i int) string { return stepFlags(&all[i]) }),
	)
	g.Notes = append(g.Notes, fmt.Sprintf("The generator shows its amplitudes as %s, for %s. The figures in parentheses are the standard uncertainties of the last digits; n is the number of readings.",
		p.Generator.ShownAs, loadOf(p.Generator.ShownFor)))
	if e.Result.Fit.Separable {
		g.Notes = append(g.Notes, "The expected reading is for the wiring as the plan states it. The error is taken with the fitted series resistance added to it, which is the bench's; so it need not be the plain difference.")
	} else {
		g.Notes = append(g.Notes, "The error takes all that is unexplained as an offset of the detector; the outcome is the worse of that and of taking it as a series resistance.")
	}
	if m := e.Result.Missing; len(m) > 0 {
		g.Notes = append(g.Notes, "No reading: "+calib.List(m)+".")
	}
	return g
}

func loadOf(load string) string {
	if load == "matched load" {
		return "a matched load"
	}
	return "an open circuit"
}

func stepFlags(s *calib.StepResult) string {
	said := append([]string(nil), s.Flags...)
	if s.Beyond {
		said = append(said, "beyond full scale")
	}
	return strings.Join(said, ", ")
}

// pressingMost are the steps that press most on their limits, in the plan's order.
func pressingMost(all []calib.StepResult) []calib.StepResult {
	out := append([]calib.StepResult(nil), all...)
	sort.SliceStable(out, func(i, j int) bool {
		if out[i].Outcome != out[j].Outcome {
			return out[i].Outcome > out[j].Outcome
		}
		return shareOfLimit(&out[i]) > shareOfLimit(&out[j])
	})
	out = out[:mostSteps]
	sort.SliceStable(out, func(i, j int) bool { return out[i].Index < out[j].Index })
	return out
}

// inputTable lists the uncertain inputs, as stated and as the fit has them.
func inputTable(e *calib.Evaluation) grid {
	all := e.Result.Inputs
	g := grid{Rows: len(all)}
	g.addFilled(
		texts("input", "words", func(i int) string { return all[i].Name }),
		texts("stated (u)", "number", func(i int) string { return typeset(inputValue(all[i].Value, all[i].U, all[i].Unit)) }),
		texts("distribution", "words", func(i int) string { return all[i].Shape }),
		texts("as fitted (u)", "number", func(i int) string { return typeset(inputValue(all[i].Fitted, all[i].UFitted, all[i].Unit)) }),
		texts("moved by", "number", func(i int) string {
			if all[i].U == 0 {
				return ""
			}
			return typeset(hundredths((all[i].Fitted-all[i].Value)/all[i].U) + " u")
		}),
		texts("standard", "words", func(i int) string { return all[i].Standard }),
	)
	g.Notes = []string{"The figures in parentheses are standard uncertainties. An input that moves by more than about 2 u does not agree with the readings."}
	return g
}

// inputValue is an input's value with its standard uncertainty: a relative one in percent or ppm.
func inputValue(x, u float64, unit string) string {
	switch {
	case unit == "1" && math.Max(math.Abs(x), u) < 0.0005:
		return quantity.Concise(x*1e6, u*1e6, "1") + " ppm"
	case unit == "1":
		return quantity.Concise(x*100, u*100, "1") + " %"
	case unit == "1/K":
		return quantity.Concise(x*1e6, u*1e6, "1") + " ppm/K"
	}
	return quantity.Concise(x, u, unit)
}

func standardTable(e *calib.Evaluation) grid {
	all := e.StandardsUsed()
	day := func(t time.Time) string {
		if t.IsZero() {
			return ""
		}
		return t.Format("2006-01-02")
	}
	g := grid{Rows: len(all)}
	g.addFilled(
		texts("standard", "words", func(i int) string { return all[i].Name }),
		texts("description", "words", func(i int) string { return all[i].Description }),
		texts("serial", "words", func(i int) string { return all[i].Serial }),
		texts("certificate", "words", func(i int) string { return all[i].Certificate }),
		texts("calibrated", "number", func(i int) string { return day(all[i].Calibrated) }),
		texts("due", "number", func(i int) string { return day(all[i].Due) }),
	)
	return g
}
