package report

import (
	"fmt"
	"math"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/quantity"
)

// decided says in a sentence or two what the verdict comes from.
func decided(e *calib.Evaluation) string {
	r := e.Result
	if r.Verdict == decision.NotJudged {
		return "The plan states no limit that holds for these steps, so nothing is judged."
	}
	var at *calib.StepResult
	count := 0
	for i := range r.Steps {
		if s := &r.Steps[i]; s.Outcome == r.Verdict {
			count++
			if at == nil || share(s) > share(at) {
				at = s
			}
		}
	}
	if at != nil {
		return typeset(bySteps(e, at, count))
	}
	for _, g := range r.ByRange.Gain {
		if g.Outcome == r.Verdict {
			return typeset(fmt.Sprintf("The steps are good; the gain of the %s range decides: it is off by %s, with a limit of %s.",
				displayed(g.Range/e.Plan.Detector.ToRMS), gainDeviation(g.Estimate, r.CoverageFactor), quantity.Share(g.Limit, 2)))
		}
	}
	return fmt.Sprintf("The steps that were read are good, but %d of %d have no reading; until they are taken the verdict is a conditional pass at best.",
		len(r.Missing), len(e.Plan.Steps))
}

// share of its limit that a step's error takes, or the phase where that takes more.
func share(s *calib.StepResult) float64 {
	x := math.Abs(float64(s.Error)) / float64(s.Limit)
	if y := math.Abs(float64(s.PhaseError)) / float64(s.PhaseLimit); y > x || math.IsNaN(x) {
		return y
	}
	return x
}

// bySteps says how many steps have the verdict's outcome, which of them presses most, and why.
func bySteps(e *calib.Evaluation, at *calib.StepResult, count int) string {
	guarded := e.Plan.Decision.Guard > 0
	say := map[bool]map[decision.Outcome]string{
		true: {decision.Pass: "within its limit with the whole guard band to spare", decision.ConditionalPass: "within its limit, but by less than the guard band",
			decision.ConditionalFail: "beyond its limit, but by less than the guard band", decision.Fail: "beyond its limit by more than the guard band"},
		false: {decision.Pass: "within its limit", decision.Fail: "beyond its limit"},
	}[guarded][at.Outcome]
	if doubt := doubt(e, at); doubt != "" {
		say = doubt
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
	return fmt.Sprintf("%s step %s, %s: %s.", which, at.ID, pressing(at), say)
}

// pressing is a step's error, or its phase where that is nearer to its limit.
func pressing(s *calib.StepResult) string {
	if math.Abs(float64(s.PhaseError))/float64(s.PhaseLimit) == share(s) {
		return fmt.Sprintf("with a phase error of %s where the limit is %s", angle(float64(s.PhaseError), float64(s.UPhase)), degrees(float64(s.PhaseLimit)))
	}
	return fmt.Sprintf("with an error of %s where the limit is %s", quantity.PlusMinus(float64(s.Error), float64(s.U), "V"), quantity.Format(float64(s.Limit), 3, "V"))
}

// doubt is why a step cannot be better than conditional, whatever its error.
func doubt(e *calib.Evaluation, s *calib.StepResult) string {
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

// angle is an angle with its expanded uncertainty, in degrees.
func angle(x, U float64) string {
	return sizeOf(calib.Estimate{Value: x, U: U, Unit: "rad", Known: true}, 1)
}

// summary is what the detector and the bench have, each with whose it is.
func summary(e *calib.Evaluation) grid {
	r := e.Result
	f, k := &r.Fit, r.CoverageFactor
	type line struct {
		name, whose string
		estimate    calib.Estimate
		deviation   bool // of a gain, from 1
	}
	const detectors, benchs = "the detector's", "the bench's"
	offset := "offset"
	if e.Plan.Fit.OffsetPerRange {
		offset = "offset, of full scale"
	}
	series := "series resistance"
	if e.Plan.Fit.SeriesIn != "" {
		series += ", in " + e.Plan.Fit.SeriesIn
	}
	var lines []line
	if f.Gain.Known && !r.ByRange.Used {
		lines = append(lines, line{"gain, deviation from 1", detectors, f.Gain, true})
	}
	if o, s := r.Deciding(); f.Separable {
		lines = append(lines, line{offset, detectors, o, false})
		if f.OffsetQuadrature != nil {
			lines = append(lines, line{offset + ", quadrature", detectors, *f.OffsetQuadrature, false})
		}
		lines = append(lines, line{series, benchs, s, false})
	} else if f.Intercept != nil && f.AsSeries != nil {
		lines = append(lines, line{"either " + offset, detectors, *f.Intercept, false}, line{"or " + series, benchs, *f.AsSeries, false})
	}
	if len(f.Phase) == 1 {
		lines = append(lines, line{"phase against the reference", "the reference's setting", f.Phase[0].Estimate, false})
	}
	size := func(x calib.Estimate, deviation bool) string {
		if deviation {
			x.Value--
		}
		return typeset(sizeOf(x, k))
	}
	g := grid{Rows: len(lines), Columns: []column{
		texts("", "words", func(i int) string { return lines[i].name }),
		texts("value ± U", "number", func(i int) string { return size(lines[i].estimate, lines[i].deviation) }),
		texts("U from the readings alone", "number", func(i int) string { return spread(lines[i].estimate, k) }),
		texts("whose", "words", func(i int) string { return lines[i].whose }),
		texts("shown to be there", "words", func(i int) string {
			x := lines[i].estimate
			if lines[i].deviation {
				x.Value--
			}
			if !x.Known || math.Abs(x.Value) <= k*x.U {
				return "no, less than U"
			}
			return "yes"
		}),
	}}
	g.Notes = append(g.Notes, fmt.Sprintf("U is the expanded uncertainty, U = k·u with k = %.3f, for a coverage of %.4g %%.", k, 100*r.Coverage))
	g.Notes = append(g.Notes, separation(e)...)
	g.Notes = append(g.Notes, fitness(r))
	return g
}

// spread is the expanded uncertainty that the readings bring to an estimate.
func spread(x calib.Estimate, k float64) string {
	U := k * x.URandom
	switch {
	case !x.Known:
		return ""
	case x.Unit == "1":
		return quantity.Share(U, 2)
	case x.Unit == "rad":
		return quantity.Format(U*180/math.Pi, 2, "1") + "°"
	case x.Unit == "ohm":
		return quantity.Format(U, 2, "Ω")
	}
	return quantity.Format(U, 2, x.Unit)
}

// separation says what is between offset and series resistance.
func separation(e *calib.Evaluation) []string {
	r := e.Result
	var notes []string
	if !r.Fit.Separable {
		say := "Offset and series resistance cannot be told apart by these readings: each line is what it would be if the other were zero. "
		if c := r.Condition; c != nil {
			say += "All steps pass " + within(float64(c.From), float64(c.To)) + "."
		} else {
			say += "No series resistance makes all steps pass."
		}
		notes = append(notes, typeset(say))
	}
	if r.ByRange.Used && e.Plan.Fit.Gain == "common" {
		notes = append(notes, "One gain for all ranges does not fit: all of this, the errors and the verdict come from the fit with a gain for each range, which are listed under Gains.")
	}
	return notes
}

func within(from, to float64) string {
	switch low, high := quantity.Format(from, 3, "Ω"), quantity.Format(to, 3, "Ω"); {
	case math.IsInf(from, 0) && math.IsInf(to, 0):
		return "whatever the series resistance"
	case math.IsInf(from, 0):
		return "if the series resistance is at most " + high
	case math.IsInf(to, 0):
		return "if the series resistance is at least " + low
	default:
		return "if the series resistance is between " + low + " and " + high
	}
}

// fitness says how well the model fits, and how the readings repeat.
func fitness(r *calib.Result) string {
	f := &r.Fit
	say := fmt.Sprintf("Goodness of the fit: χ² = %.4g with %d degrees of freedom", float64(f.ChiSquared), f.DOF)
	if p := float64(f.P); !math.IsNaN(p) {
		say += fmt.Sprintf(" (%s of as much or more by chance)", chance(p))
	}
	if x := float64(r.Repeatability.Ratio); !math.IsNaN(x) {
		say += fmt.Sprintf("; repeated readings scatter %.2f times as much as predicted (%s)", x, chance(float64(r.Repeatability.P)))
	}
	say += "."
	if rho, ok := f.Correlation["offset,series_resistance"]; ok {
		say += " Correlation of offset and series resistance: " + hundredths(float64(rho)) + "."
	}
	return typeset(say)
}

// hundredths is a number with two decimals, zero without a sign.
func hundredths(x float64) string { return fmt.Sprintf("%.2f", math.Round(100*x)/100+0) }

// chance is a probability for people.
func chance(p float64) string {
	if p < 1e-6 {
		return "p under 0.000001"
	}
	return fmt.Sprintf("p = %.2g", p)
}
