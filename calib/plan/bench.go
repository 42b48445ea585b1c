package plan

import (
	"maps"
	"slices"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// bench is what later tables refer to by name or by value.
type bench struct {
	standards, errors []string
	ranges            []string   // as the plan writes them
	arms              []string   // names
	open              []*openArm // of each arm; nil where its value is fixed or it has none
}

// unique is the name of an entry of a [[list]], required and different from those before.
func (t *table) unique(taken []string, example string) string {
	n := t.need("name", example)
	if n == nil {
		return ""
	}
	s := t.name(n)
	if s != "" && slices.Contains(taken, s) {
		t.fault(n, "the name %q is taken already; give each its own", s)
	}
	return s
}

// head reads the keys that stand before all tables, but for those that the steps use.
func (d *decoder) head(t *table) {
	p := d.plan
	p.Title, p.Operator = d.text(t.get("title")), d.text(t.get("operator"))
	p.Customer, p.Procedure = d.text(t.get("customer")), d.text(t.get("procedure"))
	p.Date = d.date(t.get("date"))
	if n := t.get("condition"); n != nil {
		p.Condition = d.choice(n, "as found", "as left")
	}
	p.Temperature = d.quantity(t.get("temperature"), quantity.Temperature, anySign, 23)
	if p.Temperature.X < -273.15 {
		d.fault(t.get("temperature"), "%q is below absolute zero", nominalText(t.get("temperature")))
	}
	p.Humidity, p.WarmUp, p.Notes = d.text(t.get("humidity")), d.text(t.get("warm_up")), d.text(t.get("notes"))
}

// standards reads the equipment that the result is traced to.
func (d *decoder) standards(top *table) {
	for _, n := range top.entries("standard") {
		t := d.table(n)
		s := Standard{
			Name:        t.unique(d.bench.standards, `"bench multimeter"`),
			Description: d.text(t.get("description")),
			Serial:      d.text(t.get("serial")),
			Certificate: d.text(t.get("certificate")),
			Calibrated:  d.date(t.get("calibrated")),
			Due:         d.date(t.get("due")),
		}
		if !s.Calibrated.IsZero() && !s.Due.IsZero() && s.Due.Before(s.Calibrated) {
			d.fault(t.get("due"), "due before it was calibrated, on %s", s.Calibrated.Format("2006-01-02"))
		}
		t.done()
		d.plan.Standards = append(d.plan.Standards, s)
		d.bench.standards = append(d.bench.standards, s.Name)
	}
}

// sharedErrors reads the [error.NAME] tables, sorted by name.
func (d *decoder) sharedErrors(top *table) {
	n := top.get("error")
	if n == nil {
		return
	}
	if n.kind != unstable.Table {
		d.fault(n, "%s where tables by name are due: [error.ohmmeter]", n.what())
		return
	}
	for _, name := range slices.Sorted(maps.Keys(n.fields)) {
		if !d.isUncertainty(n.fields[name]) {
			continue
		}
		t := d.table(n.fields[name])
		if t.node.fields["shares"] != nil {
			d.fault(t.get("shares"), "an error that others share shares none itself")
			continue
		}
		u := t.uncertainty(quantity.Ratio)
		if t.node.fields["u"] == nil && t.node.fields["U"] == nil && t.node.fields["tolerance"] == nil {
			d.missing(t.node, "tolerance", "the error has no size; write u, U or tolerance, like tolerance = \"0.02 %%\"")
		}
		t.done()
		d.bench.errors = append(d.bench.errors, name)
		d.plan.Errors = append(d.plan.Errors, SharedError{Name: name, U: u.Relative, Shape: u.Shape, DOF: u.DOF, Standard: u.Standard})
	}
}
