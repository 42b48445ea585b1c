package calib

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"rungproof/calib/plan"
	"rungproof/calib/uncertainty"
)

// MonteCarloOptions say how an estimate is confirmed by Monte Carlo.
type MonteCarloOptions struct {
	Trials   int    // 0: as many as the adaptive procedure takes
	Seed     uint64 // the same seed gives the same result, whatever the number of cores
	Progress func(done, total int)
}

// block is the number of trials that one seed serves, so that the result does not
// depend on how many cores share the work: what JCGM 101, 7.9.4 b, wants at 95 % and 99 %.
const block = 10000

// digits are the significant digits that uncertainties are to be good to.
const digits = 2

// MostTrials bounds the memory: the values of all outputs are kept, 8 bytes each,
// and the quantiles are exact.
const MostTrials = 20_000_000

// MonteCarlo is the propagation of distributions through the full estimate
// (JCGM 101:2008, for several outputs JCGM 102:2011): every input and every mean
// reading is drawn from its own distribution and the estimate is made again.
type MonteCarlo struct {
	Trials      int                `json:"trials"`
	Seed        uint64             `json:"seed"`
	Adaptive    bool               `json:"adaptive"`    // JCGM 101, 7.9
	Interrupted bool               `json:"interrupted"` // fewer trials than asked for
	Unsettled   int                `json:"unsettled"`   // trials left out because their estimate did not settle
	Outputs     []MonteCarloOutput `json:"outputs"`
	Correlation number             `json:"correlation_offset_series_resistance"`
	InRegion    number             `json:"share_in_linear_region"`          // of the trials, in the linear joint 95 % region of offset and series resistance
	Drops       number             `json:"largest_deviation_of_u_of_drops"` // of the expected drops' u from the linear one, as a share
	Validated   int                `json:"validated_digits"`                // to which every linear interval is good
}

// MonteCarloOutput is one result by Monte Carlo beside the linear one.
type MonteCarloOutput struct {
	Name      string               `json:"name"`
	Unit      string               `json:"unit"`
	Linear    Estimate             `json:"linear"`
	Mean      float64              `json:"mean"`
	U         float64              `json:"u"`
	Symmetric uncertainty.Interval `json:"symmetric"` // probabilistically symmetric
	Shortest  uncertainty.Interval `json:"shortest"`
	Validated int                  `json:"validated_digits"` // digits of u to which the linear interval is good (JCGM 101, clause 8): 2, 1 or 0
}

// outputs are the parameters that Monte Carlo confirms.
func (e *Evaluation) outputs() (names []string, params []int, units []string) {
	w := e.deciding.layout
	add := func(name string, k int, unit string) {
		if k >= 0 {
			names, params, units = append(names, name), append(params, k), append(units, unit)
		}
	}
	for k := range w.gains {
		name := OfGain
		switch e.deciding.gain {
		case gainPerRange:
			name += " on " + e.rangeName(e.deciding.keys[k])
		case gainPerFrequency:
			name += fmt.Sprintf(" at %g Hz", e.Plan.Frequencies[e.deciding.keys[k]])
		}
		add(name, k, "1")
	}
	add("offset", w.offset, offsetUnit(e.Plan))
	add("offset, quadrature", w.offsetY, offsetUnit(e.Plan))
	add("series resistance", w.series, "ohm")
	return names, params, units
}

// MonteCarlo confirms the estimate that the verdict rests on. A cancelled context
// ends it early, with what there is.
func (e *Evaluation) MonteCarlo(ctx context.Context, o MonteCarloOptions) (*MonteCarlo, error) {
	for k := range e.deciding.layout.n {
		if !e.deciding.result.Determined(k) {
			return nil, errors.New("the readings do not determine every parameter: there is nothing for Monte Carlo to confirm")
		}
	}
	names, params, units := e.outputs()
	run := &monteCarlo{e: e, o: o, params: params}
	mc := &MonteCarlo{Seed: o.Seed, Adaptive: o.Trials == 0}
	blocks := (o.Trials + block - 1) / block
	if mc.Adaptive {
		blocks = MostTrials / block
	}
	values := run.all(ctx, blocks, mc)
	if len(values[0]) == 0 {
		return nil, errors.New("no trial was finished")
	}
	mc.Trials = len(values[0])
	mc.Correlation, mc.InRegion = number(math.NaN()), number(math.NaN())
	if w := e.deciding.layout; w.series >= 0 && w.offset >= 0 {
		mc.joint(e.deciding, values[indexOf(params, w.offset)], values[indexOf(params, w.series)])
	}
	mc.Drops = number(e.dropsDeviation(min(mc.Trials, mostDropTrials), o.Seed))
	mc.Validated = digits
	for i, v := range values {
		out := MonteCarloOutput{Name: names[i], Unit: units[i], Linear: e.model.value(e.deciding, params[i], units[i])}
		s := uncertainty.Summarise(v, e.Plan.Decision.Coverage)
		out.Mean, out.U, out.Symmetric, out.Shortest = s.Mean, s.SD, s.Symmetric, s.Shortest
		out.Validated = validated(out.Linear, s.Symmetric)
		mc.Validated = min(mc.Validated, out.Validated)
		mc.Outputs = append(mc.Outputs, out)
	}
	return mc, nil
}

// validated is the number of digits of u to which a linear interval agrees with
// that of Monte Carlo.
func validated(linear Estimate, monteCarlo uncertainty.Interval) int {
	for n := digits; n > 0; n-- {
		if uncertainty.Validate(linear.Value, linear.Expanded(), monteCarlo, uncertainty.Tolerance(linear.U, n)).Validated {
			return n
		}
	}
	return 0
}

func indexOf(all []int, x int) int {
	for i, y := range all {
		if x == y {
			return i
		}
	}
	panic("calib: not among the outputs")
}

// monteCarlo shares blocks of trials between the cores.
type monteCarlo struct {
	e      *Evaluation
	o      MonteCarloOptions
	params []int
}

// blockResult is what one block of trials gave.
type blockResult struct {
	index     int
	values    [][]float64 // by output
	unsettled int
}

// all runs the blocks and gives the values of each output, in the order of the blocks.
func (r *monteCarlo) all(ctx context.Context, blocks int, mc *MonteCarlo) [][]float64 {
	ctx, stop := context.WithCancel(ctx)
	defer stop()
	next, results := make(chan int), make(chan blockResult)
	var workers sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		workers.Go(func() {
			t := newTrial(r.e.privateModel(), r.e.deciding)
			for b := range next {
				results <- r.block(ctx, t, b)
			}
		})
	}
	go func() {
		defer close(next)
		for b := range blocks {
			select {
			case next <- b:
			case <-ctx.Done():
				return
			}
		}
	}()
	go func() { workers.Wait(); close(results) }()

	values := make([][]float64, len(r.params))
	waiting := map[int]blockResult{}
	adaptive := uncertainty.NewAdaptive(len(r.params), r.e.Plan.Decision.Coverage, digits)
	done, finished, total := 0, false, blocks*block
	for result := range results {
		waiting[result.index] = result
		for {
			b, ok := waiting[done]
			if !ok || finished {
				break
			}
			delete(waiting, done)
			done++
			if b.values == nil {
				finished, mc.Interrupted = true, true
				break
			}
			mc.Unsettled += b.unsettled
			for i, v := range b.values {
				values[i] = append(values[i], v...)
			}
			if mc.Adaptive {
				adaptive.Add(b.values)
				if finished = adaptive.Done(); finished {
					stop()
				}
				total = min(total, max(adaptive.Needed(), adaptive.Blocks())*block)
			}
			if r.o.Progress != nil {
				r.o.Progress(len(values[0]), total)
			}
		}
	}
	if n := r.o.Trials; n > 0 && len(values[0]) > n {
		for i := range values {
			values[i] = values[i][:n]
		}
	}
	mc.Interrupted = mc.Interrupted || (!finished && done < blocks)
	return values
}

// block runs one block of trials; without values where the context ended first.
func (r *monteCarlo) block(ctx context.Context, t *trial, index int) blockResult {
	random := rand.New(rand.NewPCG(r.o.Seed, uint64(index)))
	out := blockResult{index: index, values: make([][]float64, len(r.params))}
	for i := range out.values {
		out.values[i] = make([]float64, 0, block)
	}
	for k := range block {
		if k%1000 == 0 && ctx.Err() != nil {
			return blockResult{index: index}
		}
		t.draw(random)
		if !t.settle() {
			out.unsettled++
			continue
		}
		for i, param := range r.params {
			out.values[i] = append(out.values[i], t.p[param])
		}
	}
	return out
}

// privateModel is the model with a circuit of its own to compute in.
func (e *Evaluation) privateModel() *model {
	m := *e.model
	m.forward = newForward(e.Plan)
	return &m
}

// draw draws the stated values and the mean readings.
func (t *trial) draw(random *rand.Rand) {
	inputs := t.m.forward.inputs
	for k := range inputs {
		in := &inputs[k]
		t.prior[k] = in.Value + in.U*deviate(in.Shape, in.DOF, random)
	}
	if k := t.e.prior; k >= 0 {
		x := t.m.plan.Fit.SeriesExpected
		t.prior[k] = x.X + x.U()*deviate(x.Shape, x.DOF, random)
	}
	at := 0
	for i := range t.rows {
		r := &t.rows[i]
		o := &t.m.obs[r.obs]
		along := o.along * deviate(plan.Normal, o.dof, random)
		t.delta[at] = along
		at++
		across := 0.0
		if t.m.axes == 2 {
			across = o.across * deviate(plan.Normal, o.dof, random)
			t.delta[at] = across
			at++
		}
		// The deviations lie along and across the expected phasor.
		t.read[i] = o.mean + complex(real(r.turn)*along+imag(r.turn)*across, real(r.turn)*across-imag(r.turn)*along)
	}
	for k := range t.prior {
		stated := t.m.statedPrior(k)
		t.delta[at+k] = t.prior[k] - stated
	}
}

// statedPrior is a prior value as the plan states it.
func (m *model) statedPrior(k int) float64 {
	if k < len(m.forward.inputs) {
		return m.forward.inputs[k].Value
	}
	return m.plan.Fit.SeriesExpected.X
}

// deviate is one draw of a distribution about zero, in standard uncertainties:
// where the uncertainty has degrees of freedom, a scaled and shifted t (JCGM 101, 6.4.9).
func deviate(shape plan.Shape, dof float64, random *rand.Rand) float64 {
	if shape == plan.Normal && dof > 0 && !math.IsInf(dof, 1) {
		return uncertainty.Draw(uncertainty.Student, dof, random)
	}
	return draw(shape, random)
}

// joint compares the trials with the linear joint 95 % region of offset and
// series resistance (JCGM 102, 7.7: an ellipse, χ² with two degrees of freedom).
func (mc *MonteCarlo) joint(e *estimate, offset, series []float64) {
	const region95 = 5.991464547107979 // −2·ln 0.05
	w := e.layout
	o, r := e.result.P[w.offset], e.result.P[w.series]
	uo, ur := math.Sqrt(e.result.Cov.At(w.offset, w.offset)), math.Sqrt(e.result.Cov.At(w.series, w.series))
	rho := e.result.Cov.At(w.offset, w.series) / (uo * ur)
	inside, sxx, syy, sxy := 0, 0.0, 0.0, 0.0
	for i := range offset {
		x, y := (offset[i]-o)/uo, (series[i]-r)/ur
		sxx, syy, sxy = sxx+x*x, syy+y*y, sxy+x*y
		if (x*x-2*rho*x*y+y*y)/(1-rho*rho) <= region95 {
			inside++
		}
	}
	mc.Correlation = number(sxy / math.Sqrt(sxx*syy))
	mc.InRegion = number(float64(inside) / float64(len(offset)))
}
