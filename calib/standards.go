package calib

import "rungproof/calib/plan"

// StandardsUsed are the standards that a value of the plan comes from, in the
// plan's order.
func (e *Evaluation) StandardsUsed() []plan.Standard {
	p := e.Plan
	used := make([]bool, len(p.Standards))
	use := func(i int) {
		if i >= 0 {
			used[i] = true
		}
	}
	from := func(u plan.Uncertainty) {
		use(u.Standard)
		if u.Shares >= 0 {
			use(p.Errors[u.Shares].Standard)
		}
	}
	g, d := &p.Generator, &p.Detector
	for _, u := range []plan.Uncertainty{p.Temperature.Uncertainty, g.SourceResistance.Uncertainty,
		g.Amplitude, g.PerSetting, g.PerFrequency, d.InputResistance.Uncertainty, d.InputCapacitance.Uncertainty} {
		from(u)
	}
	for _, a := range g.Amplitudes {
		from(a.EMF.Uncertainty)
	}
	for i := range p.Arms {
		a := &p.Arms[i]
		for _, q := range append([]plan.Quantity{a.Capacitance, a.Inductance, a.TempCo}, a.Settings...) {
			from(q.Uncertainty)
		}
	}
	for i := range p.Wires {
		w := &p.Wires[i]
		from(w.Resistance.Uncertainty)
		from(w.Contacts.Uncertainty)
		from(w.Capacitance.Uncertainty)
	}
	if d.Output != nil {
		from(d.Output.Voltmeter)
	}
	var out []plan.Standard
	for i, s := range p.Standards {
		if used[i] {
			out = append(out, s)
		}
	}
	return out
}
