package plan

import (
	"rungproof/calib/quantity"
)

// fit reads what is estimated; it comes after the blocks, as the tapped arm may have to hold the series resistance.
func (d *decoder) fit(top *table) {
	f := &d.plan.Fit
	t := d.table(top.get("fit"))
	f.SeriesArm = -1
	if n := t.get("series_resistance_in"); n != nil {
		f.SeriesIn = d.text(n)
		f.SeriesArm = d.refer(n, "arm", d.bench.arms)
		if f.SeriesArm >= 0 && d.plan.Arms[f.SeriesArm].Place == Tap {
			d.fault(n, "%q is a joint without an element; name the series or shunt arm that the resistance is in", f.SeriesIn)
		}
	} else {
		d.checkTapsHaveElements()
	}
	f.OffsetPerRange = d.choice(t.get("offset"), "volts", "share of range") == "share of range"
	f.Gain = d.choice(t.get("gain"), "common", "per range", "per frequency")
	if n := t.get("expect"); n != nil {
		f.SeriesExpected = d.expected(d.table(n))
	}
	t.done()
}

// checkTapsHaveElements reports the first joint that is tapped where the tapped arm is to hold the series resistance.
func (d *decoder) checkTapsHaveElements() {
	for i := range d.blocksRead {
		if d.tapsJoint(&d.blocksRead[i]) {
			return
		}
	}
}

// tapsJoint reports the first joint that a block taps.
func (d *decoder) tapsJoint(b *block) bool {
	for i, arm := range b.taps {
		a := &d.plan.Arms[arm]
		if a.Place != Tap {
			continue
		}
		d.fault(b.tapNodes[i], "%q is a joint without an element, so the unknown series resistance cannot be in the tapped arm", a.Name)
		d.hint("say which arm it is in: series_resistance_in = %q in [fit]", d.lastShunt())
		return true
	}
	return false
}

// lastShunt is the name of the last shunt arm, or "".
func (d *decoder) lastShunt() string {
	if i := d.plan.lastShunt(); i >= 0 {
		return d.plan.Arms[i].Name
	}
	return ""
}

// expected reads prior knowledge.
func (d *decoder) expected(t *table) *Quantity {
	defer t.done()
	n := t.need("series_resistance", `"0.1(1) Ω"`)
	if n == nil {
		return nil
	}
	before := len(d.faults)
	q := d.quantity(n, quantity.Resistance, notNegative, 0)
	if !q.Stated() && len(d.faults) == before {
		d.fault(n, "%s has no uncertainty, without which it is no knowledge; write it like \"0.1(1) Ω\"", n.what())
	}
	return &q
}

// decision reads the rule of the verdict.
func (d *decoder) decision(top *table) {
	x := &d.plan.Decision
	t := d.table(top.get("decision"))
	x.Rule = d.choice(t.get("rule"), "guarded", "simple", "risk")
	n := t.get("guard")
	x.Guard = d.number(n, 1, "a factor on U, 0 or more and without quotes", func(x float64) bool { return x >= 0 })
	if x.Rule != "guarded" {
		x.Guard = 0
		if n != nil {
			d.fault(n, "the %s rule has no guard band; leave guard out or use rule = \"guarded\"", x.Rule)
		}
	}
	switch n := t.get("max_false_accept"); {
	case x.Rule == "risk" && n == nil:
		t.need("max_false_accept", `"2 %"`)
	case x.Rule == "risk":
		x.MaxFalseAccept = d.probability(n, 0.02, 0.5, "2 %")
	case n != nil:
		d.fault(n, "belongs to rule = \"risk\", and the rule is %q", x.Rule)
	}
	x.Coverage = d.probability(t.get("coverage"), 0.95, 1, "95 %")
	if n := t.get("prior"); n != nil {
		p := d.table(n)
		x.Prior = &Prior{Reading: d.plain(p.get("reading"), quantity.Ratio, notNegative, 0), Range: d.plain(p.get("range"), quantity.Ratio, notNegative, 0)}
		if x.Prior.Reading+x.Prior.Range == 0 {
			d.fault(n, "states nothing; write it like { reading = \"0.3 %%\", range = \"0.1 %%\" }")
		}
		p.done()
	}
	t.done()
}

// probability reads a probability above 0 and below a bound.
func (d *decoder) probability(n *node, missing, below float64, example string) float64 {
	if n == nil {
		return missing
	}
	v, ok := d.value(n, quantity.Ratio, anySign)
	if !ok {
		return missing
	}
	if !(v.X > 0 && v.X < below) {
		d.fault(n, "%q, want a probability between 0 %% and %.0f %%, like %q", n.text, 100*below, example)
		return missing
	}
	return v.X
}
