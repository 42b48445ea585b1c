// Package diagnose says what an evaluation means: whose fault a deviation is,
// how sure that is, and what to do about it. It adds findings to the result and
// changes no number of it.
package diagnose

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rungproof/calib"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// Kinds of findings.
const (
	NoSignal       = "no signal"
	OddReading     = "odd reading"
	BeyondLimit    = "beyond the limit"
	NotSeparable   = "not separable"
	Offset         = "offset"
	Series         = "series resistance"
	Gain           = "gain"
	Convention     = "amplitude convention"
	RangeGain      = "gain by range"
	OneGainEach    = "one gain a range"
	Misfit         = "misfit"
	Scatter        = "scatter"
	BeyondScale    = "beyond full scale"
	Flagged        = "flagged reading"
	NoReading      = "no reading"
	StandardLapsed = "standard past due"
	StandardIdle   = "standard not named"
	BenchLimits    = "the bench limits"
)

// level is the probability below which chance is not taken for the cause.
const level = 0.01

// Findings are what should be known about an evaluation, weightiest first. A
// parameter counts as found where it exceeds its expanded uncertainty.
func Findings(e *calib.Evaluation) []calib.Finding {
	out := []calib.Finding{} // [] in JSON, not null
	for _, find := range []func(*calib.Evaluation) []calib.Finding{
		noSignal, notSeparable, shown, scatter, beyondLimit, odd, lists, lapsed, unnamed, limited,
	} {
		out = append(out, find(e)...)
	}
	return append(out, calib.Cautions(e.Plan)...)
}

func one(kind, do, format string, args ...any) []calib.Finding {
	return []calib.Finding{{Kind: kind, Text: fmt.Sprintf(format, args...), Do: do}}
}

// size is an estimate with its expanded uncertainty; a share in percent or ppm, an
// angle in degrees.
func size(x calib.Estimate) string {
	U := x.Expanded()
	switch x.Unit {
	case "1":
		return quantity.SharePlusMinus(x.Value, U)
	case "ohm":
		return quantity.PlusMinus(x.Value, U, "Ω")
	case "rad":
		return quantity.PlusMinus(x.Value*180/math.Pi, U*180/math.Pi, "1") + "°"
	}
	return quantity.PlusMinus(x.Value, U, x.Unit)
}

// small is the share of the limit below which a detector's deviation needs no action.
const small = 0.5

// shareOfLimits is the largest share of a step's limit that a part of its error
// takes; infinite where nothing is judged.
func shareOfLimits(e *calib.Evaluation, part func(*calib.StepResult) float64) float64 {
	largest := math.Inf(1)
	for i := range e.Result.Steps {
		s := &e.Result.Steps[i]
		if share := math.Abs(part(s)) / float64(s.Limit); !math.IsNaN(share) && (math.IsInf(largest, 1) || share > largest) {
			largest = share
		}
	}
	return largest
}

func within(share float64) string {
	return fmt.Sprintf("it takes at most %.0f %% of a limit: no action is needed.", math.Ceil(100*share))
}

// seriesArm is the arm that the unknown series resistance is in.
func seriesArm(p *plan.Plan) string {
	if p.Fit.SeriesArm >= 0 {
		return p.Arms[p.Fit.SeriesArm].Name
	}
	name := p.Arms[p.Steps[0].Tap].Name
	for _, s := range p.Steps {
		if p.Arms[s.Tap].Name != name {
			return "the tapped arm"
		}
	}
	return name
}

func notSeparable(e *calib.Evaluation) []calib.Finding {
	f := &e.Result.Fit
	if e.Result.Separable() || f.Intercept == nil {
		return nil
	}
	text := "these readings cannot tell an offset of the detector from a series resistance of the bench"
	if f.Intercept.Known && f.AsSeries.Known {
		text += fmt.Sprintf(": together they are worth %s as an offset, or %s as a resistance in series with %s",
			size(*f.Intercept), size(*f.AsSeries), seriesArm(e.Plan))
	}
	text += "."
	if c := e.Result.Condition; c != nil {
		text += fmt.Sprintf(" All steps pass if the unknown series resistance is between %s and %s.", ohms(float64(c.From)), ohms(float64(c.To)))
	} else {
		text += " No series resistance makes all steps pass."
	}
	return one(NotSeparable, parting(calib.Part(e.Plan)), "%s", text)
}

func ohms(r float64) string {
	if math.IsInf(r, 0) {
		return "any"
	}
	return quantity.Format(r, 3, "Ω")
}

// parting is the advice for telling the two apart.
func parting(p *calib.Parting) string {
	if p == nil {
		return "add steps at another amplitude, or with the source off."
	}
	with := p.Change
	if p.Amplitude != "" {
		with += ", " + p.Amplitude
	}
	return fmt.Sprintf("take step %s once more with %s: the cheapest reading that tells them apart.", p.Step, with)
}

func rangeGain(e *calib.Evaluation) []calib.Finding {
	g := e.Result.ByRange
	if !(float64(g.PCommon) < level) || len(g.Gain) < 2 {
		return nil
	}
	odd := slices.DeleteFunc(oddOnes(e, g.Gain), func(k int) bool { return math.Abs(g.Gain[k].Value-1) < g.Gain[k].Expanded() })
	if len(odd) == 0 {
		return one(RangeGain, "look at the other findings first: a misfit can make the ranges differ.",
			"one gain for all ranges does not fit (%s), but no range stands out by more than its U.", probability(float64(g.PCommon)))
	}
	whose := make([]string, len(odd))
	for i, k := range odd {
		kg := g.Gain[k]
		whose[i] = fmt.Sprintf("the %s range reads %s off", quantity.Plain(kg.Range/e.Plan.Detector.ToRMS, "V"),
			quantity.SharePlusMinus(kg.Value-1, kg.Expanded()))
	}
	return one(RangeGain, "have that range adjusted or repaired; the others are judged without its error.",
		"one gain for all ranges does not fit (%s): %s. It is the detector's.", probability(float64(g.PCommon)), strings.Join(whose, ", "))
}

// oddOnes are the ranges whose gain differs from the weighted median of all by
// more than three times its random uncertainty and by a fifth of what the farthest
// one does, or the farthest one.
func oddOnes(e *calib.Evaluation, gains []calib.KeyGain) []int {
	middle := weightedMedian(gains)
	most := 0.0
	for _, g := range gains {
		if g.Known && g.URandom < math.Abs(g.Value-middle) {
			most = math.Max(most, math.Abs(g.Value-middle))
		}
	}
	var odd []int
	far, farthest := -1, 0.0
	for i, g := range gains {
		if !g.Known {
			continue
		}
		t := math.Abs(g.Value-middle) / g.URandom
		if t > farthest {
			far, farthest = i, t
		}
		if t > 3 && math.Abs(g.Value-middle) > most/5 {
			odd = append(odd, i)
		}
	}
	if len(odd) == 0 && far >= 0 {
		odd = []int{far}
	}
	return odd
}

// convention names the slip of amplitude convention that a gain is near to.
func convention(g float64) string {
	for _, c := range []struct {
		ratio float64
		name  string
	}{
		{1e6, "near 10^6: the readings are in µV, and were taken for volts"},
		{1e3, "near 10^3: the readings' unit is a thousand times too large"},
		{1e-3, "near 10^-3: the readings' unit is a thousand times too small"},
		{-1, "near -1: two leads swapped, or the reference at 180°"},
		{2 * math.Sqrt2, "near 2√2: peak-to-peak taken for rms"},
		{1 / (2 * math.Sqrt2), "near 1/(2√2): rms taken for peak-to-peak"},
		{math.Sqrt2, "near √2: peak taken for rms"},
		{1 / math.Sqrt2, "near 1/√2: rms taken for peak"},
		{2, "near 2: peak-to-peak taken for peak, or open circuit for matched load"},
		{0.5, "near ½: peak taken for peak-to-peak, or matched load for open circuit"},
	} {
		if math.Abs(g/c.ratio-1) < 0.05 {
			return c.name
		}
	}
	return ""
}

func scatter(e *calib.Evaluation) []calib.Finding {
	r := e.Result.Repeatability
	if !(float64(r.P) < level) {
		return nil
	}
	return one(Scatter, "wait longer between readings, look for interference, earth loops and loose contacts. "+EarthCaution,
		"repeated readings scatter %.1f times as much as the plan's noise, stability and resolution predict (%s): interference, an earth loop, or a filter that has not settled.",
		float64(r.Ratio), probability(float64(r.P)))
}

// EarthCaution goes with every suspicion of an earth loop.
const EarthCaution = "Never lift a protective earth to break an earth loop: use a floating or differential input, an isolating transformer made for it, or battery equipment, by your local codes and licensed practice."
