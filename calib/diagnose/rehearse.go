package diagnose

import (
	"context"
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/plan"
)

// Rehearsal is how often a plan, its rule and the findings get it right.
type Rehearsal struct {
	Trials       int            `json:"trials"`
	Seed         uint64         `json:"seed"`
	Interrupted  bool           `json:"interrupted"`
	Unfitted     int            `json:"unfitted"`      // trials whose fit did not settle
	Verdicts     map[string]int `json:"verdicts"`      // by outcome
	First        map[string]int `json:"first_finding"` // the first cause named; "nothing" where none is
	Named        map[string]int `json:"named"`         // trials in which a cause is named at all
	Good         int            `json:"good_steps"`    // steps whose true error is within the limit, of all trials
	Bad          int            `json:"bad_steps"`
	FalseAccepts int            `json:"false_accepts"` // bad steps that pass outright
	FalseRejects int            `json:"false_rejects"` // good steps that fail outright
	Held         map[string]int `json:"intervals_that_hold_the_truth"`
}

// Nothing is what is found where no cause is.
const Nothing = "nothing"

// Rehearse simulates a plan many times, by the model, judges each time, and counts.
// The same seed gives the same counts, whatever the number of cores.
func Rehearse(ctx context.Context, p *plan.Plan, truth calib.Truth, trials int, seed uint64, progress func(done, total int)) *Rehearsal {
	next, results := make(chan int), make(chan *Rehearsal)
	var workers sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		workers.Go(func() {
			s := calib.NewSimulator(p)
			for k := range next {
				results <- rehearseOnce(p, s, truth, rand.New(rand.NewPCG(seed, uint64(k))))
			}
		})
	}
	go func() {
		defer close(next)
		for k := range trials {
			select {
			case next <- k:
			case <-ctx.Done():
				return
			}
		}
	}()
	go func() { workers.Wait(); close(results) }()
	sum := newRehearsal()
	sum.Seed = seed
	for r := range results {
		sum.add(r)
		if progress != nil {
			progress(sum.Trials, trials)
		}
	}
	sum.Interrupted = sum.Trials < trials
	return sum
}

func newRehearsal() *Rehearsal {
	return &Rehearsal{Verdicts: map[string]int{}, First: map[string]int{}, Named: map[string]int{}, Held: map[string]int{}}
}

func (r *Rehearsal) add(o *Rehearsal) {
	r.Trials += o.Trials
	r.Unfitted += o.Unfitted
	r.Good, r.Bad = r.Good+o.Good, r.Bad+o.Bad
	r.FalseAccepts, r.FalseRejects = r.FalseAccepts+o.FalseAccepts, r.FalseRejects+o.FalseRejects
	for _, m := range [][2]map[string]int{{r.Verdicts, o.Verdicts}, {r.First, o.First}, {r.Named, o.Named}, {r.Held, o.Held}} {
		for k, n := range m[1] {
			m[0][k] += n
		}
	}
}

// rehearseOnce is one trial.
func rehearseOnce(p *plan.Plan, s *calib.Simulator, truth calib.Truth, random *rand.Rand) *Rehearsal {
	r := newRehearsal()
	r.Trials = 1
	e, err := calib.Evaluate(p, s.Readings(truth, random))
	if err != nil {
		r.Unfitted = 1
		return r
	}
	r.Verdicts[e.Result.Verdict.String()]++
	first := Nothing
	for _, f := range Findings(e) {
		if Accuses(f) {
			if first == Nothing {
				first = f.Kind
			}
			r.Named[f.Kind] = 1
		}
	}
	r.First[first]++
	for i, step := range e.Result.Steps {
		limit := float64(step.Limit)
		if math.IsNaN(limit) {
			continue
		}
		if math.Abs(s.Errors()[i]) <= limit {
			r.Good++
			if step.Outcome == decision.Fail {
				r.FalseRejects++
			}
		} else {
			r.Bad++
			if step.Outcome == decision.Pass {
				r.FalseAccepts++
			}
		}
	}
	held := func(name string, x calib.Estimate, truth float64) {
		if x.Known && math.Abs(x.Value-truth) <= x.Expanded() {
			r.Held[name]++
		}
	}
	offset, series := e.Result.Deciding()
	held("gain", e.Result.Fit.Gain, truth.Gain)
	held("offset", offset, truth.Offset)
	held("series resistance", series, truth.Series)
	return r
}

// Accuses tells whether a finding names a cause, rather than a property of the plan
// or of the bench's uncertainty.
func Accuses(f calib.Finding) bool {
	switch f.Kind {
	case RangeGain, Scatter, Misfit, OddReading, NoSignal, NotSeparable:
		return true
	}
	return f.Evidence != nil
}
