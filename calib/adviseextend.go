package calib

import (
	"math"
	"math/cmplx"

	"rungproof/calib/plan"
)

// extend is the measurement with more steps, those that p has behind the model's
// own. Their readings are the ones that the detector as fitted would give.
func (m *model) extend(p *plan.Plan, known *estimate) *model {
	x := emptyModel(p)
	copy(x.byStep, m.byStep)
	x.obs = append([]observation(nil), m.obs...)
	x.repeats = m.repeats
	for step := len(m.plan.Steps); step < len(p.Steps); step++ {
		o := observation{step: step, n: p.Steps[step].Repeats, rng: p.Steps[step].Range}
		x.predictScatter(&o)
		m.learnScatter(&o)
		o.settle()
		x.byStep[step] = len(x.obs)
		x.obs = append(x.obs, o)
	}
	v := x.as(known)
	x.forward.compute(v.nu, v.r)
	var r row
	for i := len(m.obs); i < len(x.obs); i++ {
		x.predict(i, v, &r)
		x.obs[i].mean = r.value * cmplx.Conj(r.turn)
	}
	return x
}

// as is the detector and the series resistance that a fit to fewer steps found,
// the inputs at their stated values.
func (x *model) as(known *estimate) parameters {
	const offset, offsetY, series, phases = 0, 1, 2, 3
	old := known.layout
	w := &layout{offset: offset, offsetY: offsetY, series: series, inputs: -1, gain: make([]int, len(x.obs))}
	p := []float64{known.v.get(old.offset, 0), known.v.get(old.offsetY, 0), known.v.get(old.series, 0)}
	for f := range x.plan.Frequencies {
		w.phase = append(w.phase, phases+f)
		phase := 0.0
		if f < len(old.phase) {
			phase = known.v.get(old.phase[f], 0)
		}
		p = append(p, phase)
	}
	gainOf := map[int]int{}
	for i := range x.obs {
		key := 0
		switch o := &x.obs[i]; known.gain {
		case gainPerRange:
			key = o.rng
		case gainPerFrequency:
			key = frequencyIndex(x.plan, x.plan.Steps[o.step].Frequency)
		}
		k, have := gainOf[key]
		if !have {
			k = len(p)
			gainOf[key] = k
			p = append(p, known.gainBy(key))
		}
		w.gain[i] = k
	}
	return w.at(p, x.forward.stated())
}

// gainBy is the gain of a range or a frequency; 1 where the fit has none.
func (e *estimate) gainBy(key int) float64 {
	for k, of := range e.keys {
		if of == key {
			return e.result.P[k]
		}
	}
	return 1
}

// learnScatter gives a step that is yet to be read the scatter that the repeats of
// those read showed, on its range or else on the worst one.
func (m *model) learnScatter(o *observation) {
	if m.repeats.Basis != ScatterObserved && m.repeats.Basis != ScatterEnlarged {
		return
	}
	s, worst, here := &o.scatter, 0.0, false
	for i := range m.obs {
		read := &m.obs[i]
		if here && read.rng != o.rng {
			continue
		}
		share := read.scatter.white // for noise that the plan does not state, as it stands
		if m.repeats.Basis == ScatterEnlarged {
			predicted := observation{step: read.step, rng: read.rng}
			m.predictScatter(&predicted)
			share = (read.scatter.white + read.scatter.gain) / (predicted.scatter.white + predicted.scatter.gain)
		}
		if read.rng == o.rng && !here {
			worst, here = share, true
		}
		worst = math.Max(worst, share)
	}
	if m.repeats.Basis == ScatterObserved {
		s.white = math.Max(s.white, worst)
		return
	}
	s.white, s.gain = s.white*worst, s.gain*worst
}
