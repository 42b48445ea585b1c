package report

import (
	"fmt"
	"math"
	"strings"

	"rungproof/calib"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// stepSettings is what a step sets, the detector's range apart, in words:
// "box 10 kΩ, 20 V, 180°". What is the same at every step is left out, the
// amplitude never.
func stepSettings(p *plan.Plan, s *plan.Step) string {
	parts := append(benchSettings(p, s), amplitude(p, s))
	if s.Phase != 0 || varies(p, func(o *plan.Step) bool { return o.Phase != s.Phase }) {
		parts = append(parts, degrees(s.Phase))
	}
	return strings.Join(parts, ", ")
}

// benchSettings are the settings but amplitude and phase, as far as steps differ in them.
func benchSettings(p *plan.Plan, s *plan.Step) []string {
	var parts []string
	if varies(p, func(o *plan.Step) bool { return o.Tap != s.Tap }) {
		parts = append(parts, "tap "+p.Arms[s.Tap].Name)
	}
	for i, a := range p.Arms {
		if a.Open {
			parts = append(parts, a.Name+" "+a.Nominal[s.Set[i]])
		}
	}
	if len(p.Frequencies) > 1 {
		parts = append(parts, quantity.Plain(s.Frequency, "Hz"))
	}
	if varies(p, func(o *plan.Step) bool { return o.TimeConstant != s.TimeConstant }) {
		parts = append(parts, "time constant "+quantity.Format(s.TimeConstant, 3, "s"))
	}
	return parts
}

// varies tells whether any step of the plan differs.
func varies(p *plan.Plan, differs func(*plan.Step) bool) bool {
	for i := range p.Steps {
		if differs(&p.Steps[i]) {
			return true
		}
	}
	return false
}

// amplitude is a step's amplitude as the generator shows it.
func amplitude(p *plan.Plan, s *plan.Step) string {
	if a := p.Generator.Amplitudes[s.Amplitude]; a.EMF.X != 0 {
		return a.Shown
	}
	return "source off"
}

// sizeOf is an estimate with its expanded uncertainty k·u; a share is in percent
// or ppm, an angle in degrees.
func sizeOf(e calib.Estimate, k float64) string {
	U := k * e.U
	switch {
	case !e.Known:
		return "not determined"
	case e.Unit == "1":
		return quantity.SharePlusMinus(e.Value, U)
	case e.Unit == "ohm":
		return quantity.PlusMinus(e.Value, U, "Ω")
	case e.Unit == "rad":
		return quantity.PlusMinus(e.Value*180/math.Pi, U*180/math.Pi, "1") + "°"
	}
	return quantity.PlusMinus(e.Value, U, e.Unit)
}

// gainDeviation is a gain's deviation from 1, as a share.
func gainDeviation(e calib.Estimate, k float64) string {
	e.Value--
	return sizeOf(e, k)
}

// degrees is an angle in whole or broken degrees: 180°.
func degrees(rad float64) string { return fmt.Sprintf("%.6g°", rad*180/math.Pi) }
