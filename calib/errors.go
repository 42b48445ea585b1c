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
	expected float64 // reading expected there, V, signed
	phase    float64 // rad, what the reading is turned against the expected phasor
	uPhase   float64
}

// errorsOf finds the errors of all observations with the series resistance and the phases of a fit.
func (m *model) errorsOf(e *estimate) []stepError {
	// A detector without fault, all inputs at their stated values; what the fit
	// found of the bench (series resistance) and of the reference (phases) stays.
	p := append([]float64(nil), e.result.P...)
	w := *e.layout
	w.gain = make([]int, len(m.obs))
	for i := range w.gain {
		w.gain[i] = -1
	}
	w.offset, w.offsetY = -1, -1
	copy(p[w.inputs:], m.forward.stated())
	bias := m.noiseBias(e)
	v := w.at(p, m.forward.stated())
	v.noiseless = true
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
		s.u = propagate.u(i, &r, 0)
		if size := cmplx.Abs(r.value); m.axes == 2 && size > 0 {
			s.phase = cmplx.Phase(z)
			s.uPhase = propagate.u(i, &r, 1) / math.Max(cmplx.Abs(z), size)
		}
	}
	return out
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

// outcome judges one error by the plan's rule: limit and outcome. NaN and not
// judged where no limit fits.
func (m *model) outcome(o *observation, s *stepError, k float64) (limit float64, result decision.Outcome) {
	full := m.plan.Detector.Ranges[o.rng]
	l := m.plan.LimitAt(full, m.plan.Steps[o.step].Frequency)
	if l == nil {
		return math.NaN(), decision.NotJudged
	}
	limit = l.Reading*math.Abs(s.expected) + l.Range*full
	result = decision.Judge(s.e, limit, m.guard(k*s.u))
	if !math.IsNaN(l.Phase) && s.uPhase > 0 {
		result = decision.Worst(result, decision.Judge(s.phase, l.Phase, m.guard(k*s.uPhase)))
	}
	return limit, result
}

// guard is the width of the guard band for an expanded uncertainty.
func (m *model) guard(U float64) float64 { return m.plan.Decision.Guard * U }
