package plan

import (
	"math"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
	"rungproof/circuit"
)

func (d *decoder) wires(top *table) {
	var names []string
	for _, n := range top.entries("wire") {
		t := d.table(n)
		w := Wire{Name: t.unique(names, `"detector cable"`), Arm: -1}
		names = append(names, w.Name)
		d.whereItLies(t, &w)
		length := d.quantity(t.get("length"), quantity.Length, notNegative, 0)
		d.resistanceOf(t, &w, length)
		w.Contacts = d.quantity(t.get("contacts"), quantity.Resistance, notNegative, 0)
		d.capacitanceOf(t, &w, length)
		t.done()
		d.plan.Wires = append(d.plan.Wires, w)
	}
}

// whereItLies reads in and inside_tap.
func (d *decoder) whereItLies(t *table, w *Wire) {
	n, inside := t.need("in", `"return"`), t.get("inside_tap")
	place := ""
	if n != nil {
		w.In = d.text(n)
		switch {
		case n.kind != unstable.String:
		case w.In == InReturn || w.In == InSense:
			place = w.In
		default:
			known := append([]string{InReturn, InSense}, d.bench.arms...)
			if i := d.refer(n, "arm", known); i >= 2 {
				w.Arm = i - 2
				place = d.plan.Arms[w.Arm].Place
			}
		}
	}
	w.InsideTap = d.flag(inside, place == Shunt)
	switch {
	case place == Tap:
		d.fault(n, "%q is a joint and has nothing for a wire to be in series with; the detector's lead is in = \"sense\"", w.In)
	case inside != nil && place == Series:
		d.fault(inside, "%q is a series arm, and no tap lies in one; leave inside_tap out", w.In)
	case inside != nil && place == InSense:
		d.fault(inside, "a sense lead carries the detector's input current only and is inside of no tap; leave inside_tap out")
	}
}

// resistanceOf reads a wire's resistance, or its conductor.
func (d *decoder) resistanceOf(t *table, w *Wire, length Quantity) {
	stated, material, gauge, area := t.get("resistance"), t.get("material"), t.get("gauge"), t.get("area")
	w.Resistance = exactly(0)
	if stated != nil {
		w.Resistance = d.quantity(stated, quantity.Resistance, notNegative, 0)
		for _, n := range []*node{material, gauge, area} {
			if n != nil {
				d.fault(n, "%s beside resistance; state the resistance or the conductor that it follows from", n.key)
			}
		}
		return
	}
	capacitive := t.node.fields["capacitance"] != nil || t.node.fields["capacitance_per_length"] != nil
	switch {
	case gauge != nil && area != nil:
		d.fault(area, "area beside gauge, which has one of its own; keep one")
	case gauge == nil && area == nil && material != nil:
		d.fault(material, "material without gauge or area; a conductor is gauge or area, and length")
	case gauge == nil && area == nil:
		if !(w.In == InSense && capacitive) && t.node.fields["contacts"] == nil {
			d.fault(t.node, "the wire has no resistance; state resistance, or gauge or area with length")
		}
	case t.node.fields["length"] == nil:
		d.missing(t.node, "length", "missing; the conductor's resistance follows from gauge or area with length = \"0.5 m\"")
	default:
		w.Resistance, w.TempCo = d.conductor(t, length)
	}
}

// conductor computes a resistance at room temperature, and its relative temperature coefficient there.
func (d *decoder) conductor(t *table, length Quantity) (r Quantity, tempCo float64) {
	c := circuit.Conductor{Material: "copper", Length: length.X}
	if n := t.get("material"); n != nil {
		if i := d.refer(n, "material", circuit.Materials()); i >= 0 {
			c.Material = n.text
		}
	}
	section := exactly(math.NaN())
	if n := t.get("gauge"); n != nil {
		section.X = circuit.GaugeArea(d.number(n, math.NaN(), "a wire gauge (AWG) from -3, which is 0000, to 40, without quotes",
			func(n float64) bool { return !math.IsNaN(circuit.GaugeArea(n)) }))
	} else {
		section = d.quantity(t.get("area"), quantity.Area, positive, math.NaN())
	}
	c.Area = section.X
	if math.IsNaN(c.Area) {
		return exactly(0), 0
	}
	ohms, err := c.Resistance(d.plan.Temperature.X)
	if err != nil {
		d.fault(t.node, "%v", err)
		return exactly(0), 0
	}
	if slope, err := c.TemperatureCoefficient(); err == nil && ohms > 0 {
		tempCo = slope / ohms
	}
	return Quantity{X: ohms, Uncertainty: proportional(length, section)}, tempCo
}

// proportional is the uncertainty of a product or a quotient of two (GUM 5.1.6, equation (12)), with the history of the first or else of
// the second.
func proportional(x, y Quantity) Uncertainty {
	relative := func(q Quantity) float64 {
		if q.X == 0 {
			return 0
		}
		return q.U() / q.X
	}
	u := x.over(y.Uncertainty)
	if x.Stated() && y.Stated() {
		u.Shape, u.DOF = Normal, 0
	}
	u.Relative, u.Absolute = math.Hypot(relative(x), relative(y)), 0
	return u
}

// capacitanceOf reads what a sense cable lays across the detector's input.
func (d *decoder) capacitanceOf(t *table, w *Wire, length Quantity) {
	inAll, perLength := t.get("capacitance"), t.get("capacitance_per_length")
	w.Capacitance = exactly(0)
	if inAll != nil {
		w.Capacitance = d.quantity(inAll, quantity.Capacitance, notNegative, 0)
	}
	for _, n := range []*node{inAll, perLength} {
		if n != nil && w.In != InSense && w.In != "" {
			d.fault(n, "only a sense cable's capacitance counts, as it lies across the detector's input; this wire is in %q", w.In)
			return
		}
	}
	if perLength == nil {
		return
	}
	if inAll != nil {
		d.fault(perLength, "capacitance_per_length beside capacitance; keep one")
	}
	q := d.quantity(perLength, quantity.CapacitancePerLength, notNegative, 0)
	if t.node.fields["length"] == nil {
		d.missing(t.node, "length", "missing; capacitance_per_length needs the cable's length = \"1 m\"")
	}
	w.Capacitance = Quantity{X: q.X * length.X, Uncertainty: proportional(q, length)}
}
