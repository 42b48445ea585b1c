package calib

import (
	"math"

	"rungproof/calib/plan"
)

// Parting is a step that, added to a plan, tells an offset from a series resistance.
type Parting struct {
	Step      string `json:"step"` // the step of the plan that it repeats
	Change    string `json:"change"`
	Amplitude string `json:"amplitude,omitempty"` // where that is what changes
}

// The changes that a parting step may consist in, in words for a person.
const (
	changeTurn      = "the reference turned by 180°"
	changeAmplitude = "another amplitude"
	changeOff       = "the source off"
)

// Part finds the cheapest step that parts the two, or nil: the reference turned
// by 180° (one keystroke; it parts nothing for a magnitude), another amplitude,
// the source off. Each candidate is tried on the computed problem.
func Part(p *plan.Plan) *Parting {
	last := len(p.Steps) - 1
	for _, at := range []int{last, 0, last / 2} {
		s := p.Steps[at]
		if p.Detector.Reads != plan.Magnitude {
			turned := s
			turned.Phase += math.Pi
			if parts(p, turned, nil) {
				return &Parting{Step: s.ID, Change: changeTurn}
			}
		}
	}
	for _, at := range []int{last, 0, last / 2} {
		for _, factor := range []float64{0.1, 10} {
			s := p.Steps[at]
			a := p.Generator.Amplitudes[s.Amplitude]
			a.EMF.X *= factor
			if g := p.Generator.MaxAmplitude; a.EMF.X == 0 || (factor > 1 && (g == 0 || a.EMF.X > g)) {
				continue
			}
			if parts(p, s, &a) {
				times := map[float64]string{0.1: "a tenth", 10: "ten times"}[factor]
				return &Parting{Step: s.ID, Change: changeAmplitude, Amplitude: times + " of " + a.Shown}
			}
		}
		off := p.Generator.Amplitudes[p.Steps[at].Amplitude]
		off.EMF = plan.Quantity{Uncertainty: plan.Uncertainty{Shares: -1, Standard: -1}}
		if p.Detector.Reads != plan.Magnitude && parts(p, p.Steps[at], &off) {
			return &Parting{Step: p.Steps[at].ID, Change: changeOff}
		}
	}
	return nil
}

// parts tells whether the plan with one more step, at a new amplitude where one
// is given, is separable.
func parts(p *plan.Plan, s plan.Step, amplitude *plan.Amplitude) bool {
	more := *p
	if amplitude != nil {
		more.Generator.Amplitudes = append(append([]plan.Amplitude(nil), p.Generator.Amplitudes...), *amplitude)
		s.Amplitude = len(more.Generator.Amplitudes) - 1
	}
	s.ID += "+"
	more.Steps = append(append([]plan.Step(nil), p.Steps...), s)
	e, err := perfect(&more).estimate(p.Fit.Gain, nothing)
	return err == nil && e.separable()
}
