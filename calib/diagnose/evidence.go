package diagnose

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// misfitLevel is the probability below which what no cause explains is reported.
const misfitLevel = 0.005

// shown are the causes that the readings show, the weightiest first, and what no
// cause explains.
func shown(e *calib.Evaluation) []calib.Finding {
	if e.Result.NoSignal {
		return nil
	}
	found, clean, left := search(e)
	if clean == nil {
		return rangeGain(e)
	}
	var out []calib.Finding
	named := map[string]bool{}
	for i := range found {
		r := &found[i]
		named[r.kind] = true
		if !e.Result.Separable() && (r.kind == Offset || r.kind == Series) {
			continue // the finding that the two cannot be told apart stands for it
		}
		out = append(out, r.finding(e, r.fall/clean.ChiSquared, left))
	}
	if !named[RangeGain] {
		out = append(out, rangeGainBeside(e, len(out) > 0 && fitOf(left) >= misfitLevel)...)
	}
	return append(out, misfit(e, left)...)
}

// rangeGainBeside is the finding that one gain is not enough; where the causes
// already named explain why, it only says what the verdict rests on.
func rangeGainBeside(e *calib.Evaluation, explained bool) []calib.Finding {
	all := rangeGain(e)
	if len(all) == 0 || !explained {
		return all
	}
	return one(OneGainEach, "", "one gain for all ranges does not fit (%s), which the causes above explain; errors and verdict rest on a fit with one gain a range.",
		probability(float64(e.Result.ByRange.PCommon)))
}

// finding puts a cause in words.
func (r *ranked) finding(e *calib.Evaluation, share float64, left *calib.Hypothesis) calib.Finding {
	x := r.estimate(e)
	kind := r.kind
	do := r.do
	if name := convention(x.Value); kind == Gain && name != "" {
		kind = Convention
		do = "check the amplitude's convention: this ratio is " + name + "."
	} else if s := shareOfLimits(e, func(s *calib.StepResult) float64 { return r.part(x, s) }); r.whose == "the detector's" && s < small {
		do = within(s)
	}
	f := calib.Finding{Kind: kind, Text: r.describe(e, x), Do: do}
	f.Evidence = &calib.Evidence{Cause: kind, Variant: r.variant.label, Whose: r.whose, Size: x.Value, Expanded: x.Expanded(), Unit: x.Unit,
		Share: math.Min(1, share), Fall: r.fall, P: r.p, Strength: strength(r.p), Decides: r.decides}
	for _, v := range r.rivals {
		f.Evidence.Contradict = append(f.Evidence.Contradict, strings.TrimSpace(fmt.Sprintf("%s %s", v.kind, v.label))+fmt.Sprintf(" explains as much (weight %.2g)", v.weight))
	}
	if p := fitOf(left); p < misfitLevel {
		f.Evidence.Contradict = append(f.Evidence.Contradict, "with every cause named the readings still do not fit ("+probability(p)+")")
	}
	f.Text += " " + f.Evidence.Strength + " evidence (" + probability(r.p) + ")"
	if len(f.Evidence.Contradict) > 0 {
		f.Text += "; but " + strings.Join(f.Evidence.Contradict, ", ")
		f.Do += " What decides: " + r.decides
	}
	f.Text += "."
	return f
}

// estimate is the size of a cause: for the parameters of the main fit what that
// has, with all of its correlations; for a gain its deviation from 1.
func (r *ranked) estimate(e *calib.Evaluation) calib.Estimate {
	k := e.Result.CoverageFactor
	x := calib.Estimate{Value: r.size, U: r.u, Unit: r.variant.unit, Known: true, K: k}
	offset, series := e.Result.Deciding()
	switch {
	case r.kind == Gain && !e.Result.ByRange.Used && e.Result.Fit.Gain.Known:
		x = e.Result.Fit.Gain
	case r.kind == Gain:
		x.Value++
	case r.kind == Offset && r.variant.label == "" && offset.Known:
		x = offset
	case r.kind == Offset && r.variant.label != "" && e.Result.Fit.OffsetQuadrature != nil:
		x = *e.Result.Fit.OffsetQuadrature
	case r.kind == Series && series.Known:
		x = series
	}
	return x
}

// part is the part of a step's error that a cause makes, where that is plain.
func (r *ranked) part(x calib.Estimate, s *calib.StepResult) float64 {
	switch r.kind {
	case Gain:
		return (x.Value - 1) * s.Expected
	case Offset:
		if x.Unit == "1" {
			return x.Value * s.Range
		}
		return x.Value
	}
	return math.Inf(1)
}

// describe is what a cause is and how large.
func (r *ranked) describe(e *calib.Evaluation, x calib.Estimate) string {
	amount, of := size(x), r.variant.label
	if of != "" {
		of = " (" + of + ")"
	}
	switch r.kind {
	case Gain:
		x.Value--
		return fmt.Sprintf("the gain is off by %s. It is the detector's, as far as the generator's amplitude and the ladder are as the plan states them.", size(x))
	case Offset:
		return fmt.Sprintf("the detector adds %s to every reading%s, whatever the signal. It is the detector's.", amount, of)
	case Series:
		if x.Value < 0 {
			return fmt.Sprintf("there is %s in series with %s against the wiring that the plan states: less than stated. It is the bench's, and is not counted against the detector.", amount, seriesArm(e.Plan))
		}
		return fmt.Sprintf("there is %s in series with %s beyond the wiring that the plan states: it grows with the current and stays with the ladder. It is the bench's, and is not counted against the detector.", amount, seriesArm(e.Plan))
	case RangeGain:
		return fmt.Sprintf("the gain of %s is off by %s beside the others. It is the detector's.", r.variant.label, amount)
	case OneSetting:
		return fmt.Sprintf("%s gives %s of its drop at every amplitude%s. It is the bench's.", r.variant.label, times(1+x.Value)+" times", slip(1+x.Value))
	case Swapped:
		return fmt.Sprintf("%s look exchanged (%s of the difference). It is the bench's.", r.variant.label, quantity.Share(x.Value, 2))
	case Outlier:
		return fmt.Sprintf("%s alone is off by %s.", r.variant.label, amount)
	}
	text := fmt.Sprintf(r.cause.says, amount)
	if r.variant.label != "" {
		text = strings.TrimSuffix(text, ".") + " (" + r.variant.label + ")."
	}
	return text + " It is " + r.owner() + "."
}

func (r *ranked) owner() string {
	if r.whose == "open" {
		return "open whose"
	}
	return r.whose
}

// slip names a factor that is a decimal point's.
func slip(factor float64) string {
	for _, s := range []struct {
		factor float64
		name   string
	}{{10, ": a decimal slip, ten times too much"}, {0.1, ": a decimal slip, a tenth of it"}, {100, ": a decimal slip, a hundred times too much"}, {0.01, ": a decimal slip, a hundredth of it"}} {
		if math.Abs(factor/s.factor-1) < 0.05 {
			return s.name
		}
	}
	return ""
}

// strength is what a probability means, in a word.
func strength(p float64) string {
	switch {
	case p < 1e-6:
		return "Overwhelming"
	case p < 1e-4:
		return "Strong"
	}
	return "Clear"
}

// fitOf is the probability that chance alone leaves as large a χ² as a hypothesis does.
func fitOf(h *calib.Hypothesis) float64 {
	if h.DOF < 1 {
		return 1
	}
	return distuv.ChiSquared{K: float64(h.DOF)}.Survival(h.ChiSquared)
}

// misfit is what no cause explains.
func misfit(e *calib.Evaluation, left *calib.Hypothesis) []calib.Finding {
	p := fitOf(left)
	if p >= misfitLevel {
		return nil
	}
	worst, at := 0.0, ""
	for _, s := range e.Result.Steps {
		if z := math.Abs(float64(s.Standardised)); z > worst {
			worst, at = z, s.ID
		}
	}
	return one(Misfit, "look at that step's settings first, then at the uncertainties that the plan states.",
		"the readings do not fit the model as well as their uncertainties say, whatever cause is added (χ² = %.4g with %d degrees of freedom, %s); the farthest is step %s.",
		left.ChiSquared, left.DOF, probability(p), at)
}

func volts(v float64) string { return quantity.Plain(v, "V") }
