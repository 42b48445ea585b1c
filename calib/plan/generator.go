package plan

import (
	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// drive is what turns an amplitude as the generator shows it into an EMF.
type drive struct {
	shownAs    quantity.Convention // Unstated where the plan does not say
	shownFor   float64             // open-circuit amplitude over the figure shown
	complained bool                // about a figure of which nobody says what it is
	measured   []measuredAmplitude
	amplitudes distinct // EMF, of the generator's Amplitudes
}

// measuredAmplitude is an entry of the generator's settings; emf is what the figure shown would mean.
type measuredAmplitude struct {
	emf       float64
	amplitude Amplitude
}

func (d *decoder) generator(top *table) {
	g := &d.plan.Generator
	g.Amplitude, g.PerSetting, g.PerFrequency = unstated, unstated, unstated
	d.drive.shownFor = 1
	n := top.get("generator")
	if n == nil {
		d.missing(top.node, "generator", "missing; a plan needs [generator] with source_resistance and shown_as")
		d.drive.complained = true
		return
	}
	t := d.table(n)
	g.SourceResistance = d.quantity(t.need("source_resistance", `"50 Ω"`), quantity.Resistance, notNegative, 0)
	if n := t.get("shown_as"); n != nil {
		g.ShownAs = d.choice(n, "peak-to-peak", "peak", "rms")
		d.drive.shownAs, _ = quantity.ConventionOf(g.ShownAs)
	}
	g.ShownFor = d.choice(t.get("shown_for"), "open circuit", "matched load")
	if g.ShownFor == "matched load" {
		d.drive.shownFor = 2
	}
	g.Amplitude = t.relative("amplitude")
	g.PerSetting = t.relative("per_setting")
	g.PerFrequency = t.relative("per_frequency")
	for _, n := range d.list(t.get("settings")) {
		d.setting(n)
	}
	if n := t.get("max_amplitude"); n != nil {
		g.MaxAmplitude, _ = d.emf(n, positive)
	}
	t.done()
}

// relative reads a table that holds a relative uncertainty only.
func (t *table) relative(key string) Uncertainty {
	n := t.get(key)
	if n == nil || !t.isUncertainty(n) {
		return unstated
	}
	inner := t.table(n)
	u := inner.uncertainty(quantity.Ratio)
	inner.done()
	t.checkDOF(n, u)
	return u
}

// isUncertainty reports a share that does not say what it is.
func (d *decoder) isUncertainty(n *node) bool {
	if n.kind == unstable.String {
		d.fault(n, "%q does not say which uncertainty it is; write { tolerance = %q }, or u or U in place of tolerance", n.text, n.text)
		return false
	}
	return d.isTable(n)
}

// setting reads one amplitude that was measured.
func (d *decoder) setting(n *node) {
	t := d.table(n)
	shown := t.need("shown", `"2 V"`)
	measured := t.need("measured", `"1.9987(6) V"`)
	at := d.choice(t.get("at"), "open circuit", "ladder input")
	t.done()
	if shown == nil || measured == nil {
		return
	}
	emf, ok := d.emf(shown, notNegative)
	q, c, okMeasured := d.stated(measured, quantity.Voltage, notNegative)
	if !ok || !okMeasured {
		return
	}
	for _, m := range d.drive.measured {
		if same(m.emf, emf) {
			d.fault(shown, "the setting %q is in the list already, as %q", shown.text, m.amplitude.Shown)
			return
		}
	}
	scale := d.toRMS(measured, quantity.Value{X: q.X, Convention: c}, d.drive.shownAs)
	q.X *= scale
	q.Absolute *= scale
	d.drive.measured = append(d.drive.measured, measuredAmplitude{emf, Amplitude{
		Shown: shown.text, EMF: q, Measured: true, AtLadderInput: at == "ladder input",
	}})
}

// emf is the open-circuit amplitude, V rms, of a figure that the generator shows.
func (d *decoder) emf(n *node, s sign) (emf float64, ok bool) {
	v, ok := d.value(n, quantity.Voltage, s)
	if !ok {
		return 0, false
	}
	return v.X * d.toRMS(n, v, d.drive.shownAs) * d.drive.shownFor, true
}

// toRMS is the factor that makes a voltage V rms: by its own convention, or by the one of its surroundings where it states none.
func (d *decoder) toRMS(n *node, v quantity.Value, around quantity.Convention) float64 {
	c := v.Convention
	if c == quantity.Unstated {
		c = around
	}
	if c != quantity.Unstated {
		return c.ToRMS()
	}
	if v.X != 0 && !d.drive.complained {
		d.fault(n, "%s may be rms, peak or peak-to-peak; add shown_as to [generator]", n.what())
		d.hint("or let the figure say it: Vrms, Vpk or Vpp in place of V")
		d.drive.complained = true
	}
	return 1
}

// amplitude is the index in the generator's Amplitudes of a figure that a step asks for.
func (d *decoder) amplitude(n *node) (i int, ok bool) {
	emf, a, ok := d.shown(n)
	if !ok {
		return 0, false
	}
	i, fresh := d.drive.amplitudes.of(emf)
	if fresh {
		d.plan.Generator.Amplitudes = append(d.plan.Generator.Amplitudes, a)
	}
	return i, true
}

// shown is the amplitude that the generator gives at a figure that it shows, and what the figure itself means, V rms.
func (d *decoder) shown(n *node) (emf float64, a Amplitude, ok bool) {
	emf, ok = d.emf(n, notNegative)
	if !ok {
		return 0, a, false
	}
	g := &d.plan.Generator
	if g.MaxAmplitude > 0 && emf > g.MaxAmplitude*(1+sameValue) {
		d.fault(n, "%q is above the generator's max_amplitude: %s against %s rms open circuit", n.text,
			quantity.Format(emf, 4, "V"), quantity.Format(g.MaxAmplitude, 4, "V"))
	}
	a = Amplitude{Shown: n.text, EMF: exactly(emf)}
	for _, m := range d.drive.measured {
		if same(m.emf, emf) {
			a = m.amplitude
		}
	}
	return emf, a, true
}
