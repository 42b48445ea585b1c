package plan

import (
	"rungproof/circuit"
)

// Ladder is the circuit of a step with everything at its stated value and at room temperature.
func (p *Plan) Ladder(s *Step) circuit.Ladder {
	l := circuit.Ladder{
		Source: p.Generator.SourceResistance.X,
		Arms:   make([]circuit.Arm, len(p.Arms)),
		Tap:    s.Tap,
		Input:  circuit.Input{R: p.Detector.InputResistance.X, C: p.Detector.InputCapacitance.X},
	}
	if p.Generator.Amplitudes[s.Amplitude].AtLadderInput {
		l.Source = 0
	}
	for i := range p.Arms {
		a, c := &p.Arms[i], &l.Arms[i]
		switch a.Place {
		case Series:
			c.Place = circuit.Series
		case Shunt:
			c.Place = circuit.Shunt
		case Tap:
			c.Place = circuit.Tap
			continue
		}
		c.R = a.Settings[s.Set[i]].X * (1 + a.TempCo.X*(p.Temperature.X-a.ReferenceTemperature))
		c.C, c.L = a.Capacitance.X, a.Inductance.X
	}
	for i := range p.Wires {
		w := &p.Wires[i]
		ohms := w.Resistance.X + w.Contacts.X
		switch {
		case w.In == InSense:
			l.Input.Lead += ohms
			l.Input.C += w.Capacitance.X
		case w.In == InReturn && w.InsideTap:
			l.ReturnSeen += ohms
		case w.In == InReturn:
			l.Return += ohms
		case w.InsideTap:
			l.Arms[w.Arm].Stray += ohms
		default:
			l.Arms[w.Arm].Lead += ohms
		}
	}
	return l
}

// lastShunt is the index of the last shunt arm, or -1.
func (p *Plan) lastShunt() int {
	for i := len(p.Arms) - 1; i >= 0; i-- {
		if p.Arms[i].Place == Shunt {
			return i
		}
	}
	return -1
}

// LimitAt is the first limit that fits a range and a frequency, nil where none does.
func (p *Plan) LimitAt(fullScale, frequency float64) *Limit {
	// the bounds are inclusive whatever the last digit of a conversion says
	within := func(x, from, to float64) bool { return x >= from*(1-sameValue) && x <= to*(1+sameValue) }
	for i := range p.Detector.Limits {
		l := &p.Detector.Limits[i]
		if within(fullScale, l.RangeFrom, l.RangeTo) && within(frequency, l.FrequencyFrom, l.FrequencyTo) {
			return l
		}
	}
	return nil
}
