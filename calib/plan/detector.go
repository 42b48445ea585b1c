package plan

import (
	"fmt"
	"math"
	"regexp"
	"strconv"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

func (d *decoder) detector(top *table) {
	x := &d.plan.Detector
	n := top.get("detector")
	if n == nil {
		d.missing(top.node, "detector", "missing; a plan needs [detector] with reads, ranges and filter")
	}
	d.input(d.table(nil)) // so that nothing is left without its default
	x.ToRMS = 1
	if n == nil {
		return
	}
	t := d.table(n)
	x.Serial, x.Description = d.text(t.get("serial")), d.text(t.get("description"))
	x.Reads = d.choice(t.need("reads", `"in-phase"`), InPhase, Magnitude, TwoPhase)
	x.Displays = d.choice(t.get("displays"), "rms", "peak", "peak-to-peak")
	displays, _ := quantity.ConventionOf(x.Displays)
	x.ToRMS = displays.ToRMS()
	for _, n := range d.list(t.need("ranges", `["100 mV", "10 mV"]`)) {
		if fullScale, ok := d.displayed(n, positive); ok {
			if i := d.rangeIndex(fullScale); i >= 0 {
				d.fault(n, "the range %q is in the list already", n.text)
			}
			x.Ranges = append(x.Ranges, fullScale)
			d.bench.ranges = append(d.bench.ranges, n.text)
		}
	}
	x.Overrange = d.plain(t.get("overrange"), quantity.Ratio, notNegative, 0)
	x.Resolution = d.plain(t.get("resolution"), quantity.Ratio, notNegative, 0)
	if n := t.get("input"); n != nil {
		d.input(d.table(n))
	}
	if n := t.need("filter", `{ time_constant = "300 ms", poles = 2 }`); n != nil {
		d.filter(d.table(n))
	}
	x.Stability = d.plain(t.get("stability"), quantity.Ratio, notNegative, 0)
	x.PhaseAlignment = d.plain(t.get("phase_alignment"), quantity.Angle, notNegative, 0)
	if n := t.get("output"); n != nil {
		x.Output = d.output(d.table(n))
	}
	for _, n := range t.entries("limits") {
		d.limit(d.table(n))
	}
	t.done()
}

// displayed is V rms of a figure as the detector shows it.
func (d *decoder) displayed(n *node, s sign) (rms float64, ok bool) {
	v, ok := d.value(n, quantity.Voltage, s)
	if !ok {
		return 0, false
	}
	if v.Convention == quantity.Unstated {
		return v.X * d.plan.Detector.ToRMS, true
	}
	return v.X * v.Convention.ToRMS(), true
}

// rangeIndex is the index of a full-scale value among the detector's ranges, or -1.
func (d *decoder) rangeIndex(fullScale float64) int {
	for i, r := range d.plan.Detector.Ranges {
		if same(r, fullScale) {
			return i
		}
	}
	return -1
}

// nearestRange names the range nearest to a value that is none, ready to stand behind a message.
func (d *decoder) nearestRange(fullScale float64) string {
	best, near := math.Inf(1), ""
	for i, r := range d.plan.Detector.Ranges {
		if apart := math.Abs(math.Log(r / fullScale)); apart < best {
			best, near = apart, fmt.Sprintf("; the nearest is %q", d.bench.ranges[i])
		}
	}
	return near
}

func (d *decoder) input(t *table) {
	x := &d.plan.Detector
	x.InputResistance = d.quantity(t.get("resistance"), quantity.Resistance, positive, math.Inf(1))
	x.InputCapacitance = d.quantity(t.get("capacitance"), quantity.Capacitance, notNegative, 0)
	x.Noise = d.plain(t.get("noise"), quantity.NoiseVoltage, notNegative, 0)
	x.CurrentNoise = d.plain(t.get("current_noise"), quantity.NoiseCurrent, notNegative, 0)
	if n := t.get("max"); n != nil {
		x.InputMax, _ = d.displayed(n, positive)
	}
	t.done()
}

func (d *decoder) filter(t *table) {
	x := &d.plan.Detector
	if n := t.need("time_constant", `"300 ms"`); n != nil {
		x.TimeConstant = d.plain(n, quantity.Time, positive, 0)
	}
	if n := t.need("poles", "2"); n != nil {
		x.Poles = d.poles(n)
	}
	t.done()
}

var slope = regexp.MustCompile(`^(\d{1,3})\s*dB/oct(?:ave)?$`)

// poles is a number from 1 to 8 or a slope; each pole falls by 6 dB an octave.
func (d *decoder) poles(n *node) int {
	m := slope.FindStringSubmatch(n.text)
	if n.kind != unstable.String || m == nil {
		if n.kind == unstable.String {
			d.fault(n, "%q, want the number of poles from 1 to 8 without quotes, or a slope like \"12 dB/oct\"", n.text)
			return 0
		}
		return d.count(n, 0, 8)
	}
	dB, _ := strconv.Atoi(m[1])
	if dB%6 != 0 || dB < 6 || dB > 48 {
		d.fault(n, "%q, want 6 dB/oct a pole, up to \"48 dB/oct\" for 8 poles", n.text)
	}
	return dB / 6
}

func (d *decoder) output(t *table) *Output {
	o := &Output{Voltmeter: t.uncertainty(quantity.Voltage)}
	if n := t.need("full_scale", `"10 V"`); n != nil {
		v, _ := d.value(n, quantity.Voltage, positive)
		if v.Convention != quantity.Unstated {
			d.fault(n, "%q: the analogue output is a DC voltage; write it in V", n.text)
		}
		o.FullScale = v.X
	}
	t.done()
	d.checkDOF(t.node, o.Voltmeter)
	t.checkConvention(quantity.Unstated)
	return o
}

func (d *decoder) limit(t *table) {
	share := func(key string, missing float64) float64 {
		return d.plain(t.get(key), quantity.Ratio, notNegative, missing)
	}
	bound := func(key string, missing float64) float64 {
		if n := t.get(key); n != nil {
			missing, _ = d.displayed(n, notNegative)
		}
		return missing
	}
	l := Limit{
		Reading:       share("reading", 0),
		Range:         share("range", 0),
		Gain:          share("gain", math.NaN()),
		Phase:         d.plain(t.get("phase"), quantity.Angle, notNegative, math.NaN()),
		RangeFrom:     bound("range_from", 0),
		RangeTo:       bound("range_to", math.Inf(1)),
		FrequencyFrom: d.plain(t.get("frequency_from"), quantity.Frequency, notNegative, 0),
		FrequencyTo:   d.plain(t.get("frequency_to"), quantity.Frequency, notNegative, math.Inf(1)),
		HasReading:    t.node.fields["reading"] != nil,
		HasRange:      t.node.fields["range"] != nil,
	}
	t.done()
	if !l.HasReading && !l.HasRange {
		d.fault(t.node, "neither reading nor range; a limit is at least one of them, like reading = \"1 %%\"")
	}
	if l.RangeFrom > l.RangeTo {
		d.fault(t.get("range_from"), "range_from is above range_to, so no range fits")
	}
	if l.FrequencyFrom > l.FrequencyTo {
		d.fault(t.get("frequency_from"), "frequency_from is above frequency_to, so no frequency fits")
	}
	if n := t.node.fields["phase"]; n != nil && d.plan.Detector.Reads != TwoPhase {
		d.fault(n, "a limit of phase is for a detector that reads %q; this one reads %q", TwoPhase, d.plan.Detector.Reads)
	}
	d.plan.Detector.Limits = append(d.plan.Detector.Limits, l)
}
