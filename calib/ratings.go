package calib

import (
	"fmt"
	"math"
	"math/cmplx"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// touchLimit is the rms voltage above which a conductor must not be touched:
// extra-low-voltage practice (common practice: 50 V AC in dry rooms, 25 V or 30 V
// where stricter rules hold; the lower figure is used here).
const touchLimit = 30

// Cautions are the ratings that a plan's steps exceed, and voltages that can hurt.
func Cautions(p *plan.Plan) []Finding {
	f := newForward(p)
	var out []Finding
	out = append(out, f.powers()...)
	out = append(out, f.inputVoltage()...)
	highest := 0.0
	for _, a := range p.Generator.Amplitudes {
		highest = math.Max(highest, a.EMF.X)
	}
	if highest > touchLimit {
		out = append(out, Finding{Kind: "touch voltage",
			Text: fmt.Sprintf("the generator gives up to %s rms; above %d V rms (or 60 V DC) a bare conductor must not be touched.",
				quantity.Format(highest, 3, "V"), touchLimit),
			Do: "cover every bare part, switch off before changing anything, and keep to your local codes and to licensed practice."})
	}
	return out
}

// powers finds, for each arm, the largest power of all steps and whether the arm is rated for it.
func (f *forward) powers() []Finding {
	worst, at := make([]float64, len(f.plan.Arms)), make([]int, len(f.plan.Arms))
	seen := make([]bool, len(f.drops))
	for i, k := range f.of {
		if seen[k] {
			continue
		}
		seen[k] = true
		d := &f.drops[k]
		emf, _, _ := f.emf[d.amplitude].value(f.stated())
		s := &f.states[d.state]
		response := s.stated.Solve(s.frequency, &f.ws)
		for arm, watts := range response.Power(emf).Arms {
			if watts > worst[arm] {
				worst[arm], at[arm] = watts, i
			}
		}
	}
	var out []Finding
	for arm, watts := range worst {
		if a := &f.plan.Arms[arm]; a.MaxPower > 0 && watts > a.MaxPower {
			out = append(out, Finding{Kind: "rating exceeded",
				Text: fmt.Sprintf("%s takes %s at step %s and is rated for %s: it gets hot, drifts, and may burn.",
					a.Name, quantity.Format(watts, 2, "W"), f.plan.Steps[at[arm]].ID, quantity.Format(a.MaxPower, 2, "W")),
				Do: "lower the amplitude, or use a resistor that is rated for it."})
		}
	}
	return out
}

func (f *forward) inputVoltage() []Finding {
	limit, worst, at := f.plan.Detector.InputMax, 0.0, 0
	for i := range f.of {
		if v := f.drops[f.of[i]].stated; v > worst {
			worst, at = v, i
		}
	}
	if limit == 0 || worst <= limit {
		return nil
	}
	return []Finding{{Kind: "rating exceeded",
		Text: fmt.Sprintf("the detector's input gets %s rms at step %s and bears %s.",
			quantity.Format(worst, 3, "V"), f.plan.Steps[at].ID, quantity.Format(limit, 3, "V")),
		Do: "lower the amplitude, or tap the ladder further down."}}
}

// ranges warns of steps that overload their range or use too little of it.
func (x *Expectation) ranges(p *plan.Plan) []Finding {
	var over, under []string
	for _, s := range x.Steps {
		switch {
		case s.Share > 1+p.Detector.Overrange:
			over = append(over, s.ID)
		case s.Share < 0.1 && s.Expected != 0 && smallerHolds(p, s):
			under = append(under, s.ID)
		}
	}
	var out []Finding
	if len(over) > 0 {
		out = append(out, Finding{Kind: "overload expected",
			Text: fmt.Sprintf("%s beyond full scale: step%s %s.", Counted(len(over), "reading"), plural(len(over)), List(over)),
			Do:   "choose a larger range or a lower amplitude."})
	}
	if len(under) > 0 {
		out = append(out, Finding{Kind: "range under-used",
			Text: fmt.Sprintf("%s under a tenth of full scale while a smaller range would hold it: step%s %s.",
				Counted(len(under), "reading"), plural(len(under)), List(under)),
			Do: `choose a smaller range, or range = "auto".`})
	}
	return out
}

func smallerHolds(p *plan.Plan, s ExpectedStep) bool {
	for _, full := range p.Detector.Ranges {
		if full < s.Range && full >= 1.05*math.Abs(s.Expected) {
			return true
		}
	}
	return false
}

// loading warns where the detector's input pulls the drop down by more than a
// tenth of the limit: the correction for it is then part of the verdict.
func (x *Expectation) loading(p *plan.Plan) []Finding {
	f := newForward(p)
	worst, at, by := 0.0, "", 0.0
	for i, s := range x.Steps {
		d := &f.drops[f.of[i]]
		st := &f.states[d.state]
		open := st.stated
		open.Input.R, open.Input.C = math.Inf(1), 0
		emf, _, _ := f.emf[d.amplitude].value(f.stated())
		without := emf * cmplx.Abs(open.Transfer(st.frequency, &f.ws))
		if share := math.Abs(without-d.stated) / float64(s.Limit); share > worst {
			worst, at, by = share, s.ID, without-d.stated
		}
	}
	if !(worst > 0.1) {
		return nil
	}
	return []Finding{{Kind: "loading",
		Text: fmt.Sprintf("the detector's input and its cable change the drop by %s at step %s, %.0f %% of the limit; it is corrected for, as well as the plan states them.",
			quantity.Format(by, 2, "V"), at, 100*worst),
		Do: "state the input's resistance and capacitance with their uncertainties, or set the tapped arm lower."}}
}

// Warnings are what a plan does badly: ranges overloaded or under-used, a
// detector that loads the ladder.
func (x *Expectation) Warnings(p *plan.Plan) []Finding {
	return append(x.ranges(p), x.loading(p)...)
}
