package circuit

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

// The nodal solution: Kirchhoff's laws for every node and every part of a netlist, solved densely with 200 binary digits. It shares no step
// with the ladder's method, and its own rounding is far below float64's.

const precision = 200

type bigComplex struct{ re, im *big.Float }

func bigOf(re, im float64) bigComplex {
	return bigComplex{new(big.Float).SetPrec(precision).SetFloat64(re), new(big.Float).SetPrec(precision).SetFloat64(im)}
}

func bigNew() *big.Float { return new(big.Float).SetPrec(precision) }

func (x bigComplex) isZero() bool { return x.re.Sign() == 0 && x.im.Sign() == 0 }

func (x bigComplex) minus(y bigComplex) bigComplex {
	return bigComplex{bigNew().Sub(x.re, y.re), bigNew().Sub(x.im, y.im)}
}

func (x bigComplex) times(y bigComplex) bigComplex {
	rr, ii := bigNew().Mul(x.re, y.re), bigNew().Mul(x.im, y.im)
	ri, ir := bigNew().Mul(x.re, y.im), bigNew().Mul(x.im, y.re)
	return bigComplex{rr.Sub(rr, ii), ri.Add(ri, ir)}
}

func (x bigComplex) over(y bigComplex) bigComplex {
	n := bigNew().Mul(y.re, y.re)
	n.Add(n, bigNew().Mul(y.im, y.im))
	q := x.times(bigComplex{y.re, bigNew().Neg(y.im)})
	return bigComplex{q.re.Quo(q.re, n), q.im.Quo(q.im, n)}
}

func (x bigComplex) float() complex128 {
	re, _ := x.re.Float64()
	im, _ := x.im.Float64()
	return complex(re, im)
}

// nodal returns the current through every part, a to b (+ of an EMF outward), by name, and the voltages of nodes. emf and probe are the EMF and
// the current into the detector's terminals. ok is false where the laws do not determine the currents.
func (n *netlist) nodal(omega, emf, probe float64) (current, voltage map[string]complex128, ok bool) {
	column := map[string]int{}
	for _, p := range n.parts {
		for _, node := range []string{p.a, p.b} {
			if _, seen := column[node]; node != "0" && !seen {
				column[node] = len(column)
			}
		}
	}
	nodes := len(column)
	size := nodes + len(n.parts)
	m := make([][]bigComplex, size)
	for i := range m {
		m[i] = make([]bigComplex, size+1)
		for j := range m[i] {
			m[i][j] = bigOf(0, 0)
		}
	}
	// Each part's law reads u·(Va − Vb) − z·I = right side, and its current leaves node a and enters b.
	for k, p := range n.parts {
		row, col := nodes+k, nodes+k
		u, z, right := bigOf(1, 0), bigOf(0, 0), bigOf(0, 0)
		switch p.kind {
		case 'V':
			right = bigOf(emf, 0)
		case 'R':
			if p.value > 1e300 {
				u, z = bigOf(0, 0), bigOf(1, 0)
			} else {
				z = bigOf(p.value, 0)
			}
		case 'L':
			z = bigOf(0, omega).times(bigOf(p.value, 0))
		case 'C':
			u, z = bigOf(0, omega).times(bigOf(p.value, 0)), bigOf(1, 0)
		}
		minus := bigOf(0, 0).minus(u)
		if j, here := column[p.a]; here {
			m[row][j], m[j][col] = u, bigOf(1, 0)
		}
		if j, here := column[p.b]; here {
			m[row][j], m[j][col] = minus, bigOf(-1, 0)
		}
		m[row][col] = bigOf(0, 0).minus(z)
		m[row][size] = right
	}
	m[column["det"]][size] = bigOf(probe, 0)

	x, ok := eliminate(m)
	if !ok {
		return nil, nil, false
	}
	current, voltage = map[string]complex128{}, map[string]complex128{"0": 0}
	for node, j := range column {
		voltage[node] = x[j].float()
	}
	for k, p := range n.parts {
		i := x[nodes+k].float()
		if cmplx.Abs(i) < 1e-50 { // what 200 digits leave of an arm that leads nowhere
			i = 0
		}
		if p.kind == 'V' {
			i = -i
		}
		current[p.name] = i
	}
	return current, voltage, true
}

// eliminate solves the rows by Gauss's method with row pivoting.
func eliminate(m [][]bigComplex) (x []bigComplex, ok bool) {
	size := len(m)
	for c := range m {
		best := c
		for r := c; r < size; r++ {
			if cmplx.Abs(m[r][c].float()) > cmplx.Abs(m[best][c].float()) {
				best = r
			}
		}
		if cmplx.Abs(m[best][c].float()) < 1e-40 {
			return nil, false
		}
		m[c], m[best] = m[best], m[c]
		for r := c + 1; r < size; r++ {
			if m[r][c].isZero() {
				continue
			}
			factor := m[r][c].over(m[c][c])
			for j := c; j <= size; j++ {
				if !m[c][j].isZero() {
					m[r][j] = m[r][j].minus(factor.times(m[c][j]))
				}
			}
		}
	}
	x = make([]bigComplex, size)
	for c := size - 1; c >= 0; c-- {
		sum := m[c][size]
		for j := c + 1; j < size; j++ {
			if !m[c][j].isZero() {
				sum = sum.minus(m[c][j].times(x[j]))
			}
		}
		x[c] = sum.over(m[c][c])
	}
	return x, true
}

// compare checks all currents and ports of a response against the nodal solution.
func compare(t interface {
	Helper()
	Errorf(string, ...any)
}, name string, l *Ladder, f, tolerance float64) {
	t.Helper()
	r := l.Solve(f, nil)
	n := takeApart(l)
	i, v, ok := n.nodal(2*math.Pi*f, 1, 0)
	_, probed, _ := n.nodal(2*math.Pi*f, 0, 1)
	if !ok {
		t.Errorf("%s: no nodal solution", name)
		return
	}
	name = fmt.Sprintf("%s at %g Hz: ", name, f)
	near(t, name+"H", r.H, v["det"], tolerance)
	near(t, name+"Z", r.Z, probed["det"], tolerance)
	near(t, name+"source current", r.Source, i["emf"], tolerance)
	near(t, name+"input impedance", r.InputImpedance, 1/i["emf"], tolerance)
	near(t, name+"detector current", r.Detector, i["sense"], tolerance)
	near(t, name+"transfer", l.Transfer(f, nil), v["det"], tolerance)
	for k, a := range l.Arms {
		if a.Place != Tap {
			near(t, fmt.Sprintf("%scurrent of arm %d", name, k+1), r.Arms[k], i[fmt.Sprintf("stray%d", k)], tolerance)
		}
	}
}

func TestAgainstNodalSolution(t *testing.T) {
	for _, s := range samples() {
		for _, f := range []float64{0, 17, 1e3, 1e5} {
			compare(t, s.name, &s.ladder, f, 1e-12)
		}
	}
}

func TestAgainstNodalSolutionAnyLadder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLadder().Draw(t, "ladder")
		f := rapid.SampledFrom([]float64{0, 33, 1e3, 1e5}).Draw(t, "f")
		compare(t, "any ladder", l, f, 1e-11)
	})
}

// A load of a thousandth of the tap's own impedance and less takes digits from small currents, not from H and Z.
func TestAgainstNodalSolutionHeavyLoad(t *testing.T) {
	for _, s := range samples() {
		n := takeApart(&s.ladder)
		_, driven, _ := n.nodal(2*math.Pi*1e7, 1, 0)
		_, probed, _ := n.nodal(2*math.Pi*1e7, 0, 1)
		r := s.ladder.Solve(1e7, nil)
		near(t, s.name+" at 10 MHz: H", r.H, driven["det"], 1e-12)
		near(t, s.name+" at 10 MHz: Z", r.Z, probed["det"], 1e-12)
	}
}
