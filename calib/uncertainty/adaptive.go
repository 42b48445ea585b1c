package uncertainty

import "math"

// Adaptive is the adaptive Monte Carlo procedure of JCGM 101, 7.9.4, for several
// results at once (JCGM 102, 7.8). Blocks of trials are added until the estimate,
// the standard uncertainty and both ends of the probabilistically symmetric
// interval are steady: twice the standard deviation of each one's mean over the
// blocks is within the numerical tolerance of that result's uncertainty.
//
//	for a := NewAdaptive(n, 0.95, 2); !a.Done(); {
//		a.Add(simulate(BlockSize(0.95)))
//	}
type Adaptive struct {
	coverage float64
	digits   int
	results  []steadiness
}

// steadiness of one result.
type steadiness struct {
	blocks *Moments // of mean, standard deviation, lower and upper end; a value a block
	trials *Moments // of all trials
}

// NewAdaptive for so many results, intervals of the given coverage and so many
// significant digits of the standard uncertainties.
func NewAdaptive(results int, coverage float64, digits int) *Adaptive {
	checkCoverage(coverage)
	if results < 1 {
		panic("uncertainty: nothing to simulate")
	}
	a := &Adaptive{coverage: coverage, digits: digits, results: make([]steadiness, results)}
	for i := range a.results {
		a.results[i] = steadiness{NewMoments(4), NewMoments(1)}
	}
	return a
}

// BlockSize is the number of trials in a block: the larger of 100/(1−p), rounded
// up, and 10⁴ (JCGM 101, 7.9.4 b).
func BlockSize(coverage float64) int {
	checkCoverage(coverage)
	const rounding = 1e-12 // of 1 − p, lest 100/(1 − 0.99) be a trial more
	return int(max(math.Ceil(100/(1-coverage)*(1-rounding)), 1e4))
}

// Add takes a block: for each result the values of its trials. It puts them in another
// order; where they are to be kept, keep them before.
func (a *Adaptive) Add(block [][]float64) {
	if len(block) != len(a.results) {
		panic("uncertainty: a block of another number of results")
	}
	for i, values := range block {
		s := Summarise(values, a.coverage)
		a.results[i].blocks.Add(s.Mean, s.SD, s.Symmetric.Low, s.Symmetric.High)
		for _, v := range values {
			a.results[i].trials.Add(v)
		}
	}
}

// Needed estimates the number of blocks at which the procedure will stop: the
// standard deviation of a mean over h blocks is s/√h, s being that of single
// blocks, and 2·s/√h ≤ δ where
//
//	h ≥ (2·s/δ)²  of the figure that takes longest; at least 2
func (a *Adaptive) Needed() int {
	needed := 2.0
	for _, r := range a.results {
		delta := Tolerance(r.trials.SD(0), a.digits)
		for i := range 4 {
			if s := r.blocks.SD(i); s > 0 {
				needed = max(needed, math.Pow(2*s/delta, 2))
			}
		}
	}
	return int(min(math.Ceil(needed), 1<<31))
}

// Blocks is the number of blocks added.
func (a *Adaptive) Blocks() int { return a.results[0].blocks.N() }

// Done says that the blocks suffice.
func (a *Adaptive) Done() bool { return a.Blocks() >= a.Needed() }
