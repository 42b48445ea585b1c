package diagnose

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// beyondLimit lists the steps whose error is beyond the limit and takes the worst
// of them apart: how much of it is the gain's, how much the offset's, and what is left.
func beyondLimit(e *calib.Evaluation) []calib.Finding {
	var ids []string
	var worst *calib.StepResult
	ratio := func(s *calib.StepResult) float64 { return math.Abs(float64(s.Error)) / float64(s.Limit) }
	for i := range e.Result.Steps {
		s := &e.Result.Steps[i]
		if s.Outcome < decision.ConditionalFail || !(ratio(s) > 1) {
			continue
		}
		ids = append(ids, s.ID)
		if worst == nil || ratio(s) > ratio(worst) {
			worst = s
		}
	}
	if worst == nil {
		return nil
	}
	text := fmt.Sprintf("at step %s the error is %s times the limit", ids[0], times(ratio(worst)))
	if len(ids) > 1 {
		text = fmt.Sprintf("%d steps (%s) have errors of up to %s times their limit", len(ids), calib.List(ids), times(ratio(worst)))
	}
	text += fmt.Sprintf("; at the worst, %s, %s.", worst.ID, parts(e, worst))
	return one(BeyondLimit, "", "%s", text)
}

// parts says what a step's error is made of.
func parts(e *calib.Evaluation, s *calib.StepResult) string {
	err := float64(s.Error)
	volts := func(v float64) string {
		if math.Abs(v) < 1e-3*math.Abs(err) {
			v = 0
		}
		return quantity.Format(v, 2, "V")
	}
	out := []string{fmt.Sprintf("%s in all", volts(err))}
	left := err
	if g := gainAt(e, s); g.Known {
		part := (g.Value - 1) * s.Expected
		left -= part
		out = append(out, volts(part)+" are the gain's")
	}
	if o := offsetAt(e, s) * direction(e, s); !math.IsNaN(o) {
		left -= o
		name := " are the offset's"
		if !e.Result.Separable() {
			name = " an offset's or a series resistance's"
		}
		out = append(out, volts(o)+name)
	}
	if len(out) == 1 {
		return out[0]
	}
	return strings.Join(append(out, volts(left)+" neither's"), ", ")
}

// direction is the part of an offset that lies along a step's expected phasor: 1,
// and for two-phase readings the cosine between the two.
func direction(e *calib.Evaluation, s *calib.StepResult) float64 {
	if e.Plan.Detector.Reads != plan.TwoPhase {
		return 1
	}
	for _, x := range e.Sights() {
		if x.Step == s.Index {
			return real(x.Along) / math.Max(cmplx.Abs(x.Along), 1e-300)
		}
	}
	return 1
}

// gainAt is the gain that holds at a step: its range's own where that is used.
func gainAt(e *calib.Evaluation, s *calib.StepResult) calib.Estimate {
	if r := e.Result.ByRange; r.Used {
		for _, g := range r.Gain {
			if g.Range == s.Range {
				return g.Estimate
			}
		}
	}
	return e.Result.Fit.Gain
}

// offsetAt is the offset at a step, V; NaN where none is known.
func offsetAt(e *calib.Evaluation, s *calib.StepResult) float64 {
	o, _ := e.Result.Deciding()
	if e.Result.Fit.Intercept != nil {
		o = *e.Result.Fit.Intercept
	}
	switch {
	case !o.Known:
		return math.NaN()
	case e.Plan.Fit.OffsetPerRange:
		return o.Value * s.Range
	}
	return o.Value
}

func times(x float64) string { return quantity.Format(x, 2, "1") }
