package calib

import (
	"fmt"
	"math"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/circuit"
)

// Input is one uncertain input of the measurement: a resistor, an amplitude, an
// error that several resistors share. Its stated value is a further observation
// of the fit, weighted by its uncertainty.
type Input struct {
	Name     string
	Value    float64 // stated, in Unit; 0 for a relative error
	U        float64 // standard uncertainty, in Unit
	Unit     string  // "Ω", "V", …; "1" for a relative error
	Shape    plan.Shape
	DOF      float64 // 0 means infinite
	Standard int     // index in Plan.Standards, or -1
}

// element is a stated quantity that the expected drops depend on. Its true value
// is (x + own)·(1 + shared), own and shared being inputs where they are uncertain.
type element struct {
	x           float64
	own, shared int // indices of inputs, or -1
}

// lever says how an element moves one number of the circuit:
// the number changes by factor times the change of the element.
type lever struct {
	element int
	at      circuit.Variable
	factor  float64
}

// bench is the part of the model that the plan states: the elements, the
// uncertain inputs behind them, and the levers that are at work in a step.
type bench struct {
	plan     *plan.Plan
	inputs   []Input
	elements []element
	settings [][][]lever // by arm and setting
	fixed    []lever     // at work in every step
	source   []lever     // at work where the amplitude is not measured at the ladder
	emf      []element   // by amplitude
	relative []relative  // errors of the amplitude, all of them relative
	cosine   []int       // by frequency: the loss by alignment of the reference; -1 none
	turn     []int       // by frequency: the angle of alignment, where a step reads off the axis; -1 none
	meter    [2]int      // scale and zero of the voltmeter at the analogue output; -1 none
	shared   []int       // by shared error of the plan: its input, or -1
}

// relative is a relative error of the generator's amplitude.
type relative struct {
	input                int
	amplitude, frequency int // indices that it belongs to; -1 for all
}

// newBench lists what of the plan is uncertain and how it moves the circuit.
func newBench(p *plan.Plan) *bench {
	b := &bench{plan: p, shared: make([]int, len(p.Errors)), meter: [2]int{-1, -1}}
	for i := range b.shared {
		b.shared[i] = -1
	}
	b.listAmplitudes()
	b.listArms()
	d := &p.Detector
	if !math.IsInf(d.InputResistance.X, 0) {
		b.fixed = pull(b.fixed, b.enter("detector's input resistance", "Ω", d.InputResistance), circuit.Variable{Element: circuit.InputR}, 1)
	}
	b.fixed = pull(b.fixed, b.enter("detector's input capacitance", "F", d.InputCapacitance), circuit.Variable{Element: circuit.InputC}, 1)
	b.listReadout()
	return b
}

// add appends an input and returns its index, or -1 where it has no uncertainty.
func (b *bench) add(name string, value float64, unit string, u float64, from plan.Uncertainty) int {
	if u == 0 {
		return -1
	}
	b.inputs = append(b.inputs, Input{Name: name, Value: value, U: u, Unit: unit,
		Shape: from.Shape, DOF: from.DOF, Standard: from.Standard})
	return len(b.inputs) - 1
}

// element enters a quantity of the plan, its own error and the one it shares.
func (b *bench) element(name, unit string, q plan.Quantity) element {
	e := element{x: q.X, own: b.add(name, q.X, unit, q.U(), q.Uncertainty), shared: -1}
	if q.Shares >= 0 {
		if b.shared[q.Shares] < 0 {
			s := b.plan.Errors[q.Shares]
			b.shared[q.Shares] = b.add("shared error "+s.Name, 0, "1", s.U,
				plan.Uncertainty{Shape: s.Shape, DOF: s.DOF, Standard: s.Standard})
		}
		e.shared = b.shared[q.Shares]
	}
	return e
}

// enter makes an uncertain quantity an element and returns its index, or -1 where it is certain.
func (b *bench) enter(name, unit string, q plan.Quantity) int {
	e := b.element(name, unit, q)
	if e.own < 0 && e.shared < 0 {
		return -1
	}
	b.elements = append(b.elements, e)
	return len(b.elements) - 1
}

// pull appends a lever by which an element, if there is one, moves one number of the circuit.
func pull(levers []lever, element int, at circuit.Variable, factor float64) []lever {
	if element < 0 || factor == 0 {
		return levers
	}
	return append(levers, lever{element, at, factor})
}

func (b *bench) listAmplitudes() {
	g := &b.plan.Generator
	any := -1
	for i, a := range g.Amplitudes {
		b.emf = append(b.emf, b.element("amplitude "+a.Shown, "V", a.EMF))
		if a.EMF.X == 0 || a.Measured {
			continue
		}
		if any < 0 {
			any = b.add("generator's amplitude", 0, "1", g.Amplitude.Of(1), g.Amplitude)
		}
		if any >= 0 {
			b.relative = append(b.relative, relative{any, i, -1})
		}
		if k := b.add("generator at "+a.Shown, 0, "1", g.PerSetting.Of(1), g.PerSetting); k >= 0 {
			b.relative = append(b.relative, relative{k, i, -1})
		}
	}
	for i, f := range b.plan.Frequencies {
		if k := b.add("generator at "+quantity.Plain(f, "Hz"), 0, "1", g.PerFrequency.Of(1), g.PerFrequency); k >= 0 {
			b.relative = append(b.relative, relative{k, -1, i})
		}
	}
	b.source = pull(nil, b.enter("source resistance", "Ω", g.SourceResistance), circuit.Variable{Element: circuit.SourceR}, 1)
}

func (b *bench) listArms() {
	room := b.enter("room temperature", "°C", b.plan.Temperature)
	b.settings = make([][][]lever, len(b.plan.Arms))
	for i := range b.plan.Arms {
		a := &b.plan.Arms[i]
		warm := b.plan.Temperature.X - a.ReferenceTemperature
		b.fixed = pull(b.fixed, b.enter(a.Name+"'s capacitance", "F", a.Capacitance), circuit.Variable{Element: circuit.ArmC, Arm: i}, 1)
		b.fixed = pull(b.fixed, b.enter(a.Name+"'s inductance", "H", a.Inductance), circuit.Variable{Element: circuit.ArmL, Arm: i}, 1)
		coefficient := b.enter(a.Name+"'s temperature coefficient", "1/K", a.TempCo)
		resistance := circuit.Variable{Element: circuit.ArmR, Arm: i}
		for s, q := range a.Settings {
			name := a.Name
			if a.Open {
				name += " at " + a.Nominal[s]
			}
			levers := pull(nil, b.enter(name, "Ω", q), resistance, 1+a.TempCo.X*warm)
			levers = pull(levers, coefficient, resistance, q.X*warm)
			levers = pull(levers, room, resistance, q.X*a.TempCo.X)
			b.settings[i] = append(b.settings[i], levers)
		}
	}
	for i := range b.plan.Wires {
		w := &b.plan.Wires[i]
		at := wireResistance(w)
		b.fixed = pull(b.fixed, b.enter(w.Name, "Ω", w.Resistance), at, 1)
		b.fixed = pull(b.fixed, room, at, w.Resistance.X*w.TempCo)
		b.fixed = pull(b.fixed, b.enter(w.Name+"'s contacts", "Ω", w.Contacts), at, 1)
		b.fixed = pull(b.fixed, b.enter(w.Name+"'s capacitance", "F", w.Capacitance), circuit.Variable{Element: circuit.InputC}, 1)
	}
}

// wireResistance is the number of the circuit that a wire's resistance adds to.
func wireResistance(w *plan.Wire) circuit.Variable {
	switch {
	case w.In == plan.InSense:
		return circuit.Variable{Element: circuit.InputLead}
	case w.In == plan.InReturn && w.InsideTap:
		return circuit.Variable{Element: circuit.ReturnSeenLead}
	case w.In == plan.InReturn:
		return circuit.Variable{Element: circuit.ReturnLead}
	case w.InsideTap:
		return circuit.Variable{Element: circuit.ArmStray, Arm: w.Arm}
	}
	return circuit.Variable{Element: circuit.ArmLead, Arm: w.Arm}
}

// listReadout enters what stands between the drop and the reading: the loss by
// alignment of the reference (GUM F.2.4.4: u²/2 on average, u²/√2 uncertain) and
// the voltmeter at the analogue output.
func (b *bench) listReadout() {
	p := b.plan
	offAxis := make([]bool, len(p.Frequencies))
	for _, s := range p.Steps {
		if math.Abs(math.Sin(s.Phase)) > 1e-9 {
			offAxis[frequencyIndex(p, s.Frequency)] = true
		}
	}
	for i, f := range p.Frequencies {
		cosine, turn := -1, -1
		if u := p.Detector.PhaseAlignment; u > 0 && p.Detector.Reads == plan.InPhase {
			from := plan.Uncertainty{Standard: -1}
			cosine = b.add("loss by alignment at "+quantity.Plain(f, "Hz"), u*u/2, "1", u*u/math.Sqrt2, from)
			if offAxis[i] {
				turn = b.add("alignment at "+quantity.Plain(f, "Hz"), 0, "rad", u, from)
			}
		}
		b.cosine, b.turn = append(b.cosine, cosine), append(b.turn, turn)
	}
	if o := p.Detector.Output; o != nil {
		b.meter[0] = b.add("voltmeter's scale", 0, "1", o.Voltmeter.Relative, o.Voltmeter)
		b.meter[1] = b.add("voltmeter's zero", 0, "V", o.Voltmeter.Absolute, o.Voltmeter)
	}
}

func frequencyIndex(p *plan.Plan, f float64) int {
	for i, g := range p.Frequencies {
		if g == f {
			return i
		}
	}
	panic(fmt.Sprintf("calib: a step's frequency %g Hz is not in the plan's list", f))
}
