package report

import (
	"cmp"
	"slices"
	"strings"

	"gonum.org/v1/plot"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// figureBy is what residuals are drawn against: a quantity, or names in a row.
type figureBy struct {
	label string
	value func(index int) float64 // of a step, by its index in the plan; NaN for none
	names func(index int) string  // nil for a quantity
	named bool                    // outliers have their steps' names, and there are no means
	// What does not turn with the reference, as an offset, shows in residuals with the sign of the reading.
	signed bool

	ticks     plot.Ticker // nil for those of a number
	low, high float64
	groups    []float64 // of names: their middles
}

// figureByOrder is the order of the plan.
func figureByOrder(points []figureResidual) *figureBy {
	place := map[int]int{}
	ticks := plot.ConstantTicks{}
	every := 1 + (len(points)-1)/10
	for i, p := range points {
		place[p.index] = i
		if i%every == 0 {
			ticks = append(ticks, plot.Tick{Value: float64(i), Label: tail(p.id, 7)})
		}
	}
	return &figureBy{label: "Step, in the order of the plan", named: true, ticks: ticks, low: -0.02*float64(len(points)) - 0.5, high: 1.02*float64(len(points)) - 0.5,
		value: func(index int) float64 { return float64(place[index]) }}
}

// figureShowsBy is the quantity by which a cause shows along the readings; nil where
// it has none, and for offset and series resistance, which have a figure of their own.
func figureShowsBy(e *calib.Evaluation, ev *calib.Evidence) *figureBy {
	p := e.Plan
	sights := map[int]calib.Sight{}
	for _, s := range e.Sights() {
		sights[s.Step] = s
	}
	of := func(label string, value func(s calib.Sight) float64) *figureBy {
		return &figureBy{label: label, value: func(index int) float64 { return value(sights[index]) }}
	}
	inRow := func(label string, rank func(s calib.Sight) float64, name func(s calib.Sight) string) *figureBy {
		by := of(label, rank)
		by.names = func(index int) string { return name(sights[index]) }
		return by
	}
	byPhase := func() *figureBy {
		return inRow("Phase of the reference", func(s calib.Sight) float64 { return s.Phase }, func(s calib.Sight) string { return degrees(s.Phase) })
	}
	twoPhase := p.Detector.Reads == plan.TwoPhase // there these show across the reading
	switch ev.Cause {
	case diagnose.Compression:
		return of("Share of full scale (%)", func(s calib.Sight) float64 { return 100 * s.Drop / s.Full })
	case diagnose.Drift:
		by := of("Time since the first reading (min)", func(s calib.Sight) float64 { return s.Time / 60 })
		by.signed = strings.HasPrefix(ev.Variant, "of the offset")
		return by
	case diagnose.RangeGain, diagnose.OffsetOfRange:
		by := inRow("Range", func(s calib.Sight) float64 { return s.Full }, func(s calib.Sight) string { return displayed(s.Full / p.Detector.ToRMS) })
		by.signed = ev.Cause == diagnose.OffsetOfRange
		return by
	case diagnose.ResistivePick:
		return inRow("Generator's amplitude", func(s calib.Sight) float64 { return s.EMF }, func(s calib.Sight) string { return amplitude(p, &p.Steps[s.Step]) })
	case diagnose.Asymmetry, diagnose.ReferenceOff:
		return byPhase()
	case diagnose.Coupling, diagnose.CapacitivePck:
		if twoPhase {
			return nil
		}
		return byPhase()
	case diagnose.Loading, diagnose.TopCapacity:
		if twoPhase && ev.Unit == "F" {
			return nil
		}
		if len(p.Frequencies) > 1 {
			return inRow("Frequency", func(s calib.Sight) float64 { return s.Frequency }, func(s calib.Sight) string { return quantity.Plain(s.Frequency, "Hz") })
		}
	case diagnose.OneSetting, diagnose.Swapped:
	default:
		return nil
	}
	arm := figureArmOf(p, ev.Variant)
	return inRow("Setting of "+p.Arms[arm].Name, func(s calib.Sight) float64 { return p.Arms[arm].Settings[s.Set[arm]].X },
		func(s calib.Sight) string { return p.Arms[arm].Nominal[s.Set[arm]] })
}

// figureArmOf is the arm that a cause's variant names, or else the one with most settings.
func figureArmOf(p *plan.Plan, variant string) int {
	most := 0
	for i := range p.Arms {
		if len(p.Arms[i].Settings) > 1 && strings.HasPrefix(variant, p.Arms[i].Name+" at ") {
			return i
		}
		if len(p.Arms[i].Settings) > len(p.Arms[most].Settings) {
			most = i
		}
	}
	return most
}

// places are the points' places along the axis. Names stand in a row in the order
// of their values, the points of one name beside one another.
func (by *figureBy) places(points []figureResidual) []float64 {
	at := make([]float64, len(points))
	if by.names == nil {
		for i, p := range points {
			at[i] = by.value(p.index)
		}
		return at
	}
	order := make([]int, len(points))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(by.value(points[i].index), by.value(points[j].index)) })
	ticks := plot.ConstantTicks{}
	for i := 0; i < len(order); {
		k := i
		for k < len(order) && by.value(points[order[k]].index) == by.value(points[order[i]].index) {
			k++
		}
		middle := float64(len(by.groups))
		for j := i; j < k; j++ {
			at[order[j]] = middle + 0.7*((float64(j-i)+0.5)/float64(k-i)-0.5)
		}
		ticks = append(ticks, plot.Tick{Value: middle, Label: by.names(points[order[i]].index)})
		by.groups = append(by.groups, middle)
		i = k
	}
	every := 1 + (len(ticks)-1)/10
	for i := range ticks {
		if i%every != 0 {
			ticks[i].Label = ""
		}
	}
	by.ticks, by.low, by.high = ticks, -0.5, float64(len(ticks))-0.5
	return at
}

// means are lines at the means of the residuals: of each name, or of each eighth
// of a quantity's axis.
func (by *figureBy) means(points []figureResidual, at []float64) [][2]figureXY {
	if by.named {
		return nil
	}
	groups, half := by.groups, 0.4
	if by.names == nil {
		const parts = 8
		low, high := slices.Min(at), slices.Max(at)
		half = (high - low) / (2 * parts)
		for i := range parts {
			groups = append(groups, low+(2*float64(i)+1)*half)
		}
	}
	var out [][2]figureXY
	for g, middle := range groups {
		sum, n := 0.0, 0
		for i, p := range points {
			if inside := at[i] - middle; inside >= -half && (inside < half || g == len(groups)-1 && inside <= half*(1+1e-9)) {
				sum, n = sum+p.z, n+1
			}
		}
		if n > 0 {
			out = append(out, [2]figureXY{{middle - half, sum / float64(n)}, {middle + half, sum / float64(n)}})
		}
	}
	return out
}
