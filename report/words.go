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
func sizeOf(e calib.Estimate) string {
	U := e.Expanded()
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
func gainDeviation(e calib.Estimate) string {
	e.Value--
	return sizeOf(e)
}

// degrees is an angle in whole or broken degrees: 180°.
func degrees(rad float64) string { return fmt.Sprintf("%.6g°", rad*180/math.Pi) }

// concise is a value with its standard uncertainty in parentheses; a share in percent or ppm.
func concise(x, u float64, unit string) string {
	scale, unit := scaleOf(math.Max(math.Abs(x), u), unit)
	return quantity.Concise(x/scale, u/scale, "1") + " " + unit
}

// interval is "from 1.2 to 3.4 mV", to the place of the second digit of u.
func interval(low, high, u float64, unit string) string {
	scale, unit := scaleOf(math.Max(math.Abs(low), math.Abs(high)), unit)
	digits := max(0, 1-int(math.Floor(math.Log10(u/scale))))
	return fmt.Sprintf("from %.*f to %.*f %s", digits, low/scale, digits, high/scale, unit)
}

// scaleOf is the scale and the unit in which a value of a size is written.
func scaleOf(size float64, unit string) (float64, string) {
	switch {
	case unit == "1" && size < 0.0005:
		return 1e-6, "ppm"
	case unit == "1":
		return 0.01, "%"
	case unit == "1/K":
		return 1e-6, "ppm/K"
	case unit == "ohm":
		unit = "Ω"
	}
	return quantity.Prefix(size, unit)
}
