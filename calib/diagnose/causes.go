package diagnose

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/calib"
	"rungproof/calib/plan"
	"rungproof/circuit"
)

// cause is one thing that can be wrong: a term of the measurement model in one or
// several variants, which are tried in turn.
type cause struct {
	kind     string
	variants []variant
	whose    string // "the detector's", "the bench's" or "open"
	do       string
	decides  string // the reading that decides between this cause and its likes
	says     string // what it is, with %s for its size; "" where evidence.go has a sentence of its own
}

// variant is one term of a cause.
type variant struct {
	label string // what tells it from the others; may be empty
	unit  string // of one unit of the term: "1", "V", "Ω", …
	term  calib.Term
	whole bool // all or nothing: a size far from one is something else
	alone int  // 1 + the index of the one step that it moves; its term is made when it is wanted
}

// shape is a variant by its term.
func shape(label, unit string, term calib.Term) variant {
	return variant{label: label, unit: unit, term: term}
}

// on is the variant's term on a hypothesis.
func (v *variant) on(h *calib.Hypothesis) calib.Term {
	if v.alone > 0 {
		return h.Along(v.alone - 1)
	}
	return v.term
}

// try scores the variant on a hypothesis.
func (v *variant) try(h *calib.Hypothesis) (calib.Score, bool) {
	if v.alone > 0 {
		return h.TryOne(v.alone - 1)
	}
	return h.Try(v.term)
}

// Kinds of causes that are no other finding's kind.
const (
	OffsetOfRange = "offset as a share of range"
	ReturnSeries  = "series resistance in the return"
	Coupling      = "coupling from the reference"
	ResistivePick = "resistive pick-up"
	CapacitivePck = "capacitive pick-up"
	Compression   = "non-linearity"
	Loading       = "input loading"
	TopCapacity   = "capacitance across the top arm"
	OneSetting    = "one setting off"
	Swapped       = "two settings swapped"
	Asymmetry     = "asymmetry between 0° and 180°"
	Rectified     = "noise rectified by the magnitude"
	NotSettled    = "not settled"
	Drift         = "drift during the run"
	ReferenceOff  = "reference phase not at maximum"
	Skewed        = "quadrature not at 90°"
	Outlier       = "outlier"
)

func known(kind string, variants []variant, whose, do, decides string) cause {
	return cause{kind: kind, variants: variants, whose: whose, do: do, decides: decides}
}

// bench gathers what causes are made of.
type bench struct {
	e *calib.Evaluation
	p *plan.Plan
	s []calib.Sight
}

// each makes a term from what one unit of it adds to a reading.
func (b *bench) each(of func(s *calib.Sight) complex128) calib.Term {
	out := make([]complex128, len(b.s))
	for i := range b.s {
		out[i] = of(&b.s[i])
	}
	return calib.Term{Add: out}
}

// still is a term that keeps its direction in the detector's axes.
func (b *bench) still(of func(s *calib.Sight) complex128) calib.Term {
	t := b.each(of)
	t.Fixed = true
	return t
}

// expected is the reading of a detector without fault.
func expected(s *calib.Sight) complex128 { return complex(s.Drop, 0) * s.Along }

// causes are all that can be tried with these readings, in a fixed order.
func causes(e *calib.Evaluation) []cause {
	b := &bench{e: e, p: e.Plan, s: e.Sights()}
	all := []cause{b.gain(), b.offset(), b.series()}
	all = append(all, b.offsetOfRange(), b.returnSeries(), b.coupling(), b.pickUp(), b.capacitive(),
		b.rangeGain(), b.nonLinear(), b.loading(), b.topCapacity(), b.oneSetting(), b.swapped(), b.asymmetry(),
		b.rectified(), b.notSettled(), b.drift(), b.referenceOff(), b.skewed(), b.outlier())
	var out []cause
	for _, c := range all {
		if len(c.variants) > 0 {
			c.says = sentences[c.kind]
			out = append(out, c)
		}
	}
	return out
}

// sentences say what a cause is, its size being put in.
var sentences = map[string]string{
	OffsetOfRange: "the detector adds %s of full scale to every reading, whatever the signal.",
	ReturnSeries:  "there is %s in the common lead, inside the detector's taps.",
	Coupling:      "%s reaches the detector from its own reference, not through the ladder: the same at every amplitude, but it turns with the reference.",
	ResistivePick: "%s of the generator's amplitude reaches the detector beside the ladder, in phase.",
	CapacitivePck: "the generator reaches the detector beside the ladder in quadrature, with %s times its angular frequency.",
	Compression:   "the reading bends by %s at full scale.",
	Loading:       "the detector's input loads the ladder otherwise than stated, by %s.",
	TopCapacity:   "%s more than stated lies across the top arm.",
	Asymmetry:     "the readings at 0° and 180° differ by twice %s of their size, which no constant explains.",
	Rectified:     "the magnitude reads high where the signal is near the noise, as if the noise's power were larger by %s of the stated.",
	NotSettled:    "the first reading of a step leans to the step before it, by %s of the difference.",
	Drift:         "it moves by %s over the run.",
	ReferenceOff:  "the reference stands %s off its maximum.",
	Skewed:        "the quadrature axis stands %s off the right angle.",
}

func (b *bench) gain() cause {
	return known(Gain, []variant{shape("", "1", b.each(expected))}, "the detector's",
		"correct the readings by it, or have the detector adjusted.", "a generator or a ladder of another make: an error of theirs goes with them.")
}

func (b *bench) offset() cause {
	c := known(Offset, []variant{shape("", "V", b.still(func(*calib.Sight) complex128 { return 1 }))}, "the detector's",
		"zero the detector's output with the input shorted, or correct the readings by it.", "a reading with the source off: an offset stays.")
	if b.p.Detector.Reads == plan.TwoPhase {
		c.variants = append(c.variants, variant{label: "in quadrature", unit: "V", term: b.still(func(*calib.Sight) complex128 { return 1i })})
	}
	return c
}

func (b *bench) series() cause {
	arm := b.p.Fit.SeriesArm
	term := b.e.ByNumber(func(s *plan.Step) circuit.Variable {
		if arm >= 0 {
			return circuit.Variable{Element: circuit.ArmStray, Arm: arm}
		}
		return circuit.Variable{Element: circuit.ArmStray, Arm: s.Tap}
	})
	return known(Series, []variant{shape("", "Ω", term)}, "the bench's",
		"look for a lead or contact inside the detector's taps; shorten it, clean it, or state it as a [[wire]].",
		"a short in place of the tapped arm: what is left then is the lead's.")
}

func (b *bench) offsetOfRange() cause {
	if b.ranges() < 2 {
		return cause{}
	}
	return known(OffsetOfRange, []variant{shape("", "1", b.still(func(s *calib.Sight) complex128 { return complex(s.Full, 0) }))}, "the detector's",
		`zero the output on each range, or fit it: offset = "share of range" in [fit].`, "one small reading on two ranges: an offset in volts stays the same.")
}

// ranges is the number of different ranges that were read.
func (b *bench) ranges() int {
	seen := map[int]bool{}
	for i := range b.s {
		seen[b.s[i].Range] = true
	}
	return len(seen)
}

// returnSeries is left out where the ladder has no other way back: there a
// resistance in the return is one in the tapped arm.
func (b *bench) returnSeries() cause {
	shunts := 0
	for i := range b.p.Arms {
		if b.p.Arms[i].Place == plan.Shunt {
			shunts++
		}
	}
	if shunts < 2 {
		return cause{}
	}
	term := b.e.ByNumber(func(*plan.Step) circuit.Variable { return circuit.Variable{Element: circuit.ReturnSeenLead} })
	return cause{kind: ReturnSeries, variants: []variant{shape("", "Ω", term)}, whose: "the bench's",
		do: "take the detector's low side to the ladder's common itself.", decides: "the detector's low side moved from the generator to the ladder's common."}
}

// coupling has the same size at every amplitude and turns with the reference. With
// the reference at one phase it is an offset to all appearance.
func (b *bench) coupling() cause {
	if b.p.Detector.Reads == plan.Magnitude || b.phases() < 2 {
		return cause{}
	}
	variants := []variant{shape("in phase", "V", b.each(func(s *calib.Sight) complex128 { return b.turned(s, 1) }))}
	quadrature := b.each(func(s *calib.Sight) complex128 { return b.turned(s, 1i) })
	return known(Coupling, append(variants, variant{label: "in quadrature", unit: "V", term: quadrature}), "the bench's",
		"keep the reference's lead away from the signal's; screen it.", "a reading with the source off and the reference on: the coupling is still there, and turns with the reference.")
}

// turned is a phasor as the detector sees it, its reference being turned.
func (b *bench) turned(s *calib.Sight, phasor complex128) complex128 {
	z := phasor * cmplx.Rect(1, -s.Phase)
	if b.p.Detector.Reads == plan.TwoPhase {
		return phasor * s.Turn
	}
	return complex(real(z), 0)
}

func (b *bench) phases() int {
	seen := map[float64]bool{}
	for i := range b.s {
		seen[math.Round(b.s[i].Phase*1e6)] = true
	}
	return len(seen)
}

func (b *bench) pickUp() cause {
	return known(ResistivePick, []variant{shape("", "1", b.each(func(s *calib.Sight) complex128 { return complex(s.EMF, 0) * s.Along }))}, "the bench's",
		"part the generator's leads from the detector's; one common point.", "a short in place of the tapped arm: a pick-up stays, a resistance in series with the arm stays too, an offset does not grow with the amplitude.")
}

// capacitive pick-up is in quadrature and grows with frequency: seen where the
// quadrature is, or the reference stands off the axis.
func (b *bench) capacitive() cause {
	if b.p.Detector.Reads == plan.Magnitude {
		return cause{}
	}
	term := b.each(func(s *calib.Sight) complex128 { return b.turned(s, complex(0, s.EMF*s.Frequency*2*math.Pi)) })
	return known(CapacitivePck, []variant{shape("", "s", term)}, "the bench's",
		"screen the top resistor and the leads from the detector's.", "the same step at another frequency: it grows with it.")
}

func (b *bench) rangeGain() cause {
	c := cause{kind: RangeGain, whose: "the detector's", do: "have that range adjusted or repaired.", decides: "one drop read on two ranges."}
	if b.ranges() < 2 {
		return c
	}
	for r, full := range b.p.Detector.Ranges {
		term := b.each(func(s *calib.Sight) complex128 {
			if s.Range != r {
				return 0
			}
			return expected(s)
		})
		if nonZero(term) {
			c.variants = append(c.variants, variant{label: "the " + volts(full/b.p.Detector.ToRMS) + " range", unit: "1", term: term})
		}
	}
	return c
}

func nonZero(t calib.Term) bool {
	for _, z := range t.Add {
		if z != 0 {
			return true
		}
	}
	return false
}

func (b *bench) nonLinear() cause {
	power := func(n float64) calib.Term {
		return b.each(func(s *calib.Sight) complex128 { return expected(s) * complex(math.Pow(s.Drop/s.Full, n), 0) })
	}
	return known(Compression, []variant{shape("with the square of the share of range", "1", power(2)), shape("with the share of range", "1", power(1))}, "the detector's",
		"use less of each range, or have it adjusted.", "one drop on the range where it fills it and on the next larger one.")
}

func (b *bench) loading() cause {
	c := cause{kind: Loading, whose: "the bench's", do: "measure the detector's input, and state it.", decides: "the smallest and the largest setting of the box at one amplitude: it grows with the box's resistance."}
	if !math.IsInf(b.p.Detector.InputResistance.X, 0) {
		r := b.p.Detector.InputResistance.X
		term := b.e.ByNumber(func(*plan.Step) circuit.Variable { return circuit.Variable{Element: circuit.InputR} })
		for i := range term.Add { // one unit: all of the conductance stated once more
			term.Add[i] *= complex(-r, 0)
		}
		c.variants = append(c.variants, variant{label: "conductance of the input beyond the stated", unit: "1", term: term})
	}
	term := b.e.ByNumber(func(*plan.Step) circuit.Variable { return circuit.Variable{Element: circuit.InputC} })
	c.variants = append(c.variants, variant{label: "capacitance of the input beyond the stated", unit: "F", term: term})
	return c
}

func (b *bench) topCapacity() cause {
	for i := range b.p.Arms {
		if b.p.Arms[i].Place == plan.Series {
			term := b.e.ByNumber(func(*plan.Step) circuit.Variable { return circuit.Variable{Element: circuit.ArmC, Arm: i} })
			return known(TopCapacity, []variant{shape("of "+b.p.Arms[i].Name, "F", term)}, "the bench's",
				"state the resistor's capacitance; keep its ends apart.", "the same step at another frequency: it grows with it.")
		}
	}
	return cause{}
}

// oneSetting is a setting of a box that is not what it says: all steps at it, at
// every amplitude, read too much or too little by one share.
func (b *bench) oneSetting() cause {
	c := cause{kind: OneSetting, whose: "the bench's", do: "look at the box's switch and at the decimal point of the setting; measure that setting.", decides: "that setting measured with an ohmmeter, or the same drop by another setting."}
	for arm := range b.p.Arms {
		a := &b.p.Arms[arm]
		if len(a.Settings) < 3 {
			continue
		}
		for k, nominal := range a.Nominal {
			c.variants = append(c.variants, variant{label: fmt.Sprintf("%s at %s", a.Name, nominal), unit: "1", term: b.each(func(s *calib.Sight) complex128 {
				if s.Set[arm] != k {
					return 0
				}
				return expected(s)
			})})
		}
	}
	return c
}

// swapped are two settings in each other's place: one unit of the term is the swap.
func (b *bench) swapped() cause {
	c := cause{kind: Swapped, whose: "the bench's", do: "take the two steps again, or exchange their readings if the bench sheet shows the slip.", decides: "either step once more."}
	for arm := range b.p.Arms {
		a := &b.p.Arms[arm]
		if len(a.Settings) < 3 || len(a.Settings) > 30 {
			continue
		}
		for k := range a.Settings {
			for l := k + 1; l < len(a.Settings); l++ {
				ratio := a.Settings[l].X / a.Settings[k].X
				c.variants = append(c.variants, variant{label: fmt.Sprintf("%s at %s and at %s", a.Name, a.Nominal[k], a.Nominal[l]), unit: "1", whole: true, term: b.each(func(s *calib.Sight) complex128 {
					switch s.Set[arm] {
					case k:
						return expected(s) * complex(ratio-1, 0)
					case l:
						return expected(s) * complex(1/ratio-1, 0)
					}
					return 0
				})})
			}
		}
	}
	return c
}

func (b *bench) asymmetry() cause {
	if b.p.Detector.Reads != plan.InPhase || b.phases() < 2 {
		return cause{}
	}
	return known(Asymmetry, []variant{shape("", "1", b.each(func(s *calib.Sight) complex128 { return complex(cmplx.Abs(expected(s)), 0) }))}, "open",
		"look for an earth loop or a harmonic that the detector rectifies. "+EarthCaution, "the detector on batteries or through a differential input: an earth loop's part goes.")
}

// rectified is a magnitude's bias by more noise than the plan states: the mean of
// |signal + noise| grows by σ²/2s for a strong signal, and by more for a weak one.
func (b *bench) rectified() cause {
	if b.p.Detector.Reads != plan.Magnitude {
		return cause{}
	}
	term := b.each(func(s *calib.Sight) complex128 { return complex(riceExcess(s.Drop, s.Noise), 0) })
	return known(Rectified, []variant{shape("noise power beyond the stated", "1", term)}, "the detector's",
		"read in phase, lengthen the time constant, or state the noise as it is.", "the weakest step with four times the time constant: the excess falls to a quarter.")
}

// notSettled is the first reading of a step leaning to the step before it.
func (b *bench) notSettled() cause {
	some := false
	term := b.each(func(s *calib.Sight) complex128 {
		if s.Before < 0 || s.Readings == 0 {
			return 0
		}
		some = true
		return (b.s[s.Before].Mean - expected(s)) / complex(float64(s.Readings), 0)
	})
	if !some {
		return cause{}
	}
	return known(NotSettled, []variant{shape("", "1", term)}, "the readings'", "wait as long as `rungproof expect` says after each change.", "the worst step once more after twice the wait.")
}

func (b *bench) drift() cause {
	last := 0.0
	for i := range b.s {
		if !math.IsNaN(b.s[i].Time) {
			last = math.Max(last, b.s[i].Time)
		}
	}
	if last == 0 {
		return cause{}
	}
	at := func(s *calib.Sight) complex128 {
		if math.IsNaN(s.Time) {
			return 0
		}
		return complex(s.Time/last, 0)
	}
	return known(Drift, []variant{
		shape("of the gain, over the run", "1", b.each(func(s *calib.Sight) complex128 { return at(s) * expected(s) })),
		shape("of the offset, over the run", "V", b.still(at)),
	}, "the detector's", "let the bench warm up; read the first steps once more at the end.", "the first step once more at the end.")
}

// referenceOff shows only where the reference stands off the axis.
func (b *bench) referenceOff() cause {
	if b.p.Detector.Reads != plan.InPhase {
		return cause{}
	}
	term := b.each(func(s *calib.Sight) complex128 {
		if sin := math.Sin(s.Phase); math.Abs(sin) > 1e-6 {
			return complex(s.Drop*sin, 0)
		}
		return 0
	})
	if !nonZero(term) {
		return cause{}
	}
	return known(ReferenceOff, []variant{shape("", "rad", term)}, "the readings'", "turn the reference to maximum again, by the null at 90°.", "a reading at 90° and one at 270°: they differ in sign, not in size.")
}

// skewed is the second axis not at right angles: y takes a share of x.
func (b *bench) skewed() cause {
	if b.p.Detector.Reads != plan.TwoPhase {
		return cause{}
	}
	return known(Skewed, []variant{
		shape("", "rad", b.still(func(s *calib.Sight) complex128 { return complex(0, real(expected(s))) })),
	}, "the detector's", "have its phase adjusted.", "the reference turned by 90°: x and y change places.")
}

func (b *bench) outlier() cause {
	c := cause{kind: Outlier, whose: "the readings'", do: "read it again.", decides: "that step once more."}
	for i := range b.s {
		if b.s[i].Left {
			continue
		}
		c.variants = append(c.variants, variant{label: "step " + b.p.Steps[b.s[i].Step].ID, unit: "V", alone: i + 1})
	}
	return c
}
