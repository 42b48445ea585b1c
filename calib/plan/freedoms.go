package plan

import (
	"math"
	"slices"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// Freedoms are what the bench can be set to for further steps, and how long each change takes.
type Freedoms struct {
	Amplitudes  []Amplitude // the source off among them, where that tells something
	Settings    [][]Setting // of each arm; nil where the steps do not set it
	Frequencies []float64   // Hz
	Taps        []int       // indices in Arms
	Phases      []float64   // rad
	Ranges      []int       // indices in Detector.Ranges; -1 for the one that "auto" takes
	Times       ChangeTimes
}

// Setting is a value that an open arm can be set to.
type Setting struct {
	Quantity        // Ω
	Nominal  string // as the plan writes it
}

// ChangeTimes is how long it takes to change one thing on the bench, in s.
type ChangeTimes struct{ Amplitude, Setting, Frequency, Tap, Phase, Range float64 }

// Between is the time to change over from one step to another: one thing after the other.
func (t *ChangeTimes) Between(a, b *Step) float64 {
	seconds := 0.0
	add := func(changed bool, time float64) {
		if changed {
			seconds += time
		}
	}
	add(a.Frequency != b.Frequency, t.Frequency)
	add(a.Amplitude != b.Amplitude, t.Amplitude)
	add(a.Tap != b.Tap, t.Tap)
	for arm := range a.Set {
		add(a.Set[arm] != b.Set[arm], t.Setting)
	}
	add(a.Range != b.Range, t.Range)
	add(!samePhase(a.Phase, b.Phase), t.Phase)
	return seconds
}

// freedoms reads [bench]. What it leaves out is what the steps use already, and what costs little to add to it.
func (d *decoder) freedoms(top *table) {
	f, t := &d.plan.Bench, d.table(top.get("bench"))
	amplitudes, off := t.get("amplitudes"), t.get("source_off")
	settings, phases, ranges := t.get("settings"), t.get("phases"), t.get("ranges")
	f.Amplitudes = d.freeAmplitudes(amplitudes, off)
	f.Settings = d.freeSettings(settings)
	f.Frequencies = d.freeFrequencies(t.get("frequencies"))
	f.Taps = d.freeTaps(t.get("taps"))
	f.Phases = d.freePhases(phases)
	f.Ranges = d.ranges(ranges)
	if ranges == nil && d.plan.Fit.OffsetPerRange { // the range is then what the offset grows with
		f.Ranges = nil
		for i := range d.plan.Detector.Ranges {
			f.Ranges = append(f.Ranges, i)
		}
	}
	time := func(key string, missing float64) float64 {
		return d.plain(t.get(key), quantity.Time, notNegative, missing)
	}
	f.Times = ChangeTimes{
		Amplitude: time("time_per_amplitude", 5),
		Setting:   time("time_per_setting", 5),
		Frequency: time("time_per_frequency", 10), // the phase is to be found again
		Tap:       time("time_per_tap", 30),
		Phase:     time("time_per_phase", 2),
		Range:     time("time_per_range", 2),
	}
	t.done()
}

// freeAmplitudes are those listed, or else those of the steps with those that were measured, and a tenth and ten times of
// each; ten times only where the plan says how far the generator may go.
func (d *decoder) freeAmplitudes(list, sourceOff *node) (amplitudes []Amplitude) {
	var seen distinct
	offListed := false
	add := func(n *node) {
		emf, a, ok := d.shown(n)
		if i, used := d.drive.amplitudes.find(emf); ok && used {
			a = d.plan.Generator.Amplitudes[i]
		}
		switch {
		case !ok:
		case emf == 0:
			offListed = true
		default:
			if _, fresh := seen.of(emf); fresh {
				amplitudes = append(amplitudes, a)
			}
		}
	}
	for _, n := range d.list(list) {
		add(n)
	}
	if list == nil && len(d.faults) == 0 {
		all := slices.Clone(d.plan.Generator.Amplitudes)
		for _, m := range d.drive.measured {
			all = append(all, m.amplitude)
		}
		for _, factor := range []float64{1, 0.1, 10} {
			for _, a := range all {
				if n := d.times(a, factor); n != nil {
					add(n)
				}
			}
		}
		offListed = false
	}
	off := d.flag(sourceOff, offListed || d.plan.Detector.Reads != Magnitude)
	if offListed && !off {
		d.fault(sourceOff, "false, and \"0 V\" is among the amplitudes; keep one of the two")
	}
	if off {
		amplitudes = append(amplitudes, Amplitude{Shown: "0 V", EMF: exactly(0)})
	}
	return amplitudes
}

// times is a multiple of an amplitude as a person would write it; nil for one that the generator may not be set to, and
// for one of which nothing is known where the others were measured.
func (d *decoder) times(a Amplitude, factor float64) *node {
	text, g := a.Shown, &d.plan.Generator
	if factor != 1 {
		v, err := quantity.Parse(a.Shown, quantity.Voltage)
		if err != nil || v.X == 0 {
			return nil
		}
		text = quantity.Plain(v.X*factor, map[quantity.Convention]string{quantity.Unstated: "V", quantity.RMS: "Vrms",
			quantity.Peak: "Vpk", quantity.PeakToPeak: "Vpp"}[v.Convention])
	}
	n := &node{kind: unstable.String, text: text}
	emf, ok := d.emf(n, notNegative)
	switch most := g.MaxAmplitude; {
	case !ok || most > 0 && emf > most*(1+sameValue) || most == 0 && factor > 1:
		return nil
	case factor != 1 && a.Measured && !g.Amplitude.Stated() && !g.PerSetting.Stated():
		return nil
	}
	return n
}

// freeSettings are those listed for each open arm, or else those of the steps.
func (d *decoder) freeSettings(n *node) [][]Setting {
	all := make([][]Setting, len(d.plan.Arms))
	t := d.table(n)
	for i := range d.plan.Arms {
		n, a := t.get(d.bench.arms[i]), &d.plan.Arms[i]
		switch {
		case n != nil && d.bench.open[i] == nil:
			d.notOpen(n)
		case n != nil:
			all[i] = d.listedSettings(i, n)
		case a.Open:
			for k, q := range a.Settings {
				all[i] = append(all[i], Setting{q, a.Nominal[k]})
			}
		}
	}
	d.knownArms(t)
	return all
}

func (d *decoder) listedSettings(arm int, list *node) (settings []Setting) {
	var seen distinct
	for _, n := range d.list(list) {
		if n.kind == unstable.Table { // a block pasted into the plan could not repeat it
			d.fault(n, "a table where a setting is due, like \"1 kΩ\"; its uncertainty belongs to the arm, or into the arm's table of measured settings")
			continue
		}
		stated, q, ok := d.resistor(arm, n)
		if !ok {
			continue
		}
		s := Setting{q, nominalText(n)}
		if k, used := d.bench.open[arm].nominal.find(stated.X); used {
			s = Setting{d.plan.Arms[arm].Settings[k], d.plan.Arms[arm].Nominal[k]}
		}
		if _, fresh := seen.of(stated.X); fresh {
			settings = append(settings, s)
		}
	}
	return settings
}

func (d *decoder) freeFrequencies(n *node) (hertz []float64) {
	if n == nil {
		return d.plan.Frequencies
	}
	var seen distinct
	for _, f := range d.plan.Frequencies {
		seen.of(f)
	}
	for _, f := range d.frequencies(n) {
		i, _ := seen.of(f)
		hertz = including(hertz, seen.values[i]) // where a step has the same, in its spelling
	}
	return hertz
}

// freeTaps are those listed, or else those of the steps.
func (d *decoder) freeTaps(n *node) (taps []int) {
	if n != nil {
		var b block
		d.taps(n, &b)
		if d.plan.Fit.SeriesArm < 0 {
			d.tapsJoint(&b)
		}
		return b.taps
	}
	seen := map[int]bool{}
	for _, s := range d.plan.Steps {
		if !seen[s.Tap] {
			seen[s.Tap] = true
			taps = append(taps, s.Tap)
		}
	}
	return taps
}

// freePhases are those listed, or else those of the steps and the ones opposite. A magnitude knows no phase.
func (d *decoder) freePhases(list *node) (phases []float64) {
	add := func(phase float64) {
		for _, p := range phases {
			if samePhase(p, phase) {
				return
			}
		}
		phases = append(phases, phase)
	}
	for _, n := range d.list(list) {
		add(d.plain(n, quantity.Angle, anySign, 0))
	}
	if list != nil {
		return phases
	}
	for _, s := range d.plan.Steps {
		if add(s.Phase); d.plan.Detector.Reads == Magnitude {
			break
		}
	}
	if d.plan.Detector.Reads != Magnitude {
		for _, p := range phases {
			add(math.Mod(p+math.Pi, 2*math.Pi))
		}
	}
	return phases
}

// samePhase tells whether two angles, in rad, are one direction.
func samePhase(a, b float64) bool {
	const apart = 1e-9
	return math.Abs(math.Remainder(a-b, 2*math.Pi)) < apart
}
