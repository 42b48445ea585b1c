package plan

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/circuit"
)

// runOut makes the steps of all blocks.
func (d *decoder) runOut() {
	p := d.plan
	block := map[string]int{} // of each id, the line
	for i := range d.blocksRead {
		b := &d.blocksRead[i]
		if len(p.Steps)+b.count() > maxSteps {
			d.fault(b.node, "the plan comes to more than %d steps with this block; shorten its lists", maxSteps)
			return
		}
		first := len(p.Steps)
		b.run(p)
		doubled := false
		for i := first; i < len(p.Steps); i++ {
			s := &p.Steps[i]
			if line, taken := block[s.ID]; taken && !doubled {
				doubled = true
				d.fault(b.node, "its step %s has the id of one in the block on line %d; give the blocks different names", s.ID, line)
			}
			block[s.ID] = s.Line
		}
	}
}

// count is the number of steps of a block, or more than maxSteps.
func (b *block) count() int {
	n := 1
	times := func(k int) { n = min(n*k, maxSteps+1) }
	for _, k := range []int{len(b.frequencies), len(b.amplitudes), len(b.taps), len(b.ranges), len(b.phases)} {
		times(k)
	}
	for _, s := range b.settings {
		times(len(s))
	}
	return n
}

// run appends the steps of a block, the slowest setting first.
func (b *block) run(p *Plan) {
	prefix, number := b.name, 1
	if b.name == "" {
		number = len(p.Steps) + 1
	}
	for _, f := range b.frequencies {
		for _, a := range b.amplitudes {
			for _, t := range b.taps {
				for set := range b.combinations {
					for _, r := range b.ranges {
						for _, phase := range b.phases {
							p.Steps = append(p.Steps, Step{
								ID: fmt.Sprint(prefix, number), Line: b.node.line,
								Frequency: f, Amplitude: a, Tap: t, Set: set, Range: r, Auto: r == autoRange,
								Phase: phase, TimeConstant: b.timeConstant, Repeats: b.repeats,
							})
							number++
						}
					}
				}
			}
		}
	}
}

// combinations yields the settings of all arms, the first arm's the slowest.
func (b *block) combinations(yield func([]int) bool) {
	set := make([]int, len(b.settings))
	var from func(arm int) bool
	from = func(arm int) bool {
		if arm == len(set) {
			return yield(append([]int(nil), set...))
		}
		for _, s := range b.settings[arm] {
			set[arm] = s
			if !from(arm + 1) {
				return false
			}
		}
		return true
	}
	from(0)
}

// headroom is what an automatic range must hold of the expected reading.
const headroom = 1.05

// chooseRanges finds the range of each step that leaves it open, and reports ladders that have no solution.
func (d *decoder) chooseRanges() {
	p := d.plan
	transfer := transfers{plan: p, known: map[string]complex128{}}
	reported := -1
	for i := range p.Steps {
		s := &p.Steps[i]
		h, err := transfer.of(s)
		if err != nil {
			if reported != s.Line {
				d.fault(d.blockOn(s.Line), "step %s: %v", s.ID, err)
				reported = s.Line
			}
			continue
		}
		if !s.Auto {
			continue
		}
		s.Range = p.Detector.smallest(p.reading(s, cmplx.Abs(h)*p.Generator.Amplitudes[s.Amplitude].EMF.X))
	}
}

// smallest is the smallest range that holds a reading, V rms, with headroom, or else the largest.
func (x *Detector) smallest(reading float64) int {
	holds, largest := -1, 0
	for k, full := range x.Ranges {
		if full > x.Ranges[largest] {
			largest = k
		}
		if full >= headroom*reading && (holds < 0 || full < x.Ranges[holds]) {
			holds = k
		}
	}
	if holds < 0 {
		return largest
	}
	return holds
}

func (d *decoder) blockOn(line int) *node {
	for _, b := range d.blocksRead {
		if b.node.line == line {
			return b.node
		}
	}
	panic("plan: a step of no block")
}

// reading is the size of what a detector without fault reads of a voltage, V rms.
func (p *Plan) reading(s *Step, volts float64) float64 {
	if p.Detector.Reads != InPhase {
		return volts
	}
	loss := p.Detector.PhaseAlignment * p.Detector.PhaseAlignment / 2 // GUM F.2.4.4
	return math.Abs(volts*math.Cos(s.Phase)) * (1 - loss)
}

// transfers remembers the ladder's transfer, which many steps have in common.
type transfers struct {
	plan  *Plan
	known map[string]complex128
	work  circuit.Workspace
}

func (t *transfers) of(s *Step) (complex128, error) {
	key := fmt.Sprint(s.Frequency, s.Tap, s.Set, t.plan.Generator.Amplitudes[s.Amplitude].AtLadderInput)
	if h, ok := t.known[key]; ok {
		return h, nil
	}
	l := t.plan.Ladder(s)
	if err := l.Check(); err != nil {
		return 0, err
	}
	h := l.Transfer(s.Frequency, &t.work)
	if cmplx.IsNaN(h) || cmplx.IsInf(h) {
		return 0, fmt.Errorf("the ladder has no solution at %g Hz; is there a resonance without resistance?", s.Frequency)
	}
	t.known[key] = h
	return h, nil
}
