package calib

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib/decision"
	"rungproof/calib/detector"
	"rungproof/calib/plan"
)

// Expectation is what a plan will show and what it can resolve, before anyone has measured.
type Expectation struct {
	Steps            []ExpectedStep    `json:"steps"`
	Separable        bool              `json:"separable"` // offset and series resistance
	Gain             Estimate          `json:"gain"`
	Offset           Estimate          `json:"offset"`
	SeriesResistance Estimate          `json:"series_resistance"`
	Correlation      map[string]number `json:"correlation"`
	GainByRange      []KeyGain         `json:"gain_by_range"`
	Detectable       Detectable        `json:"detectable"`
	Parting          *Parting          `json:"parting,omitempty"` // not separable: the cheapest step that parts the two
	BenchTime        float64           `json:"bench_time"`        // s, without the time to change settings
	CoverageFactor   float64           `json:"coverage_factor"`
	Limiting         *Limiting         `json:"limited_by_the_bench,omitempty"`
	Findings         []Finding         `json:"findings"`
}

// ExpectedStep is what a detector without fault reads at a step, and how well it can be judged there.
type ExpectedStep struct {
	ID        string      `json:"id"`
	Index     int         `json:"-"`
	Drop      float64     `json:"drop"` // V rms
	PhaseDeg  float64     `json:"phase_deg"`
	Range     float64     `json:"range"` // full scale, V rms
	Expected  float64     `json:"expected"`
	UExpected float64     `json:"u_expected"`
	Share     float64     `json:"share_of_range"`
	SigmaOne  float64     `json:"sigma_one_reading"`
	Wait      float64     `json:"wait"`  // s, before the first reading
	Limit     number      `json:"limit"` // V; null where the plan judges nothing
	U         float64     `json:"U"`     // predicted, of the step's error
	Ratio     number      `json:"limit_over_U"`
	Global    *GlobalRisk `json:"global_risk,omitempty"` // where the plan states a prior
}

// perfect is the model with the readings that a detector without fault would give.
func perfect(p *plan.Plan) *model {
	m := emptyModel(p)
	for i, s := range p.Steps {
		d := &m.forward.drops[m.forward.of[i]]
		o := observation{step: i, n: s.Repeats, rng: s.Range}
		m.predictScatter(&o)
		o.settle()
		m.byStep[i] = len(m.obs)
		m.obs = append(m.obs, o)
		switch x := m.expect(i); p.Detector.Reads {
		case plan.TwoPhase:
			m.obs[i].mean = d.axis * complex(d.stated, 0) * cmplx.Rect(1, -s.Phase)
		case plan.Magnitude:
			mean, _ := detector.RiceMean(x.value, o.noise)
			m.obs[i].mean = complex(mean, 0)
		default:
			m.obs[i].mean = complex(x.value, 0)
		}
	}
	return m
}

// Expect predicts what a plan's steps will read and what the plan can resolve.
func Expect(p *plan.Plan) (*Expectation, error) {
	m := perfect(p)
	x := &Expectation{CoverageFactor: distuv.UnitNormal.Quantile((1 + p.Decision.Coverage) / 2)}
	e, err := m.estimate(p.Fit.Gain, nothing)
	if err != nil {
		return nil, err
	}
	w := e.layout
	x.Correlation = map[string]number{}
	if x.Separable = e.separable(); x.Separable {
		x.Correlation["offset,series_resistance"] = number(e.correlation(w.offset, w.series))
	} else {
		x.Parting = Part(p)
		if e, err = m.estimate(p.Fit.Gain, seriesHeld); err != nil {
			return nil, err
		}
	}
	x.Gain, x.Offset, x.SeriesResistance = m.threeOf(e)
	x.Detectable = detectable(x.Gain, x.Offset, x.SeriesResistance)
	if w.gains == 1 && x.Separable {
		x.Correlation["gain,offset"] = number(e.correlation(0, w.offset))
		x.Correlation["gain,series_resistance"] = number(e.correlation(0, w.series))
	}
	hold := nothing
	if !x.Separable {
		hold = seriesHeld
	}
	byRange, _ := m.estimate(gainPerRange, hold) // none where the plan hardly determines them
	x.GainByRange = m.gains(e, byRange, func(i int) KeyGain { return KeyGain{Range: p.Detector.Ranges[i]} }).Gain
	m.expectSteps(x, e)
	shell := &Evaluation{Plan: p, model: m, deciding: e}
	x.Limiting, err = shell.limiting(x.capabilities())
	return x, err
}

// capabilities lists the steps with their limits and ratios.
func (x *Expectation) capabilities() (ids []string, limit, capability []float64) {
	for _, s := range x.Steps {
		ids = append(ids, s.ID)
		limit, capability = append(limit, float64(s.Limit)), append(capability, float64(s.Ratio))
	}
	return ids, limit, capability
}

// expectSteps fills the steps, with the uncertainties that the errors will have.
func (m *model) expectSteps(x *Expectation, e *estimate) {
	errors := m.errorsOf(e)
	m.forward.compute(m.forward.stated(), 0)
	before := 0.0
	for i := range m.obs {
		s, o := &m.plan.Steps[i], &m.obs[i]
		exp := m.expect(i)
		one, _ := o.scatter.one()
		full := m.plan.Detector.Ranges[s.Range]
		j := m.judge(o, &errors[i])
		limit := j.limit
		U := errors[i].k * errors[i].u
		step := ExpectedStep{ID: s.ID, Index: i, Drop: exp.drop, PhaseDeg: exp.phase * 180 / math.Pi, Range: full,
			Expected: exp.value, UExpected: exp.u, Share: math.Abs(exp.value) / full, SigmaOne: one,
			Wait: wait(s, m.plan.Detector.Poles, exp.value-before, limit), Limit: number(limit), U: U, Ratio: number(j.capability)}
		if p := m.plan.Decision.Prior; p != nil && j.outcome != decision.NotJudged {
			step.Global = globalRisk(p, math.Abs(exp.value), full, errors[i].u, j)
		}
		before = exp.value
		x.BenchTime += step.Wait + float64(s.Repeats-1)*wait(s, m.plan.Detector.Poles, 0, limit)
		x.Steps = append(x.Steps, step)
	}
}

// GlobalRisk is what the plan's rule does to detectors that are not yet measured
// (JCGM 106:2012, clause 9), at one step.
type GlobalRisk struct {
	Prior    float64 `json:"prior_sd"`       // of the detectors' errors there, V
	Consumer float64 `json:"consumers_risk"` // probability that one is accepted and bad
	Producer float64 `json:"producers_risk"` // probability that one is rejected and good
}

// globalRisk counts as accepted what passes outright.
func globalRisk(p *plan.Prior, applied, full, u float64, j judgement) *GlobalRisk {
	sd := p.Reading*applied + p.Range*full
	if sd == 0 {
		return nil
	}
	g := decision.Global(decision.Prior{SD: sd}, u, decision.Symmetric(j.limit), decision.Symmetric(j.acceptance))
	return &GlobalRisk{Prior: sd, Consumer: g.Consumer, Producer: g.Producer}
}

// settled is the share of a change that may be left when a reading is taken.
const settled = 0.001

// wait is the time for the filter to settle after a change of the reading: to a
// tenth of the limit, and to 99.9 % of the change at least.
func wait(s *plan.Step, poles int, change, limit float64) float64 {
	left := settled
	if share := 0.1 * limit / math.Abs(change); share < left {
		left = share
	}
	return detector.Settling(s.TimeConstant, poles, left)
}
