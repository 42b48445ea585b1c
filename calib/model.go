package calib

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"

	"rungproof/calib/detector"
	"rungproof/calib/plan"
)

// The measurement model. V_i is the drop of step i, φ_i the phase of the
// reference, g, o, r the gain, offset and series resistance, ν the inputs:
//
//	in-phase:   x_i = g·|V_i|·(cos φ_i·(1 − a) + sin φ_i·δ) + o
//	magnitude:  r_i = mean of | g·|V_i| + o + noise |
//	two-phase:  z_i = g·e^{j(φ_f + arg V_i − φ_i)}·|V_i| + o_x + j·o_y
//
// with V_i = E_i(ν)·H_i(ν, r). a and δ, loss and angle of alignment, φ_f, one
// phase a frequency, and the ν are parameters beside g, o and r. δ counts only
// where the reference stands off the axis; there it matters more than a.

// layout says where the parameters stand in the vector that is fitted.
// An index of -1 means that the parameter is held at zero (a gain: at one).
type layout struct {
	gain    []int // by observation; nil: a gain of 1 at all
	offset  int
	offsetY int
	series  int
	phase   []int // by frequency
	inputs  int   // the first of the inputs; -1: at their stated values
	n       int
	gains   int
}

// gainAt is where the gain of an observation stands; -1 where it is 1.
func (w *layout) gainAt(i int) int {
	if w.gain == nil {
		return -1
	}
	return w.gain[i]
}

// parameters are the values that a layout's vector stands for.
type parameters struct {
	r     float64
	nu    []float64
	p     []float64
	where *layout

	noiseless bool         // a magnitude without the noise that makes it read high
	turns     []complex128 // two-phase: what each reading is multiplied by; nil: by the expected phasor's direction at v
}

func (w *layout) at(p []float64, stated []float64) parameters {
	v := parameters{p: p, where: w, nu: stated}
	if w.series >= 0 {
		v.r = p[w.series]
	}
	if w.inputs >= 0 {
		v.nu = p[w.inputs : w.inputs+len(stated)]
	}
	return v
}

func (v parameters) get(index int, held float64) float64 {
	if index < 0 {
		return held
	}
	return v.p[index]
}

// row is what the model predicts for one observation, and the derivatives.
// For two-phase readings it is complex and turned so that its real part lies
// along the expected phasor; else it is real.
type row struct {
	value    complex128
	turn     complex128 // what the reading is to be multiplied by
	byGain   complex128
	byOffset complex128
	byY      complex128
	bySeries complex128
	byPhase  complex128
	byInput  []partial
	signal   float64 // magnitude: the signal beneath the noise, V rms
}

type partial struct {
	input int
	d     complex128
}

// predict fills row for one observation, the forward model being computed at v.
func (m *model) predict(i int, v parameters, out *row) {
	o := &m.obs[i]
	d := &m.forward.drops[m.forward.of[o.step]]
	s := &m.plan.Steps[o.step]
	g := v.get(v.where.gainAt(i), 1)
	full := 1.0
	if m.plan.Fit.OffsetPerRange {
		full = m.plan.Detector.Ranges[o.rng]
	}
	offset := v.get(v.where.offset, 0) * full
	*out = row{turn: 1, byInput: out.byInput[:0]}
	size, unit := d.size()
	switch m.plan.Detector.Reads {
	case plan.TwoPhase:
		turned := cmplx.Rect(1, v.get(v.where.phase[d.frequency], 0)-s.Phase)
		if out.turn = cmplx.Conj(unit * turned); v.turns != nil {
			out.turn = v.turns[i]
		}
		k := turned * out.turn
		out.value = complex(g, 0)*d.V*k + complex(offset, v.get(v.where.offsetY, 0)*full)*out.turn
		out.byGain = d.V * k
		out.byPhase = complex(0, g) * d.V * k
		out.byOffset = complex(full, 0) * out.turn
		out.byY = complex(0, full) * out.turn
		out.bySeries = complex(g, 0) * d.byR * k
		for j, in := range d.inputs {
			out.byInput = append(out.byInput, partial{in, complex(g, 0) * d.byInput[j] * k})
		}
	default:
		c := 1.0
		if m.plan.Detector.Reads == plan.InPhase {
			c = math.Cos(s.Phase)
			if k := m.forward.cosine[d.frequency]; k >= 0 {
				out.byInput = append(out.byInput, partial{k, complex(-g*size*c, 0)})
				c *= 1 - v.nu[k]
			}
			if k := m.forward.turn[d.frequency]; k >= 0 {
				out.byInput = append(out.byInput, partial{k, complex(g*size*math.Sin(s.Phase), 0)})
				c += v.nu[k] * math.Sin(s.Phase)
			}
		}
		along := func(z complex128) complex128 { return complex(real(cmplx.Conj(unit)*z), 0) }
		out.value = complex(g*size*c+offset, 0)
		out.byGain = complex(size*c, 0)
		out.byOffset = complex(full, 0)
		out.bySeries = complex(g*c, 0) * along(d.byR)
		for j, in := range d.inputs {
			out.byInput = append(out.byInput, partial{in, complex(g*c, 0) * along(d.byInput[j])})
		}
		if m.plan.Detector.Reads == plan.Magnitude {
			out.signal = real(out.value)
			noise := o.noise
			if v.noiseless {
				noise = 0
			}
			mean, slope := detector.RiceMean(out.signal, noise)
			out.value = complex(mean, 0)
			out.scale(slope)
		}
	}
	if o.output {
		m.throughMeter(o, v, out)
	}
}

// scale multiplies every derivative.
func (r *row) scale(by float64) {
	k := complex(by, 0)
	r.byGain *= k
	r.byOffset *= k
	r.byY *= k
	r.bySeries *= k
	r.byPhase *= k
	for j := range r.byInput {
		r.byInput[j].d *= k
	}
}

// throughMeter adds the voltmeter at the analogue output: its scale and its zero
// are errors that all readings taken there have in common.
func (m *model) throughMeter(o *observation, v parameters, out *row) {
	scale, zero := 0.0, 0.0
	perVolt := m.plan.Detector.Ranges[o.rng] / m.plan.Detector.Output.FullScale
	if k := m.forward.meter[0]; k >= 0 {
		scale = v.nu[k]
		out.byInput = append(out.byInput, partial{k, out.value})
	}
	if k := m.forward.meter[1]; k >= 0 {
		zero = v.nu[k] * perVolt
	}
	out.value = out.value*complex(1+scale, 0) + complex(zero, 0)
	if k := m.forward.meter[1]; k >= 0 {
		out.byInput = append(out.byInput, partial{k, complex(perVolt, 0)})
	}
}

// residuals fills observed − predicted and ∂predicted/∂p for all observations of
// the fit: one row each, or two (along and across) for two-phase readings.
// The axes stay where turns has them, so that χ² is one function of p.
func (m *model) residuals(w *layout, turns []complex128, p, res []float64, jac *mat.Dense) {
	v := w.at(p, m.forward.stated())
	v.turns = turns
	m.forward.compute(v.nu, v.r)
	var r row
	k := 0
	for i := range m.obs {
		o := &m.obs[i]
		if o.left {
			continue
		}
		m.predict(i, v, &r)
		diff := o.mean*r.turn - r.value
		m.fill(w, i, &r, func(column int, d complex128) {
			jac.Set(k, column, jac.At(k, column)+real(d))
			if m.axes == 2 {
				jac.Set(k+1, column, jac.At(k+1, column)+imag(d))
			}
		})
		res[k] = real(diff)
		if m.axes == 2 {
			res[k+1] = imag(diff)
		}
		k += m.axes
	}
}

// fill passes on the derivatives of a row by parameter.
func (m *model) fill(w *layout, i int, r *row, set func(column int, d complex128)) {
	at := func(column int, d complex128) {
		if column >= 0 {
			set(column, d)
		}
	}
	at(w.gainAt(i), r.byGain)
	at(w.offset, r.byOffset)
	at(w.offsetY, r.byY)
	at(w.series, r.bySeries)
	at(w.phase[m.forward.drops[m.forward.of[m.obs[i].step]].frequency], r.byPhase)
	if w.inputs >= 0 {
		for _, d := range r.byInput {
			set(w.inputs+d.input, d.d)
		}
	}
}
