package diagnose

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"sort"

	"rungproof/calib"
	"rungproof/calib/detector"
	"rungproof/calib/plan"
)

// Deciding is what tells the cause that is ranked first from its nearest rival.
type Deciding struct {
	First  string         `json:"first"`
	Rival  string         `json:"rival"` // "" where no other cause explains as much
	Words  string         `json:"words"` // the reading that decides, in words
	Steps  []DecidingStep `json:"steps"` // that the bench allows, the most telling a minute first
	Blocks []string       `json:"blocks"`
}

// DecidingStep is a step at which the two causes let expect different readings.
type DecidingStep struct {
	Step     plan.Step  `json:"-"`
	Plan     *plan.Plan `json:"-"`        // that the step belongs to
	Apart    float64    `json:"apart"`    // V rms, between what the two let expect
	Sigma    float64    `json:"sigma"`    // V rms, of one reading
	Readings int        `json:"readings"` // that part them by telling standard deviations
	Time     float64    `json:"time"`     // s
}

const (
	telling       = 3  // standard deviations between the two causes
	mostReadings  = 64 // at one step; one that needs more tells nothing
	mostDeciding  = 3  // steps proposed
	mostPromising = 40 // candidates that are worked out in full
)

// Decide finds the steps that part the first cause from its nearest rival in the
// least time: readings that the first cause would give, as large as it was found,
// are fitted with the rival, inputs and all, and what does not fit is what the step
// tells (T-optimality: Atkinson and Fedorov, Biometrika 62 (1975) 57).
func Decide(e *calib.Evaluation) (*Deciding, error) {
	found, _, _ := search(e)
	if len(found) == 0 {
		return &Deciding{First: Nothing}, nil
	}
	first := found[0]
	d := &Deciding{First: first.kind, Words: first.decides}
	if len(first.rivals) == 0 {
		return d, nil
	}
	rival := first.rivals[0]
	d.Rival = rival.kind
	all, err := e.Plan.Candidates()
	if err != nil {
		return nil, err
	}
	have, err := apartness(e.Plan, first, rival)
	if err != nil {
		return nil, err
	}
	for _, i := range promising(all, len(e.Plan.Steps), first, rival) {
		step := all.Steps[i]
		for n := 1; n <= mostReadings; n *= 2 {
			more := *all
			step.Repeats = n
			more.Steps = append(all.Steps[:len(e.Plan.Steps):len(e.Plan.Steps)], step)
			apart, err := apartness(&more, first, rival)
			if err != nil {
				return nil, err
			}
			if apart-have < telling*telling {
				continue
			}
			settle := detector.Settling(step.TimeConstant, e.Plan.Detector.Poles, 0.001)
			d.Steps = append(d.Steps, DecidingStep{Step: step, Plan: all, Apart: math.Sqrt(apart - have), Readings: n,
				Time: e.Plan.Bench.Times.Between(&e.Plan.Steps[len(e.Plan.Steps)-1], &step) + settle*float64(n)})
			break
		}
	}
	sort.SliceStable(d.Steps, func(i, j int) bool { return d.Steps[i].Time < d.Steps[j].Time })
	d.Steps = d.Steps[:min(mostDeciding, len(d.Steps))]
	for i := range d.Steps {
		d.Blocks = append(d.Blocks, all.Block(&d.Steps[i].Step, e.Plan.Prefix()+string(rune('a'+i))))
	}
	return d, nil
}

// apartness is the χ² that is left where readings without noise, which the first
// cause made, are fitted with the rival in its place.
func apartness(p *plan.Plan, first ranked, rival rival) (float64, error) {
	added, err := Plant(p, []Fault{{first.kind, first.variant.label, first.size}})
	if err != nil {
		return 0, err
	}
	e, err := calib.Evaluate(p, calib.NewSimulator(p).Readings(calib.Truth{Gain: 1, Fine: true, Still: true, Added: added}, rand.New(rand.NewPCG(0, 0))))
	if err != nil {
		return 0, err
	}
	h, err := e.Suppose()
	if err != nil {
		return 0, err
	}
	term, err := find(causes(e), h, Fault{Kind: rival.kind, Variant: rival.label})
	if err != nil {
		return 0, err
	}
	if h, err = e.Suppose(term); err != nil {
		return 0, err
	}
	return h.ChiSquared, nil
}

// promising are the candidates at which the two causes, each as large as the
// readings have it, differ most for their scatter.
func promising(all *plan.Plan, own int, first ranked, rival rival) []int {
	e, err := calib.Evaluate(all, calib.NewSimulator(all).Readings(calib.Truth{Gain: 1, Fine: true, Still: true}, rand.New(rand.NewPCG(0, 0))))
	if err != nil {
		return nil
	}
	h, err := e.Suppose()
	if err != nil {
		return nil
	}
	terms := causes(e)
	a, errA := find(terms, h, Fault{Kind: first.kind, Variant: first.variant.label})
	b, errB := find(terms, h, Fault{Kind: rival.kind, Variant: rival.label})
	if errA != nil || errB != nil {
		return nil
	}
	apart := map[int]float64{}
	var out []int
	for i, s := range e.Sights() {
		if s.Step >= own {
			apart[s.Step] = cmplx.Abs(complex(first.size, 0)*a.Add[i]-complex(rival.size, 0)*b.Add[i]) / s.Sigma
			out = append(out, s.Step)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return apart[out[i]] > apart[out[j]] })
	return out[:min(mostPromising, len(out))]
}
