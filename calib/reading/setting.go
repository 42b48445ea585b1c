package reading

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// The columns of the settings, beside one for each arm that the steps set.
const (
	colFrequency    = "frequency"
	colAmplitude    = "amplitude"
	colTap          = "tap"
	colRange        = "range"
	colPhase        = "phase"
	colTimeConstant = "time_constant"
)

// setting is what a step sets on the bench, and the sheet's column for it.
type setting struct {
	name  string
	named bool          // the text is a name, not a quantity
	kind  quantity.Kind // of a quantity
	text  func(*plan.Step) string
	key   func(*plan.Step) float64 // the sheet's rows go up in it
}

// settings are those of a plan, what is slow to change first: the order of a
// sheet's columns and, compared one after another, of its rows.
func settings(p *plan.Plan) []setting {
	d := &p.Detector
	list := []setting{
		{name: colFrequency, kind: quantity.Frequency,
			text: func(s *plan.Step) string { return exact(s.Frequency, "Hz") },
			key:  func(s *plan.Step) float64 { return s.Frequency }},
		{name: colTap, named: true,
			text: func(s *plan.Step) string { return p.Arms[s.Tap].Name },
			key:  func(s *plan.Step) float64 { return float64(s.Tap) }},
		{name: colAmplitude, kind: quantity.Voltage,
			text: func(s *plan.Step) string { return p.Generator.Amplitudes[s.Amplitude].Shown },
			key:  func(s *plan.Step) float64 { return float64(s.Amplitude) }},
		{name: colTimeConstant, kind: quantity.Time,
			text: func(s *plan.Step) string { return exact(s.TimeConstant, "s") },
			key:  func(s *plan.Step) float64 { return s.TimeConstant }},
		{name: colRange, kind: quantity.Voltage,
			text: func(s *plan.Step) string { return exact(d.Ranges[s.Range]/d.ToRMS, "V") },
			key:  func(s *plan.Step) float64 { return -d.Ranges[s.Range] }},
	}
	for i, a := range p.Arms {
		if a.Open {
			list = append(list, setting{name: armColumn(a.Name), kind: quantity.Resistance,
				text: func(s *plan.Step) string { return a.Nominal[s.Set[i]] },
				key:  func(s *plan.Step) float64 { return -a.Settings[s.Set[i]].X }})
		}
	}
	return append(list, setting{name: colPhase, kind: quantity.Angle,
		text: func(s *plan.Step) string { return digits(s.Phase*180/math.Pi) + " deg" },
		key:  func(s *plan.Step) float64 { return s.Phase }})
}

// armColumn is the arm's name, but for an arm that is called like another column.
func armColumn(name string) string {
	taken := append([]string{colFrequency, colAmplitude, colTap, colRange, colPhase, colTimeConstant}, fixedColumns...)
	if slices.Contains(taken, canonical(name)) {
		return "arm " + name
	}
	return name
}

// checkSetting checks a setting that the row at hand states against the plan.
func (t *table) checkSetting(c *settingColumn, step *plan.Step) {
	cell, planned := t.record[c.column.at], c.text(step)
	if cell == "" || cell == planned {
		return
	}
	if !c.named {
		stated, ok := t.number(&c.column)
		if !ok || t.same(c, stated, planned) {
			return
		}
	}
	t.fault(c.column.at, "%q is not what the plan has for step %s: %s", cell, step.ID, planned)
}

func (t *table) same(c *settingColumn, stated quantity.Value, planned string) bool {
	v, err := quantity.Parse(planned, c.kind)
	if err != nil {
		panic(fmt.Sprintf("reading: the plan's %s: %v", c.name, err))
	}
	switch c.kind {
	case quantity.Angle: // the same after a full turn
		return math.Abs(math.Remainder(stated.X-v.X, 2*math.Pi)) < 1e-9
	case quantity.Voltage: // the generator's amplitude
		shown, ok := quantity.ConventionOf(t.plan.Generator.ShownAs)
		if !ok {
			panic("reading: amplitudes shown as " + t.plan.Generator.ShownAs)
		}
		return equal(inRMS(stated, shown.ToRMS()), inRMS(v, shown.ToRMS()))
	}
	return equal(stated.X, v.X)
}

// exact is a setting as it is read back: with an SI prefix, and all its digits.
func exact(x float64, unit string) string {
	scale, prefixed := quantity.Prefix(x, unit)
	return digits(x/scale) + " " + prefixed
}

// digits are as many digits as a setting may have, without those that rounding makes up.
func digits(x float64) string { return strconv.FormatFloat(x, 'g', 12, 64) }
