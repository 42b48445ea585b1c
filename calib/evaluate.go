// Package calib is the measurement: it joins a plan, its readings and the
// circuit into one least-squares problem, and its estimate into errors, outcomes
// and a verdict. SI units, voltages in V rms, uncertainties standard unless called U.
//
// The measurement model stands in model.go, the uncertain inputs in inputs.go,
// the errors and the rule in errors.go.
package calib

import (
	"crypto/sha256"
	"encoding/hex"
	"math"
	"time"

	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib/decision"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// oddFactor is how many times too large or too small a reading is odd.
const oddFactor = 3

// oneGainLevel is the probability below which one common gain is held to be wrong.
const oneGainLevel = 0.01

// Evaluation is a judged calibration: the plan, the readings, what they come to,
// and the fits behind it.
type Evaluation struct {
	Plan     *plan.Plan
	Readings *reading.Set
	Result   *Result

	model     *model
	asked     *estimate // the fit that the plan asks for; where it is not separable, with the series resistance held at zero
	deciding  *estimate // the one that errors and verdict come from
	alternate *estimate // not separable: the deciding one with the offset held at zero instead
}

// Evaluate fits the readings and judges every step.
func Evaluate(p *plan.Plan, set *reading.Set) (*Evaluation, error) {
	m, err := newModel(p, set)
	if err != nil {
		return nil, err
	}
	e := &Evaluation{Plan: p, Readings: set, model: m, Result: &Result{Format: 1}}
	if err := e.estimate(); err != nil {
		return nil, err
	}
	e.judge()
	r := e.Result
	if r.Limiting, err = e.limited(); err != nil {
		return nil, err
	}
	r.Odd = m.oddReadings(oddFactor)
	r.Repeatability = m.repeats
	r.Inputs = e.inputs()
	r.Serial, r.State, r.Temperature = p.Detector.Serial, p.Condition, p.Temperature.X
	if !p.Date.IsZero() {
		r.Date = p.Date.Format(time.DateOnly)
	}
	for _, s := range e.StandardsUsed() {
		r.Standards = append(r.Standards, s.Name)
	}
	r.PlanSHA256, r.ReadingsSHA256 = digest(p.Source), digest(set.Source)
	return e, nil
}

// limited looks for the steps at which the bench limits the decision.
func (e *Evaluation) limited() (*Limiting, error) {
	var ids []string
	var limit, capability []float64
	for _, s := range e.Result.Steps {
		ids = append(ids, s.ID)
		limit, capability = append(limit, float64(s.Limit)), append(capability, float64(s.Capability))
	}
	return e.limiting(ids, limit, capability)
}

func digest(b []byte) string {
	sum := sha256.Sum256(b)
	return hex.EncodeToString(sum[:])
}

// estimate makes the fits: the one that is asked for, the ones by range and by
// frequency beside it, and those with one of two inseparable parameters held.
func (e *Evaluation) estimate() error {
	m, r, asks := e.model, e.Result, e.Plan.Fit.Gain
	free, err := m.estimate(asks, nothing)
	if err != nil {
		return err
	}
	e.asked = free
	hold := nothing
	if r.Fit.Separable = free.separable() && free.seesSignal(); !r.Fit.Separable {
		hold = seriesHeld
		if e.asked, err = m.estimate(asks, seriesHeld); err != nil {
			return err
		}
		r.NoSignal = !e.asked.seesSignal()
	}
	fits := map[string]*estimate{asks: e.asked}
	for _, gain := range []string{gainCommon, gainPerRange, gainPerFrequency} {
		if fits[gain] == nil && (gain != gainPerFrequency || len(e.Plan.Frequencies) > 1) {
			// A fit that does not settle here has gains that the readings hardly
			// determine: they are then not known, and nothing rests on them.
			if fits[gain], err = m.estimate(gain, hold); err != nil && gain == gainCommon {
				return err
			}
		}
	}
	r.ByRange = m.gains(fits[gainCommon], fits[gainPerRange], e.rangeKey)
	if f := fits[gainPerFrequency]; f != nil && len(e.Plan.Frequencies) > 1 {
		r.ByFreq = m.gains(fits[gainCommon], f, e.frequencyKey)
	}

	decides := asks
	if asks == gainCommon && float64(r.ByRange.PCommon) < oneGainLevel {
		decides = gainPerRange
	}
	if err = e.decideBy(decides, fits[decides], hold); err != nil && decides != asks {
		decides = asks // the gains of the ranges are too poorly known for a verdict to rest on
		err = e.decideBy(asks, fits[asks], hold)
	}
	if err != nil {
		return err
	}
	r.ByRange.Used = decides == gainPerRange
	if r.ByFreq != nil {
		r.ByFreq.Used = decides == gainPerFrequency
	}
	e.fitResult()
	return nil
}

// decideBy takes a fit for errors and verdict to rest on; where it does not part
// the offset from the series resistance, with either held at zero.
func (e *Evaluation) decideBy(gain string, fit *estimate, hold held) (err error) {
	e.deciding, e.alternate = fit, nil
	if e.Result.NoSignal {
		return nil
	}
	if !fit.separable() {
		hold = seriesHeld
		if e.deciding, err = e.model.estimate(gain, seriesHeld); err != nil {
			return err
		}
	}
	if hold != nothing {
		e.alternate, err = e.model.estimate(gain, offsetHeld)
	}
	return err
}

// fitResult fills the part of the result that speaks of the fit asked for.
func (e *Evaluation) fitResult() {
	m, f, a, unit := e.model, &e.Result.Fit, e.asked, offsetUnit(e.Plan)
	w := a.layout
	f.Gain = Estimate{Unit: "1"}
	if e.Plan.Fit.Gain == gainCommon && w.gains == 1 {
		f.Gain = m.value(a, 0, "1")
	}
	f.Offset, f.SeriesResistance = Estimate{Unit: unit}, Estimate{Unit: "ohm"}
	f.Correlation = map[string]number{}
	if f.Separable {
		f.Offset, f.SeriesResistance = m.value(a, w.offset, unit), m.value(a, w.series, "ohm")
		if m.axes == 2 {
			y := m.value(a, w.offsetY, unit)
			f.OffsetQuadrature = &y
		}
		f.Correlation["offset,series_resistance"] = number(a.correlation(w.offset, w.series))
		if f.Gain.Known {
			f.Correlation["gain,offset"] = number(a.correlation(0, w.offset))
			f.Correlation["gain,series_resistance"] = number(a.correlation(0, w.series))
		}
	}
	if e.alternate != nil {
		intercept := m.value(e.deciding, e.deciding.layout.offset, unit)
		series := m.value(e.alternate, e.alternate.layout.series, "ohm")
		f.Intercept, f.AsSeries = &intercept, &series
	}
	for i, k := range w.phase {
		if k >= 0 {
			f.Phase = append(f.Phase, ByFrequency{e.Plan.Frequencies[i], m.value(a, k, "rad")})
		}
	}
	f.ChiSquared, f.DOF, f.P = number(a.result.ChiSquared), a.result.DOF, number(math.NaN())
	if f.DOF > 0 {
		f.P = number(distuv.ChiSquared{K: float64(f.DOF)}.Survival(a.result.ChiSquared))
	}
}

// gains compares the fit with several gains to the one with a common gain.
func (m *model) gains(common, several *estimate, key func(int) KeyGain) *Gains {
	unit := offsetUnit(m.plan)
	if several == nil {
		return &Gains{PCommon: number(math.NaN()), Offset: Estimate{Unit: unit}, SeriesResistance: Estimate{Unit: "ohm"}}
	}
	w := several.layout
	g := &Gains{PCommon: number(commonGain(common, several)),
		Offset: m.value(several, w.offset, unit), SeriesResistance: m.value(several, w.series, "ohm")}
	for k, of := range several.keys {
		kg := key(of)
		kg.Limit, kg.Estimate = math.NaN(), m.value(several, k, "1")
		g.Gain = append(g.Gain, kg)
	}
	sortGains(g.Gain)
	return g
}

func (e *Evaluation) rangeKey(i int) KeyGain     { return KeyGain{Range: e.Plan.Detector.Ranges[i]} }
func (e *Evaluation) frequencyKey(i int) KeyGain { return KeyGain{Frequency: e.Plan.Frequencies[i]} }

// judge finds the outcome of every step and every gain, and the verdict.
func (e *Evaluation) judge() {
	p, r, m := e.Plan, e.Result, e.model
	r.Coverage = p.Decision.Coverage
	r.CoverageFactor = distuv.UnitNormal.Quantile((1 + r.Coverage) / 2)
	found := m.errorsOf(e.deciding)
	var other []stepError
	if e.alternate != nil {
		other = m.errorsOf(e.alternate)
		r.Condition = m.condition(e.deciding, found)
	}
	unexplained := m.unexplained(e.deciding)
	m.forward.compute(m.forward.stated(), 0)
	for i := range p.Steps {
		k := m.byStep[i]
		if k < 0 {
			r.Missing = append(r.Missing, p.Steps[i].ID)
			continue
		}
		s := e.step(k, &found[k], unexplained[k])
		if other != nil {
			s.Outcome = inDoubt(s.Outcome, m.judge(&m.obs[k], &other[k]).outcome)
		}
		if s.Beyond || len(s.Flags) > 0 {
			s.Outcome = decision.AtBest(s.Outcome, decision.ConditionalPass)
		}
		s.settleRisk()
		r.Verdict = decision.Worst(r.Verdict, s.Outcome)
		r.Steps = append(r.Steps, s)
	}
	for i := range r.ByRange.Gain {
		e.judgeGain(&r.ByRange.Gain[i])
		r.Verdict = decision.Worst(r.Verdict, r.ByRange.Gain[i].Outcome)
	}
	if len(r.Missing) > 0 {
		r.Verdict = decision.AtBest(r.Verdict, decision.ConditionalPass)
	}
}

// inDoubt is the outcome where offset and series resistance cannot be told
// apart: a fail only where both readings of the matter fail, else the worse of
// the two, never a fail and never better than a conditional pass.
func inDoubt(asOffset, asSeries decision.Outcome) decision.Outcome {
	if asOffset == decision.Fail && asSeries == decision.Fail {
		return decision.Fail
	}
	return decision.AtWorst(decision.AtBest(decision.Worst(asOffset, asSeries), decision.ConditionalPass), decision.ConditionalFail)
}

// judgeGain judges the gain of a range where the plan limits it: by the
// tightest of the limits that hold for the steps taken on that range.
func (e *Evaluation) judgeGain(g *KeyGain) {
	for i := range e.model.obs {
		o := &e.model.obs[i]
		full := e.Plan.Detector.Ranges[o.rng]
		if full != g.Range {
			continue
		}
		if l := e.Plan.LimitAt(full, e.Plan.Steps[o.step].Frequency); l != nil && !math.IsNaN(l.Gain) && !(g.Limit <= l.Gain) {
			g.Limit = l.Gain
		}
	}
	if g.Known && !math.IsNaN(g.Limit) {
		g.Outcome = e.model.rule().Judge(g.Value-1, g.Limit, g.U, g.Expanded())
	}
}
