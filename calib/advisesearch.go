package calib

import (
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"rungproof/calib/plan"
)

// The search is sequential: the step taken next is the one that lowers the
// logarithm of the uncertainty asked for most per minute, what was taken before
// being known (Fedorov, Theory of Optimal Experiments, 1972, chapter 2; Atkinson
// and Donev, Optimum Experimental Designs, 1992, chapters 10 and 11; both from
// memory). Of one parameter that is c-optimality, of several D_s-optimality: what
// falls is the determinant of their covariance.
//
// With C the covariance of everything, priors included, and J the rows of a step,
// its readings have the variances W⁻¹ by themselves, and
//
//	Q  = J·C·Jᵀ      those of what is predicted for them
//	Q' = J·C'·Jᵀ     the same, C' being C were the parameters asked for (a) known
//
// det C_aa falls by det(I + W½·Q'·W½)/det(I + W½·Q·W½), which is what Sherman,
// Morrison and Woodbury's update of C comes to. A turned reference or a second
// amplitude is found for what it does to C.

// LeastReturn is the fall of the logarithm of the uncertainty, a minute, below
// which a step is not worth its time: 5 %.
const LeastReturn = 0.05

// mostRepeats is more than anyone takes at one step by hand.
const mostRepeats = 1024

type search struct {
	*linearised
	asked      []int // parameters
	candidates []candidate
	chosen     []*candidate // in the order of their choice
	at         *plan.Step   // where the bench stands
	stands     float64      // the reading expected there, V
	cov        mat.SymDense // of everything
	given      mat.SymDense // of everything, were the parameters asked for known
}

// candidate is a step that could be taken.
type candidate struct {
	obs        int
	rows       []sparseRow // one, or two for two-phase readings
	expected   float64     // V
	limit      float64     // V; NaN where nothing is limited
	settle     float64     // s, from one reading to the next
	n          int         // readings chosen so far
	changeOver float64     // s, where n > 0
	wait       float64     // s, before the first reading, where n > 0
}

// time is that of n readings, in s.
func (c *candidate) time(n int) float64 { return c.changeOver + c.wait + float64(n-1)*c.settle }

// newSearch lists the candidates, the observations of m from have on. The bench stands at a step.
func newSearch(m *model, have int, asked func(w *layout) []int, stands int) (*search, error) {
	s := &search{linearised: m.linearise(have), at: &m.plan.Steps[stands]}
	s.asked = asked(s.layout)
	m.forward.compute(m.forward.stated(), 0)
	s.stands = m.expect(m.byStep[stands]).value
	for i := have; i < len(m.obs); i++ {
		if m.forward.spares(m.obs[i].step) {
			s.candidates = append(s.candidates, s.candidate(i))
		}
	}
	return s, s.update()
}

func (s *search) candidate(i int) candidate {
	m, o := s.m, &s.m.obs[i]
	step, full := &m.plan.Steps[o.step], m.plan.Detector.Ranges[o.rng]
	c := candidate{obs: i, rows: s.rows[i], expected: m.expect(i).value, limit: math.NaN()}
	if l := m.plan.LimitAt(full, step.Frequency); l != nil {
		c.limit = l.Reading*math.Abs(c.expected) + l.Range*full
	}
	c.settle = wait(step, m.plan.Detector.Poles, 0, c.limit)
	return c
}

// update finds the covariances from the information. To know a parameter is to strike it from that.
func (s *search) update() error {
	struck := mat.NewSymDense(s.information.SymmetricDim(), nil)
	struck.CopySym(s.information)
	for _, k := range s.asked {
		for i := range struck.SymmetricDim() {
			struck.SetSym(i, k, 0)
		}
		struck.SetSym(k, k, 1)
	}
	var all, rest mat.Cholesky
	if !all.Factorize(s.information) || !rest.Factorize(struck) {
		return errors.New("the steps at hand make no problem that can be solved: their information is not positive")
	}
	_, _ = all.InverseTo(&s.cov), rest.InverseTo(&s.given) // an error would only say that the condition is high
	for _, k := range s.asked {
		s.given.SetSym(k, k, 0)
	}
	return nil
}

// run chooses steps until the time is up or nothing is worth it, and says which.
func (s *search) run(seconds float64) (stopped string, err error) {
	for {
		best, n, cost := s.best(seconds)
		if best == nil {
			break
		}
		seconds -= cost
		s.take(best, n)
		if err := s.update(); err != nil {
			return "", err
		}
	}
	if best, _, _ := s.best(math.Inf(1)); best != nil {
		return StoppedByTime, nil
	}
	return StoppedByReturn, nil
}

// best is the candidate that returns most per minute, with the number of readings
// that it should then have in all and what that takes, in s; nil where none is worth its time.
func (s *search) best(seconds float64) (best *candidate, n int, cost float64) {
	most := LeastReturn
	for i := range s.candidates {
		c := &s.candidates[i]
		if s.readAlready(c) {
			continue
		}
		q, q1 := c.predicted(&s.cov), c.predicted(&s.given)
		for k := max(1, 2*c.n); k <= mostRepeats; k *= 2 {
			time := s.cost(c, k)
			if time > seconds {
				break
			}
			w := s.weight(c, k)
			fall := (math.Log(q.det(w)) - math.Log(q1.det(w))) / 2 / float64(len(s.asked))
			if rate := fall / (time / 60); rate > most*(1+1e-9) {
				best, n, cost, most = c, k, time, rate
			}
		}
	}
	return best, n, cost
}

// readAlready tells of a candidate with the source off whether one has been chosen: the
// others, at other settings, would read the same again.
func (s *search) readAlready(c *candidate) bool {
	off := func(c *candidate) bool { return s.m.forward.drops[s.m.forward.of[s.m.obs[c.obs].step]].stated == 0 }
	return c.n == 0 && off(c) && slices.ContainsFunc(s.chosen, func(other *candidate) bool {
		return off(other) && s.m.obs[other.obs].rng == s.m.obs[c.obs].rng
	})
}

// cost is the time that it takes to give a candidate n readings, in s.
func (s *search) cost(c *candidate, n int) float64 {
	if c.n > 0 { // while the bench stands there
		return float64(n-c.n) * c.settle
	}
	there := *c
	there.changeOver, there.wait = s.changeTo(c)
	return there.time(n)
}

func (s *search) changeTo(c *candidate) (changeOver, settles float64) {
	step := &s.m.plan.Steps[s.m.obs[c.obs].step]
	return s.m.plan.Bench.Times.Between(s.at, step), wait(step, s.m.plan.Detector.Poles, c.expected-s.stands, c.limit)
}

// weight is what n readings of a candidate weigh more than those that it has, along and across.
func (s *search) weight(c *candidate, n int) (w [2]float64) {
	along, across := s.m.obs[c.obs].scatter.mean(n)
	w = [2]float64{1 / (along * along), 1 / (across * across)}
	if c.n > 0 {
		along, across = s.m.obs[c.obs].scatter.mean(c.n)
		w[0] -= 1 / (along * along)
		w[1] -= 1 / (across * across)
	}
	return w
}

// take gives a candidate n readings.
func (s *search) take(c *candidate, n int) {
	w := s.weight(c, n)
	for axis := range c.rows {
		s.add(&c.rows[axis], w[axis])
	}
	if c.n == 0 {
		c.changeOver, c.wait = s.changeTo(c)
		s.chosen = append(s.chosen, c)
		s.at, s.stands = &s.m.plan.Steps[s.m.obs[c.obs].step], c.expected
	}
	c.n = n
}

// predicted is what the readings of a candidate are predicted with, by a covariance of the parameters.
func (c *candidate) predicted(cov *mat.SymDense) (q spread) {
	for a := range c.rows {
		for b := range a + 1 {
			q[a+b] = c.rows[a].times(func(i int) float64 {
				return c.rows[b].times(func(j int) float64 { return cov.At(i, j) })
			})
		}
	}
	return q
}

// spread is a covariance of what is read along and across: its elements 00, 01 and 11.
type spread [3]float64

// det is det(I + W½·Q·W½); of a rounding below zero, that of zero.
func (q spread) det(w [2]float64) float64 {
	return math.Max(1, (1+w[0]*q[0])*(1+w[1]*q[2])-w[0]*w[1]*q[1]*q[1])
}
