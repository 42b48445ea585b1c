package calib

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// Advice is what to measure next: the steps, beside those of the plan, that shrink
// the uncertainty asked for most per minute.
type Advice struct {
	For        string        `json:"for"`        // OfGain, OfOffset or OfSeries; "" for all three together
	Minutes    float64       `json:"minutes"`    // the time that the steps may take
	Candidates int           `json:"candidates"` // steps that the bench allows
	Coverage   float64       `json:"coverage"`   // probability of the expanded uncertainties
	Before     Resolution    `json:"before"`
	After      Resolution    `json:"after"`
	Steps      []AdvisedStep `json:"steps"` // in the order to take them
	Time       float64       `json:"time"`  // s, of all of them
	Stopped    string        `json:"stopped"`
	Block      string        `json:"block"` // to paste into the plan

	Plan *plan.Plan `json:"-"` // with the steps behind its own
}

// AdvisedStep is one more step.
type AdvisedStep struct {
	Index      int               `json:"-"` // in Advice.Plan's steps
	ID         string            `json:"id"`
	Frequency  float64           `json:"frequency"` // Hz
	Amplitude  string            `json:"amplitude"` // as the generator shows it
	Tap        string            `json:"tap"`
	Set        map[string]string `json:"set"`
	Range      float64           `json:"range"` // full scale, V rms
	PhaseDeg   float64           `json:"phase_deg"`
	Repeats    int               `json:"readings"`
	Expected   float64           `json:"expected"`    // reading of a detector without fault, V rms, signed
	ChangeOver float64           `json:"change_over"` // s
	Wait       float64           `json:"wait"`        // s, before the first reading
	Time       float64           `json:"time"`        // s, of change-over, wait and readings
	After      Resolution        `json:"after"`       // with it and those before it
}

// Resolution is how well gain, offset and series resistance are known: their
// expanded uncertainties, NaN where one is not determined, the gain's also where
// the plan asks for several.
type Resolution struct {
	Separable  bool   `json:"separable"`
	Gain       number `json:"U_gain"`
	Offset     number `json:"U_offset"` // in OffsetUnit
	Series     number `json:"U_series_resistance"`
	OffsetUnit string `json:"offset_unit"` // "V", or "1" for a share of range
}

// Why the advice ends where it does.
const (
	StoppedByTime   = "no step that is worth its time fits into what is left"
	StoppedByReturn = "no further step is worth its time"
)

// AdviceFor are the results that advice can be asked for, one at a time.
var AdviceFor = []string{OfOffset, OfSeries, OfGain}

// Advise finds what to measure next, in so many minutes: from what the plan's own
// steps will tell, or from what was read.
func Advise(p *plan.Plan, set *reading.Set, what string, minutes float64) (*Advice, error) {
	if what != "" && !slices.Contains(AdviceFor, what) {
		panic("calib: no advice is given for " + what)
	}
	m, last, err := atHand(p, set)
	if err != nil {
		return nil, err
	}
	known, err := m.known()
	if err != nil {
		return nil, err
	}
	all, err := p.Candidates()
	if err != nil {
		return nil, err
	}
	s, err := newSearch(m.extend(all, known), len(m.obs), asking(what, len(m.obs)), last)
	if err != nil {
		return nil, err
	}
	a := &Advice{For: what, Minutes: minutes, Candidates: len(s.candidates), Coverage: p.Decision.Coverage,
		Before: m.resolution(known), Steps: []AdvisedStep{}}
	if a.Stopped, err = s.run(60 * minutes); err != nil {
		return nil, err
	}
	return a, a.take(m, known, all, s)
}

// asking finds the parameters asked for; of the gains, those of the first have observations.
func asking(what string, have int) func(w *layout) []int {
	return func(w *layout) (asked []int) {
		if what == OfGain || what == "" {
			for _, k := range w.gain[:have] {
				if k >= 0 && !slices.Contains(asked, k) {
					asked = append(asked, k)
				}
			}
		}
		if what == OfOffset || what == "" {
			asked = append(asked, w.offset)
		}
		if what == OfSeries || what == "" {
			asked = append(asked, w.series)
		}
		return asked
	}
}

// atHand is the model before anything is added, and the step that the bench stands at.
func atHand(p *plan.Plan, set *reading.Set) (m *model, last int, err error) {
	if set == nil {
		return perfect(p), len(p.Steps) - 1, nil
	}
	if m, err = newModel(p, set); err != nil {
		return nil, 0, err
	}
	return m, set.Readings[len(set.Readings)-1].Step, nil
}

// known is the fit that the plan asks for, with the series resistance held where
// it cannot be told from the offset.
func (m *model) known() (*estimate, error) {
	e, err := m.estimate(m.plan.Fit.Gain, nothing)
	if err == nil && !(e.separable() && e.seesSignal()) {
		e, err = m.estimate(m.plan.Fit.Gain, seriesHeld)
	}
	return e, err
}

// threeOf are gain, offset and series resistance, as far as a fit determines them.
func (m *model) threeOf(e *estimate) (gain, offset, series Estimate) {
	w := e.layout
	gain, offset, series = Estimate{Unit: "1"}, Estimate{Unit: offsetUnit(m.plan)}, Estimate{Unit: "ohm"}
	if w.gains == 1 {
		gain = m.value(e, 0, "1")
	}
	if w.offset >= 0 && w.series >= 0 && e.separable() {
		offset, series = m.value(e, w.offset, offset.Unit), m.value(e, w.series, "ohm")
	}
	return gain, offset, series
}

func (m *model) resolution(e *estimate) Resolution {
	gain, offset, series := m.threeOf(e)
	U := func(e Estimate) number {
		if !e.Known {
			return number(math.NaN())
		}
		return number(e.Expanded())
	}
	return Resolution{Separable: series.Known, Gain: U(gain), Offset: U(offset), Series: U(series), OffsetUnit: offset.Unit}
}

// take enters what the search chose, with what is known after each step.
func (a *Advice) take(m *model, known *estimate, all *plan.Plan, s *search) error {
	longer := *all
	longer.Steps = slices.Clone(m.plan.Steps)
	prefix := m.plan.Prefix()
	a.After, a.Plan = a.Before, &longer
	var blocks strings.Builder
	for i, c := range s.chosen {
		step := all.Steps[s.m.obs[c.obs].step]
		name := fmt.Sprintf("%s%d.", prefix, i+1)
		step.ID, step.Repeats = name+"1", c.n
		longer.Steps = append(longer.Steps, step)
		fmt.Fprintf(&blocks, "\n%s", longer.Block(&step, name))
		with := m.extend(&longer, known)
		e, err := with.known()
		if err != nil {
			return fmt.Errorf("with step %s added: %w", step.ID, err)
		}
		a.After = with.resolution(e)
		advised := AdvisedStep{Index: len(longer.Steps) - 1, ID: step.ID, Frequency: step.Frequency,
			Amplitude: all.Generator.Amplitudes[step.Amplitude].Shown, Tap: all.Arms[step.Tap].Name, Set: map[string]string{},
			Range: all.Detector.Ranges[step.Range], PhaseDeg: step.Phase * 180 / math.Pi, Repeats: c.n, Expected: c.expected,
			ChangeOver: c.changeOver, Wait: c.wait, Time: c.time(c.n), After: a.After}
		for arm, k := range step.Set {
			if all.Arms[arm].Open {
				advised.Set[all.Arms[arm].Name] = all.Arms[arm].Nominal[k]
			}
		}
		a.Steps = append(a.Steps, advised)
		a.Time += advised.Time
	}
	a.Block = strings.TrimPrefix(blocks.String(), "\n")
	return nil
}
