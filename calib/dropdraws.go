package calib

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"sort"

	"rungproof/circuit"
)

// dropDraws is the forward model alone, made for many draws of the inputs: the
// sizes of all different expected drops. States that differ only in the setting of
// a box share what they have in common: it is worked out once a draw.
type dropDraws struct {
	f      *forward
	groups []dropGroup
	emfs   []drawnEMF
	of     []dropOf  // by drop
	h      []float64 // by state, |H|
	nu     []float64
	Sizes  []float64 // by drop, V rms
}

// drawnEMF is the EMF of one amplitude at one frequency.
type drawnEMF struct {
	element  element
	relative []int
	volts    float64 // of this draw
}

// dropOf says what a drop is made of.
type dropOf struct{ emf, state int }

// dropGroup are states with one circuit but for the values of their own numbers.
type dropGroup struct {
	form   *circuit.Compiled
	rest   circuit.Compiled // the form with the shared numbers put in
	shared []drawnNumber
	x      []float64 // the shared numbers of this draw
	states []drawnState
}

type drawnState struct {
	state int
	own   []drawnNumber
	x     []float64
}

// drawnNumber is a number of the circuit and the elements that move it.
type drawnNumber struct {
	variable circuit.Variable
	x0       float64
	levers   []trialLever
}

// at is the number with the inputs at nu.
func (n *drawnNumber) at(nu []float64) float64 {
	x := n.x0
	for i := range n.levers {
		l := &n.levers[i]
		q, _, _ := l.element.value(nu)
		x += l.factor * (q - l.element.x)
	}
	return x
}

// newDropDraws sorts the states into groups; it fails where a circuit cannot be
// put into the compiled form.
func newDropDraws(f *forward) (*dropDraws, error) {
	d := &dropDraws{f: f, h: make([]float64, len(f.states)), nu: f.stated(), Sizes: make([]float64, len(f.drops))}
	byKey := map[string][]int{}
	var keys []string
	numbers := make([][]drawnNumber, len(f.states))
	for i := range f.states {
		numbers[i] = drawnNumbers(f, i)
		key := groupKey(&f.states[i], numbers[i])
		if byKey[key] == nil {
			keys = append(keys, key)
		}
		byKey[key] = append(byKey[key], i)
	}
	for _, key := range keys {
		g, err := newDropGroup(f, byKey[key], numbers)
		if err != nil {
			return nil, err
		}
		d.groups = append(d.groups, *g)
	}
	d.listEMFs()
	return d, nil
}

// listEMFs finds the different EMFs of the drops.
func (d *dropDraws) listEMFs() {
	at := map[string]int{}
	for i := range d.f.drops {
		drop := &d.f.drops[i]
		key := fmt.Sprint(drop.amplitude, drop.relative)
		k, known := at[key]
		if !known {
			k = len(d.emfs)
			at[key] = k
			d.emfs = append(d.emfs, drawnEMF{element: d.f.emf[drop.amplitude], relative: drop.relative})
		}
		d.of = append(d.of, dropOf{emf: k, state: drop.state})
	}
}

// drawnNumbers are the numbers of a state that its levers move, in a fixed order.
func drawnNumbers(f *forward, i int) []drawnNumber {
	s := &f.states[i]
	var out []drawnNumber
	for _, l := range s.levers {
		k := sort.Search(len(out), func(k int) bool { return !before(out[k].variable, l.at) })
		if k == len(out) || out[k].variable != l.at {
			ladder := s.stated
			out = append(out, drawnNumber{})
			copy(out[k+1:], out[k:])
			out[k] = drawnNumber{variable: l.at, x0: *l.at.In(&ladder)}
		}
		out[k].levers = append(out[k].levers, trialLever{factor: l.factor, element: f.elements[l.element]})
	}
	return out
}

func before(a, b circuit.Variable) bool {
	if a.Element != b.Element {
		return a.Element < b.Element
	}
	return a.Arm < b.Arm
}

// groupKey is the same for states whose circuits differ at most in the numbers that move.
func groupKey(s *state, numbers []drawnNumber) string {
	ladder := s.stated
	ladder.Arms = append([]circuit.Arm(nil), s.stated.Arms...)
	var moving []circuit.Variable
	for _, n := range numbers {
		*n.variable.In(&ladder) = 0
		moving = append(moving, n.variable)
	}
	return fmt.Sprint(s.frequency, ladder, moving)
}

// newDropGroup puts the numbers that are the same in all states first.
func newDropGroup(f *forward, states []int, numbers [][]drawnNumber) (*dropGroup, error) {
	g := &dropGroup{}
	first := numbers[states[0]]
	own := make([]bool, len(first))
	for _, s := range states {
		for k := range first {
			own[k] = own[k] || fmt.Sprint(numbers[s][k]) != fmt.Sprint(first[k])
		}
	}
	var order []circuit.Variable
	for k, n := range first {
		if !own[k] {
			g.shared = append(g.shared, n)
			order = append(order, n.variable)
		}
	}
	for k, n := range first {
		if own[k] {
			order = append(order, n.variable)
		}
	}
	for _, s := range states {
		ds := drawnState{state: s}
		for k, n := range numbers[s] {
			if own[k] {
				ds.own = append(ds.own, n)
			}
		}
		ds.x = make([]float64, len(ds.own))
		g.states = append(g.states, ds)
	}
	g.x = make([]float64, len(g.shared))
	var err error
	g.form, err = f.states[states[0]].stated.Compile(f.states[states[0]].frequency, order)
	return g, err
}

// draw draws the inputs and computes every drop.
func (d *dropDraws) draw(random *rand.Rand) {
	for k := range d.nu {
		in := &d.f.inputs[k]
		d.nu[k] = in.Value + in.U*deviate(in.Shape, in.DOF, random)
	}
	d.compute()
}

// compute finds the drops with the inputs at d.nu.
func (d *dropDraws) compute() {
	for i := range d.groups {
		g := &d.groups[i]
		for k := range g.shared {
			g.x[k] = g.shared[k].at(d.nu)
		}
		g.form.Contract(g.x, &g.rest)
		for j := range g.states {
			s := &g.states[j]
			for k := range s.own {
				s.x[k] = s.own[k].at(d.nu)
			}
			if len(s.x) == 1 {
				d.h[s.state] = math.Sqrt(g.rest.Squared(s.x[0]))
			} else {
				d.h[s.state] = cmplx.Abs(g.rest.Transfer(s.x))
			}
		}
	}
	for i := range d.emfs {
		e := &d.emfs[i]
		e.volts, _, _ = e.element.value(d.nu)
		for _, k := range e.relative {
			e.volts *= 1 + d.nu[k]
		}
	}
	for i, of := range d.of {
		d.Sizes[i] = d.emfs[of.emf].volts * d.h[of.state]
	}
}

// mostDropTrials is how many draws compare the expected drops: their u is then
// known to a quarter of a percent.
const mostDropTrials = 100_000

// dropsDeviation is the largest deviation of an expected drop's standard
// uncertainty by Monte Carlo from the linear one, as a share of it; NaN where no
// drop is uncertain or the circuit has no compiled form.
func (e *Evaluation) dropsDeviation(trials int, seed uint64) float64 {
	f := newForward(e.Plan)
	d, err := newDropDraws(f)
	if err != nil {
		return math.NaN()
	}
	d.compute()
	from := append([]float64(nil), d.Sizes...) // deviations from the stated drop keep their digits
	sum, squares := make([]float64, len(from)), make([]float64, len(from))
	random := rand.New(rand.NewPCG(seed, ^uint64(0)))
	for range trials {
		d.draw(random)
		for i, x := range d.Sizes {
			sum[i] += x - from[i]
			squares[i] += (x - from[i]) * (x - from[i])
		}
	}
	f.compute(f.stated(), 0)
	worst := math.NaN()
	for i := range f.drops {
		drop := &f.drops[i]
		_, unit := drop.size()
		linear := 0.0
		for j, k := range drop.inputs {
			linear = math.Hypot(linear, inner(unit, drop.byInput[j])*f.inputs[k].U)
		}
		if linear == 0 {
			continue
		}
		n := float64(trials)
		u := math.Sqrt((squares[i] - sum[i]*sum[i]/n) / (n - 1))
		if off := math.Abs(u/linear - 1); !(off <= worst) {
			worst = off
		}
	}
	return worst
}
