package calib

import (
	"encoding/json"
	"fmt"
	"math"
	"math/cmplx"
	"sort"
	"strings"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/calib/uncertainty"
)

// Budget is where the uncertainty of one result comes from, and what to improve first.
type Budget struct {
	Of    string
	Value float64
	Unit  string // "1", "V" or "ohm"
	uncertainty.Budget
	Improve []Improvement
}

// MarshalJSON writes the budget flat, infinite degrees of freedom as null.
func (b *Budget) MarshalJSON() ([]byte, error) {
	type line struct {
		Name         string  `json:"name"`
		Value        float64 `json:"value"`
		U            float64 `json:"u"`
		Unit         string  `json:"unit"`
		Shape        string  `json:"distribution"`
		DOF          number  `json:"dof"`
		Sensitivity  float64 `json:"sensitivity"`
		Contribution float64 `json:"contribution"`
		Share        float64 `json:"share_of_variance"`
	}
	lines := make([]line, len(b.Lines))
	for i, l := range b.Lines {
		dof := number(l.DOF)
		if l.DOF == 0 {
			dof = number(math.Inf(1))
		}
		lines[i] = line{l.Name, l.Value, l.U, l.Unit, l.Shape.String(), dof, l.Sensitivity, l.Contribution, l.Share}
	}
	return json.Marshal(struct {
		Of       string        `json:"of"`
		Value    float64       `json:"value"`
		Unit     string        `json:"unit"`
		U        float64       `json:"u"`
		DOF      number        `json:"effective_dof"`
		Coverage float64       `json:"coverage"`
		K        float64       `json:"k"`
		Expanded float64       `json:"U"`
		Basis    string        `json:"k_from"`
		Lines    []line        `json:"lines"`
		Improve  []Improvement `json:"improve_first"`
	}{b.Of, b.Value, b.Unit, b.U, number(b.DOF), b.Coverage, b.K, b.Expanded, b.Basis, lines, b.Improve})
}

// Improvement is what the expanded uncertainty would be if one thing were better
// known: found by doing the whole estimate again.
type Improvement struct {
	Name  string  `json:"name"`
	From  float64 `json:"u_from"` // standard uncertainty now, in Unit
	To    float64 `json:"u_to"`
	Unit  string  `json:"unit"`
	Value float64 `json:"value"` // of the input
	After float64 `json:"U_after"`
}

// What a budget can be asked of, besides a range and a step.
const (
	OfGain   = "gain"
	OfOffset = "offset"
	OfSeries = "series-resistance"
)

// subject is a result whose uncertainty is taken apart: a fitted parameter, or
// the error of an observation.
type subject struct {
	name  string
	unit  string
	gain  string // what one gain stands for in its fit
	held  held
	param func(e *estimate) int // the parameter; nil for an error
	obs   int
}

// Budget takes the uncertainty of a result apart: of the gain, the offset, the
// series resistance, the gain of a range ("100 µV") or the error of a step ("A12").
func (e *Evaluation) Budget(of string) (*Budget, error) {
	s, err := e.subject(of)
	if err != nil {
		return nil, err
	}
	m := e.model
	est, err := m.estimate(s.gain, s.held)
	if err != nil {
		return nil, err
	}
	if s.param != nil && (s.param(est) < 0 || !est.result.Determined(s.param(est))) {
		return nil, fmt.Errorf("the readings do not determine the %s: there is no budget of it", s.name)
	}
	value, lines := m.apart(s, est)
	b := &Budget{Of: s.name, Value: value, Unit: s.unit, Budget: uncertainty.New(lines, e.Plan.Decision.Coverage)}
	return b, m.improve(b, s, est)
}

// Budgets are those of the gain (of the range with the largest U where there is
// one a range), the offset and the series resistance, as far as they are determined.
func (e *Evaluation) Budgets() ([]*Budget, error) {
	asked := []string{OfGain, OfOffset, OfSeries}
	if e.deciding.gain != gainCommon {
		asked[0] = ""
		worst := 0.0
		for _, g := range e.Result.ByRange.Gain {
			if g.Known && g.Expanded() > worst {
				worst, asked[0] = g.Expanded(), quantity.Plain(g.Range/e.Plan.Detector.ToRMS, "V")
			}
		}
	}
	var out []*Budget
	for _, of := range asked {
		s, err := e.subject(of)
		if err != nil {
			continue // not determined, which the result says elsewhere
		}
		est, err := e.model.estimate(s.gain, s.held)
		if err != nil {
			return nil, err
		}
		if k := s.param(est); k < 0 || !est.result.Determined(k) {
			continue
		}
		b, err := e.Budget(of)
		if err != nil {
			return nil, err
		}
		out = append(out, b)
	}
	return out, nil
}

// subject finds what a budget is asked of.
func (e *Evaluation) subject(of string) (subject, error) {
	s := subject{name: of, gain: e.deciding.gain, held: e.deciding.held}
	switch strings.ToLower(of) {
	case OfGain:
		if s.gain != gainCommon {
			return s, fmt.Errorf("there is no one gain here, but one %s: ask for a range, such as %q",
				strings.TrimPrefix(s.gain, "per "), e.rangeName(e.model.obs[0].rng))
		}
		s.unit, s.param = "1", func(*estimate) int { return 0 }
		return s, nil
	case OfOffset:
		s.unit, s.param = offsetUnit(e.Plan), func(est *estimate) int { return est.layout.offset }
		return s, nil
	case OfSeries, "series resistance":
		if e.alternate != nil {
			s.held = offsetHeld
		}
		s.name, s.unit, s.param = "series resistance", "ohm", func(est *estimate) int { return est.layout.series }
		return s, nil
	}
	for k, i := range e.model.byStep {
		if e.Plan.Steps[k].ID == of {
			if i < 0 {
				return s, fmt.Errorf("step %s has no reading", of)
			}
			s.name, s.unit, s.obs = "error at step "+of, "V", i
			return s, nil
		}
	}
	if v, err := quantity.Parse(of, quantity.Voltage); err == nil {
		for k, full := range e.Plan.Detector.Ranges {
			if math.Abs(v.X*e.Plan.Detector.ToRMS/full-1) < 1e-9 {
				s.name, s.unit, s.gain = "gain of the "+e.rangeName(k)+" range", "1", gainPerRange
				s.param = func(est *estimate) int { return est.gainOf(k) }
				return s, nil
			}
		}
	}
	return s, fmt.Errorf("%q is none of gain, offset, series-resistance, a range such as %q, or a step such as %q",
		of, e.rangeName(e.model.obs[0].rng), e.Plan.Steps[0].ID)
}

// rangeName is a range as the detector's panel has it.
func (e *Evaluation) rangeName(i int) string {
	return quantity.Plain(e.Plan.Detector.Ranges[i]/e.Plan.Detector.ToRMS, "V")
}

// gainOf is the parameter of one key's gain, or -1.
func (e *estimate) gainOf(key int) int {
	for k, of := range e.keys {
		if of == key {
			return k
		}
	}
	return -1
}

// apart is a subject's value and its uncertainty, a line an input.
func (m *model) apart(s subject, est *estimate) (float64, []uncertainty.Line) {
	if s.param != nil {
		k := s.param(est)
		return est.result.P[k], m.lines(est, est.result.Influence(k), est.result.PriorInfluence(k), s.unit)
	}
	found := m.errorsOf(est)
	readings, priors := m.errorInfluence(est, s.obs)
	return found[s.obs].e, m.lines(est, readings, priors, s.unit)
}

// lines are the readings, by what scatters them, and the inputs. A sensitivity is
// the change of the result with an input; that of the readings is one, their
// uncertainty being in the unit of the result.
func (m *model) lines(est *estimate, byReading, byPrior []float64, unit string) []uncertainty.Line {
	var out []uncertainty.Line
	for _, part := range m.readingParts(byReading) {
		out = append(out, uncertainty.Line{Name: part.name, U: math.Sqrt(part.variance), Unit: unit, Shape: scatterShape(part.dof), DOF: part.dof, Sensitivity: 1})
	}
	for k, in := range m.forward.inputs {
		out = append(out, uncertainty.Line{Name: in.Name, Value: in.Value, U: in.U, Unit: in.Unit, Shape: shapeOf(in.Shape), DOF: in.DOF, Sensitivity: byPrior[k]})
	}
	if est.prior >= 0 {
		x := m.plan.Fit.SeriesExpected
		out = append(out, uncertainty.Line{Name: "series resistance expected", Value: x.X, U: x.U(), Unit: "Ω",
			Shape: shapeOf(x.Shape), DOF: x.DOF, Sensitivity: byPrior[est.prior]})
	}
	return out
}

// scatterShape is normal, or Student's t where the scatter was observed.
func scatterShape(dof float64) uncertainty.Shape {
	if dof > 0 {
		return uncertainty.Student
	}
	return uncertainty.Normal
}

func shapeOf(s plan.Shape) uncertainty.Shape {
	if s == plan.Rectangular {
		return uncertainty.Rectangular
	}
	return uncertainty.Normal
}

// readingPart is one cause of the readings' scatter and its part in a variance.
type readingPart struct {
	name     string
	variance float64
	dof      float64 // 0 means infinite
}

// readingParts splits the readings' part of a variance by what scatters them; by
// range where the repeats say how much.
func (m *model) readingParts(by []float64) []readingPart {
	noise, stability, display := readingPart{name: "noise"}, readingPart{name: "detector's stability"}, readingPart{name: "display's resolution"}
	repeats := map[int]*readingPart{}
	var ranges []int
	row := 0
	for i := range m.obs {
		o := &m.obs[i]
		if o.left {
			continue
		}
		for axis := range m.axes {
			k2, s := by[row]*by[row], o.along
			averaged, gain := o.scatter.white/float64(o.n), o.scatter.gain/float64(o.n)
			if axis == 1 {
				s, gain = o.across, 0
			}
			display.variance += k2 * math.Max(0, s*s-averaged-gain)
			if o.dof == 0 {
				noise.variance += k2 * averaged
				stability.variance += k2 * gain
			} else {
				key := o.rng
				if repeats[key] == nil {
					ranges = append(ranges, key)
					repeats[key] = &readingPart{dof: o.dof,
						name: "scatter of the repeats, " + quantity.Plain(m.plan.Detector.Ranges[key]/m.plan.Detector.ToRMS, "V")}
				}
				repeats[key].variance += k2 * (averaged + gain)
			}
			row++
		}
	}
	var out []readingPart
	sort.Ints(ranges)
	for _, k := range ranges {
		out = append(out, *repeats[k])
	}
	for _, p := range []readingPart{noise, stability, display} {
		if p.variance > 0 {
			out = append(out, p)
		}
	}
	return out
}

// errorInfluence is the derivative of an observation's error with respect to the
// readings and to the prior values.
func (m *model) errorInfluence(est *estimate, i int) (readings, priors []float64) {
	p := newPropagation(m, est)
	v := m.faultless(est)
	m.forward.compute(v.nu, v.r)
	var r row
	m.predict(i, v, &r)
	priors = make([]float64, len(m.forward.inputs)+1)
	p.variances(i, &r, 0, priors)
	readings = make([]float64, len(est.result.Residual))
	for a, q := range p.params {
		d := p.derivative(i, &r, q, 0)
		for j, k := range p.byRead[a] {
			readings[j] -= d * k
		}
	}
	if p.row[i] >= 0 {
		readings[p.row[i]]++
	}
	return readings, priors
}

// improvement is by how much better one thing is taken to be known: a fifth of its uncertainty.
const improvement = 5

// improve finds, for the three largest lines, what the expanded uncertainty would
// be if that one thing were five times better known.
func (m *model) improve(b *Budget, s subject, est *estimate) error {
	order := make([]int, len(b.Lines))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(i, j int) bool { return b.Lines[order[i]].Share > b.Lines[order[j]].Share })
	for _, i := range order[:min(3, len(order))] {
		line := b.Lines[i]
		k := m.inputNamed(line.Name)
		if line.Share < 0.01 {
			continue
		}
		after, err := m.improved(s, est, line.Name, k, b.Coverage)
		if err != nil {
			return err
		}
		b.Improve = append(b.Improve, Improvement{Name: line.Name, From: line.U, To: line.U / improvement, Unit: line.Unit, Value: line.Value, After: after})
	}
	return nil
}

func (m *model) inputNamed(name string) int {
	for k, in := range m.forward.inputs {
		if in.Name == name {
			return k
		}
	}
	return -1
}

// improved is a subject's expanded uncertainty with one input, or one cause of
// the readings' scatter (k < 0), five times better. Readings and stated values are
// those that the estimate has, lest the scatter of the real ones, now too large for
// its uncertainty, bend the fit. The model is left as it was.
func (m *model) improved(s subject, est *estimate, name string, k int, coverage float64) (float64, error) {
	better := *m
	f := *m.forward
	b := *f.bench
	b.inputs = append([]Input(nil), b.inputs...)
	f.bench, better.forward = &b, &f
	better.obs = m.predicted(est)
	for i := range b.inputs {
		b.inputs[i].Value = est.v.nu[i]
	}
	if k >= 0 {
		b.inputs[k].U /= improvement
	} else {
		for i := range better.obs {
			better.obs[i].improve(name)
		}
	}
	again, err := better.estimateFrom(s.gain, s.held, est.result.P)
	if err != nil {
		return 0, err
	}
	_, lines := better.apart(s, again)
	return uncertainty.New(lines, coverage).Expanded, nil
}

// predicted are the observations with the mean readings that an estimate predicts.
func (m *model) predicted(est *estimate) []observation {
	out := append([]observation(nil), m.obs...)
	m.forward.compute(est.v.nu, est.v.r)
	var r row
	for i := range out {
		m.predict(i, est.v, &r)
		out[i].mean = r.value * cmplx.Conj(r.turn)
	}
	return out
}

// improve makes one cause of scatter five times smaller.
func (o *observation) improve(name string) {
	const by = improvement * improvement
	switch {
	case name == "display's resolution":
		o.scatter.display /= by
	case name == "noise":
		o.scatter.white /= by
	case name == "detector's stability":
		o.scatter.gain /= by
	default:
		o.scatter.white, o.scatter.gain = o.scatter.white/by, o.scatter.gain/by
	}
	o.settle()
}
