package circuit

import (
	"fmt"
	"strings"
)

// netlist is a ladder taken apart into two-terminal parts between named nodes, with nothing of the ladder's structure left. It serves
// the circuit simulator and the nodal solution.
type netlist struct {
	parts []part
	nodes int
}

// part of a netlist. Kinds: R, L, C; V an EMF with its + at node a.
type part struct {
	kind  byte
	name  string
	a, b  string
	value float64
}

func (n *netlist) add(kind byte, name, a, b string, value float64) {
	n.parts = append(n.parts, part{kind, name, a, b, value})
}

func (n *netlist) node() string {
	n.nodes++
	return fmt.Sprintf("n%d", n.nodes)
}

// chain adds resistors or inductors in series from a to b.
func (n *netlist) chain(a, b string, parts ...part) {
	for i, p := range parts {
		to := b
		if i < len(parts)-1 {
			to = n.node()
		}
		n.add(p.kind, p.name, a, to, p.value)
		a = to
	}
}

// takeApart names the detector's terminals "det" and "0". The EMF is part "emf".
func takeApart(l *Ladder) *netlist {
	n := &netlist{}
	low := n.node()
	joint := n.node()
	top := n.node()
	n.add('V', "emf", top, low, 1)
	n.add('R', "source", top, joint, l.Source)
	n.add('R', "return", "0", low, l.Return)
	n.add('R', "returnseen", "com", "0", l.ReturnSeen)
	tap := ""
	for k, a := range l.Arms {
		id := func(s string) string { return fmt.Sprintf("%s%d", s, k) }
		if a.Place == Tap {
			if k == l.Tap {
				tap = joint
			}
			continue
		}
		end := "com"
		if a.Place == Series {
			end = n.node()
		}
		terminal, inner := n.node(), n.node()
		n.add('R', id("lead"), joint, terminal, a.Lead)
		n.add('R', id("stray"), terminal, inner, a.Stray)
		n.chain(inner, end, part{kind: 'R', name: id("r"), value: a.R}, part{kind: 'L', name: id("l"), value: a.L})
		n.add('C', id("c"), inner, end, a.C)
		if k == l.Tap {
			tap = terminal
		}
		if a.Place == Series {
			joint = end
		}
	}
	n.add('R', "sense", tap, "det", l.Input.Lead)
	n.add('R', "inputr", "det", "0", l.Input.R)
	n.add('C', "inputc", "det", "0", l.Input.C)
	return n
}

// spice writes the parts with a suffix to all names and nodes but ground. Zero resistors and inductors become sources of 0 V. With
// quiet the EMF is zero and 1 A flows into the detector's terminals.
func (n *netlist) spice(suffix string, quiet bool) string {
	var s strings.Builder
	at := func(node string) string {
		if node == "0" {
			return node
		}
		return node + suffix
	}
	emf := 1
	if quiet {
		emf = 0
		fmt.Fprintf(&s, "Iprobe%s 0 %s DC 0 AC 1\n", suffix, at("det"))
	}
	for _, p := range n.parts {
		switch {
		case p.kind == 'V':
			fmt.Fprintf(&s, "V%s%s %s %s DC 0 AC %d\n", p.name, suffix, at(p.a), at(p.b), emf)
		case p.kind == 'C' && p.value == 0 || p.value > 1e300:
		case p.value == 0:
			fmt.Fprintf(&s, "Vshort%s%s %s %s DC 0 AC 0\n", p.name, suffix, at(p.a), at(p.b))
		default:
			fmt.Fprintf(&s, "%c%s%s %s %s %.17g\n", p.kind, p.name, suffix, at(p.a), at(p.b), p.value)
		}
	}
	return s.String()
}
