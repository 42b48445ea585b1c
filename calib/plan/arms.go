package plan

import (
	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// openArm is an arm whose value the steps set.
type openArm struct {
	uncertainty Uncertainty // of whatever is set
	nominal     distinct    // Ω, of the arm's Settings
	measured    []Quantity  // in place of the nominal value
	measuredAt  distinct    // Ω, the nominal values of these
}

func (d *decoder) arms(top *table) {
	shunts, sure := 0, true // sure of the places
	nodes := top.entries("arm")
	for _, n := range nodes {
		t := d.table(n)
		a := Arm{Name: t.unique(d.bench.arms, `"top"`)}
		if a.Name == InReturn || a.Name == InSense {
			d.fault(t.get("name"), "%q has a meaning of its own for wires; call the arm something else", a.Name)
		}
		if n := t.need("place", `"shunt"`); n == nil {
			sure = false
		} else {
			a.Place = d.choice(n, Series, Shunt, Tap)
			sure = sure && n.text == a.Place
		}
		open := d.element(t, &a)
		t.done()
		if a.Place == Shunt {
			shunts++
		}
		d.plan.Arms = append(d.plan.Arms, a)
		d.bench.arms = append(d.bench.arms, a.Name)
		d.bench.open = append(d.bench.open, open)
	}
	if len(nodes) == 0 {
		d.missing(top.node, "arm", "missing; a plan needs the ladder's [[arm]] tables, at least one of them a shunt")
	} else if shunts == 0 && sure {
		d.fault(top.get("arm"), "none of the arms is a shunt, so nothing divides the voltage; give one place = \"shunt\"")
	}
}

// element reads what an arm consists of. It returns nil for a fixed arm and for a tap.
func (d *decoder) element(t *table, a *Arm) *openArm {
	value, measured := t.get("value"), t.get("measured")
	around := t.uncertainty(quantity.Resistance)
	a.Capacitance = d.quantity(t.get("capacitance"), quantity.Capacitance, notNegative, 0)
	a.Inductance = d.quantity(t.get("inductance"), quantity.Inductance, notNegative, 0)
	a.TempCo = d.quantity(t.get("tempco"), quantity.TemperatureCoefficient, anySign, 0)
	a.ReferenceTemperature = d.plain(t.get("reference_temperature"), quantity.Temperature, anySign, 23)
	a.MaxPower = d.plain(t.get("max_power"), quantity.Power, positive, 0)
	switch {
	case a.Place == Tap:
		d.joint(t)
		return nil
	case value == nil:
		open := &openArm{uncertainty: around}
		d.measuredSettings(open, measured)
		if measured == nil {
			d.checkDOF(t.node, around)
		}
		a.Open = true
		return open
	}
	q := d.quantity(value, quantity.Resistance, notNegative, 0)
	d.checkConflict(t, q.Uncertainty, around)
	q.Uncertainty = q.over(around)
	if around.DOF != 0 {
		d.checkDOF(t.node, q.Uncertainty)
	}
	if measured != nil {
		d.fault(measured, "the arm has a value, so there are no settings to measure; keep one of the two")
	}
	a.Settings, a.Nominal = []Quantity{q}, []string{nominalText(value)}
	return nil
}

// joint reports all that a tap cannot have.
func (d *decoder) joint(t *table) {
	for _, key := range []string{"value", "measured", "u", "U", "k", "tolerance", "dof", "shares", "standard",
		"capacitance", "inductance", "tempco", "reference_temperature", "max_power"} {
		if n := t.get(key); n != nil {
			d.fault(n, "a tap is a joint without an element and has no %s; an arm with one is a series or a shunt arm", key)
		}
	}
}

// checkConflict reports what stands both within an arm's value and beside it.
func (d *decoder) checkConflict(t *table, inner, around Uncertainty) {
	both := func(key string) {
		d.fault(t.get(key), "%s stands beside a value that has its own already; keep one", key)
	}
	if inner.Stated() {
		for _, key := range []string{"u", "U", "tolerance"} {
			if t.node.fields[key] != nil {
				both(key)
			}
		}
	}
	if inner.DOF != 0 && around.DOF != 0 {
		both("dof")
	}
	if inner.Shares >= 0 && around.Shares >= 0 {
		both("shares")
	}
	if inner.Standard >= 0 && around.Standard >= 0 {
		both("standard")
	}
}

func nominalText(n *node) string {
	if n.kind == unstable.Table && n.fields["value"] != nil {
		n = n.fields["value"]
	}
	return n.text
}

// measuredSettings reads the table from nominal to measured values.
func (d *decoder) measuredSettings(a *openArm, n *node) {
	if n == nil || !d.isTable(n) {
		return
	}
	for _, key := range n.keys {
		entry := n.fields[key]
		nominal, err := quantity.Parse(key, quantity.Resistance)
		if err != nil {
			d.fault(entry, "%v", err)
			continue
		}
		q := d.quantity(entry, quantity.Resistance, notNegative, 0)
		if _, fresh := a.measuredAt.of(nominal.X); !fresh {
			d.fault(entry, "the setting %q is in the table already", key)
			continue
		}
		a.measured = append(a.measured, q)
	}
}

// armSetting is the index in an open arm's Settings of a value that a step sets.
func (d *decoder) armSetting(arm int, n *node) (i int, ok bool) {
	a := &d.plan.Arms[arm]
	stated, q, ok := d.resistor(arm, n)
	if !ok {
		return 0, false
	}
	i, fresh := d.bench.open[arm].nominal.of(stated.X)
	switch {
	case fresh:
		a.Settings = append(a.Settings, q)
		a.Nominal = append(a.Nominal, nominalText(n))
	case stated.Uncertainty != unstated && a.Settings[i] != q:
		d.fault(n, "%s is set before with another uncertainty or history, as %q; state it once", n.what(), a.Nominal[i])
	}
	return i, true
}

// resistor is the resistor that an open arm has at a setting, and the setting itself as it is stated.
func (d *decoder) resistor(arm int, n *node) (stated, q Quantity, ok bool) {
	open := d.bench.open[arm]
	stated, _, ok = d.stated(n, quantity.Resistance, notNegative)
	q = Quantity{stated.X, stated.over(open.uncertainty)}
	if k, found := open.measuredAt.find(stated.X); found {
		measured := open.measured[k]
		q = Quantity{measured.X, measured.over(q.Uncertainty)}
	}
	return stated, q, ok
}
