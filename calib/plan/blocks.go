package plan

import (
	"fmt"
	"slices"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// maxSteps and maxRepeats are far above any day's work; more is a slip in the plan.
const (
	maxSteps   = 1_000_000
	maxRepeats = 1_000_000
)

// block is a [[steps]] table; the steps are all combinations of its lists.
type block struct {
	node         *node
	name         string
	frequencies  []float64 // Hz
	amplitudes   []int
	taps         []int
	tapNodes     []*node
	settings     [][]int   // of each arm; {0} where the steps do not set it
	ranges       []int     // autoRange for one to be chosen
	phases       []float64 // rad
	timeConstant float64   // s
	repeats      int
}

const autoRange = -1

// blocks reads the [[steps]] tables and runs them out.
func (d *decoder) blocks(top *table) {
	nodes := top.entries("steps")
	if len(nodes) == 0 {
		d.missing(top.node, "steps", "missing; a plan needs at least one [[steps]] with an amplitude")
	}
	whole := block{}
	frequency, tap := top.get("frequency"), top.get("tap")
	whole.frequencies = d.frequencies(frequency)
	if tap != nil {
		d.taps(tap, &whole)
	} else if i := d.plan.lastShunt(); i >= 0 {
		whole.taps, whole.tapNodes = []int{i}, []*node{top.node}
	}
	var seen distinct
	for _, n := range nodes {
		t := d.table(n)
		b := whole
		if f := t.get("frequency"); f != nil {
			b.frequencies = d.frequencies(f)
		} else if frequency == nil {
			d.missing(n, "frequency", "missing; neither the block nor the plan states a frequency = \"137 Hz\"")
		}
		b.frequencies = slices.Clone(b.frequencies)
		for i, f := range b.frequencies {
			k, _ := seen.of(f)
			b.frequencies[i] = seen.values[k]
		}
		d.block(t, &b)
		d.blocksRead = append(d.blocksRead, b)
	}
	d.plan.Frequencies = seen.values
	d.runOut()
}

func (d *decoder) block(t *table, b *block) {
	b.node = t.node
	if n := t.get("name"); n != nil {
		b.name = d.name(n)
		if i := strings.IndexAny(b.name, ",;\"#\t\n\r"); i >= 0 {
			d.fault(n, "%q holds %q, which readings in CSV cannot; use letters, digits, - and _", b.name, b.name[i:i+1])
		}
	}
	for _, n := range d.list(t.need("amplitude", `"2 V"`)) {
		if i, ok := d.amplitude(n); ok {
			b.amplitudes = append(b.amplitudes, i)
		}
	}
	if n := t.get("tap"); n != nil {
		d.taps(n, b)
	}
	b.settings = d.settings(t)
	b.ranges = d.ranges(t.get("range"))
	b.phases = []float64{0}
	if n := t.get("phase"); n != nil {
		b.phases = nil
		for _, n := range d.list(n) {
			b.phases = append(b.phases, d.plain(n, quantity.Angle, anySign, 0))
		}
	}
	b.timeConstant = d.plain(t.get("time_constant"), quantity.Time, positive, d.plan.Detector.TimeConstant)
	b.repeats = d.count(t.get("repeats"), 1, maxRepeats)
	t.done()
}

func (d *decoder) frequencies(n *node) (hertz []float64) {
	for _, n := range d.list(n) {
		if v, ok := d.value(n, quantity.Frequency, positive); ok {
			hertz = append(hertz, v.X)
		}
	}
	return hertz
}

// taps reads the arms that the detector is connected to.
func (d *decoder) taps(n *node, b *block) {
	b.taps, b.tapNodes = nil, nil
	for _, n := range d.list(n) {
		i := d.refer(n, "arm", d.bench.arms)
		if i < 0 {
			continue
		}
		if d.plan.Arms[i].Place == Series {
			d.fault(n, "%q is a series arm; the detector taps a shunt or a tap arm: %s", n.text, quotedList(d.tappable()))
			continue
		}
		b.taps, b.tapNodes = append(b.taps, i), append(b.tapNodes, n)
	}
}

func (d *decoder) tappable() (names []string) {
	for _, a := range d.plan.Arms {
		if a.Place != Series {
			names = append(names, a.Name)
		}
	}
	return names
}

// settings reads what a block sets the open arms to.
func (d *decoder) settings(t *table) [][]int {
	settings := make([][]int, len(d.plan.Arms))
	set := d.table(t.get("set"))
	for i := range settings {
		settings[i] = []int{0}
		name := d.bench.arms[i]
		n := set.get(name)
		switch open := d.bench.open[i] != nil; {
		case n == nil && open && !set.broken:
			d.missing(t.node, "set", "the block does not set %q, which has no value of its own; add set = { %s = \"1 kΩ\" }", name, tomlKey(name))
		case n == nil:
		case !open:
			d.notOpen(n)
		default:
			settings[i] = nil
			for _, n := range d.list(n) {
				if k, ok := d.armSetting(i, n); ok {
					settings[i] = append(settings[i], k)
				}
			}
		}
	}
	d.knownArms(set)
	return settings
}

// notOpen reports an arm that the steps cannot set.
func (d *decoder) notOpen(n *node) {
	d.fault(n, "%q has a value, or is a joint, and cannot be set; only an arm without value can", n.key)
}

// knownArms reports the keys of a table that are no arms.
func (d *decoder) knownArms(t *table) {
	for _, key := range t.node.keys {
		d.refer(&node{kind: unstable.String, text: key, line: t.node.fields[key].line, key: key, parent: t.node}, "arm", d.bench.arms)
	}
}

// tomlKey is a name as a key, in quotes where TOML wants them.
func tomlKey(name string) string {
	for _, r := range name {
		if !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || r == '-' || r == '_') {
			return fmt.Sprintf("%q", name)
		}
	}
	return name
}

func (d *decoder) ranges(n *node) (indices []int) {
	if n == nil {
		return []int{autoRange}
	}
	for _, n := range d.list(n) {
		if n.kind == unstable.String && n.text == "auto" {
			indices = append(indices, autoRange)
			continue
		}
		fullScale, ok := d.displayed(n, positive)
		if !ok {
			continue
		}
		i := d.rangeIndex(fullScale)
		if i < 0 && len(d.bench.ranges) > 0 {
			d.fault(n, "%q is no range of the detector; it has %s%s", n.text, quotedList(d.bench.ranges), d.nearestRange(fullScale))
		} else {
			indices = append(indices, i)
		}
	}
	return indices
}
