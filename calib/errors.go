package calib

import (
	"math"
	"math/cmplx"

	"rungproof/calib/decision"
	"rungproof/calib/detector"
	"rungproof/calib/plan"
)

// stepError is a step's mean reading less the reading expected there with every
// input at its stated value and with the fitted series resistance. The standards
// are not corrected by the instrument under test.
type stepError struct {
	reading  float64 // the part along the expected phasor
	e, u     float64 // V
	k        float64 // coverage factor, from the error's budget
	expected float64 // reading expected there, V, signed
	phase    float64 // rad, what the reading is turned against the expected phasor
	uPhase   float64
	kPhase   float64
}

// errorsOf finds the errors of all observations with the series resistance and the phases of a fit.
func (m *model) errorsOf(e *estimate) []stepError {
	bias := m.noiseBias(e)
	v := m.faultless(e)
	propagate := newPropagation(m, e)
	m.forward.compute(v.nu, v.r)
	out := make([]stepError, len(m.obs))
	var r row
	for i := range m.obs {
		o := &m.obs[i]
		m.predict(i, v, &r)
		z := o.mean * r.turn
		s := &out[i]
		s.reading = real(z)
		s.expected = real(r.value)
		s.e = s.reading - bias[i] - s.expected
		s.u, s.k = propagate.u(i, &r, 0)
		if size := cmplx.Abs(r.value); m.axes == 2 && size > 0 {
			s.phase = cmplx.Phase(z)
			s.uPhase, s.kPhase = propagate.u(i, &r, 1)
			s.uPhase /= math.Max(cmplx.Abs(z), size)
		}
	}
	return out
}

// faultless is a detector without fault with all inputs at their stated values;
// what the fit found of the bench (series resistance) and of the reference
// (phases) stays.
func (m *model) faultless(e *estimate) parameters {
	p := append([]float64(nil), e.result.P...)
	w := *e.layout
	w.gain = make([]int, len(m.obs))
	for i := range w.gain {
		w.gain[i] = -1
	}
	w.offset, w.offsetY = -1, -1
	copy(p[w.inputs:], m.forward.stated())
	v := w.at(p, m.forward.stated())
	v.noiseless = true
	return v
}

// noiseBias is what noise adds to each mean reading of a magnitude at the signal
// that the fit finds beneath it (not at the drop: an offset is a signal too); else zero.
func (m *model) noiseBias(e *estimate) []float64 {
	bias := make([]float64, len(m.obs))
	if m.plan.Detector.Reads != plan.Magnitude {
		return bias
	}
	m.forward.compute(e.v.nu, e.v.r)
	var r row
	for i := range m.obs {
		m.predict(i, e.v, &r)
		mean, _ := detector.RiceMean(r.signal, m.obs[i].noise)
		bias[i] = mean - math.Abs(r.signal)
	}
	return bias
}

// rule is the plan's rule of decision.
func (m *model) rule() decision.Rule {
	switch d := &m.plan.Decision; d.Rule {
	case "simple":
		return decision.Simple{}
	case "risk":
		return decision.Risk{MaxFalseAccept: d.MaxFalseAccept}
	default:
		return decision.Guarded{Factor: d.Guard}
	}
}

// judgement is an error against its limit.
type judgement struct {
	limit      float64 // NaN where the plan limits nothing there, and so are the others
	acceptance float64 // the largest error that passes; NaN where none can
	conformity float64 // probability that the true error is within the limit
	capability float64 // limit over U
	outcome    decision.Outcome
}

// judge decides on one error by the plan's rule. The error of a two-phase
// reading's phase is judged beside it; the worse outcome holds.
func (m *model) judge(o *observation, s *stepError) judgement {
	full := m.plan.Detector.Ranges[o.rng]
	l := m.plan.LimitAt(full, m.plan.Steps[o.step].Frequency)
	if l == nil {
		nan := math.NaN()
		return judgement{nan, nan, nan, nan, decision.NotJudged}
	}
	rule, limit, U := m.rule(), l.Reading*math.Abs(s.expected)+l.Range*full, s.k*s.u
	j := judgement{
		limit:      limit,
		acceptance: decision.AcceptanceLimit(rule, limit, s.u, U),
		conformity: decision.Within(s.e, s.u, limit),
		capability: decision.Capability(limit, U),
		outcome:    rule.Judge(s.e, limit, s.u, U),
	}
	if !math.IsNaN(l.Phase) && s.uPhase > 0 {
		j.outcome = decision.Worst(j.outcome, rule.Judge(s.phase, l.Phase, s.uPhase, s.kPhase*s.uPhase))
	}
	return j
}
