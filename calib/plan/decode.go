package plan

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/fault"
)

// decoder turns the tree into a plan and gathers the faults. Its methods give zero values where something is wrong and go
// on, so that one reading of the file finds all faults.
type decoder struct {
	file       string
	plan       *Plan
	faults     fault.List
	bench      bench
	drive      drive
	blocksRead []block
}

func (d *decoder) fault(n *node, format string, args ...any) {
	what := fmt.Sprintf(format, args...)
	if owner := n.owner(); owner != "" {
		what = owner + ": " + what
	}
	d.faults = append(d.faults, fault.Fault{File: d.file, Line: n.line, Where: n.where(), What: what})
}

// missing reports a key that is not there, at the table that should hold it.
func (d *decoder) missing(n *node, key, format string, args ...any) {
	d.fault(n, format, args...)
	f := &d.faults[len(d.faults)-1]
	f.Where = strings.TrimPrefix(f.Where+"."+key, ".")
}

func (d *decoder) hint(format string, args ...any) {
	f := &d.faults[len(d.faults)-1]
	f.Hints = append(f.Hints, fmt.Sprintf(format, args...))
}

// table is a table being read. It remembers the keys that were asked for: the others are unknown.
type table struct {
	*decoder
	node   *node
	asked  []string
	broken bool // no table at all, which was said already
}

// table begins to read one; where there is none, an empty one stands in.
func (d *decoder) table(n *node) *table {
	if n == nil {
		n = &node{kind: unstable.Table}
	}
	return &table{decoder: d, node: n, broken: !d.isTable(n)}
}

func (d *decoder) isTable(n *node) bool {
	if n.kind != unstable.Table {
		d.fault(n, "%s where a table is due: { key = value, … }", n.what())
	}
	return n.kind == unstable.Table
}

func (t *table) get(key string) *node {
	if !slices.Contains(t.asked, key) {
		t.asked = append(t.asked, key)
	}
	return t.node.fields[key]
}

// need is get for a key without which a plan is not complete.
func (t *table) need(key, example string) *node {
	n := t.get(key)
	if n == nil && !t.broken {
		t.missing(t.node, key, "missing; write for instance %s = %s", key, example)
	}
	return n
}

// headKeys may stand at the top only; below a table's header TOML takes them for that table's.
var headKeys = []string{"title", "operator", "customer", "procedure", "date", "condition", "temperature", "humidity", "warm_up", "notes",
	"frequency", "tap"}

// done reports the keys that nobody asked for.
func (t *table) done() {
	for _, key := range t.node.keys {
		if !slices.Contains(t.asked, key) {
			t.fault(t.node.fields[key], "unknown key %q%s", key, cmp.Or(didYouMean(key, t.asked), "; known here: "+strings.Join(t.asked, ", ")))
			if slices.Contains(headKeys, key) {
				t.hint("keys of the plan itself stand above the first [table]")
			}
		}
	}
}

// entries is the tables of a [[list]]; a single [table] is a list of one.
func (t *table) entries(key string) []*node {
	var tables []*node
	if n := t.get(key); n != nil && n.kind != unstable.Array {
		tables = []*node{n}
	} else if n != nil {
		tables = slices.Clone(n.items)
	}
	return slices.DeleteFunc(tables, func(n *node) bool { return !t.isTable(n) })
}
