package report

import (
	"fmt"
	"math"

	"rungproof/calib"
	"rungproof/calib/uncertainty"
)

// monteCarloTable sets each result by Monte Carlo beside the linear one.
func monteCarloTable(e *calib.Evaluation) grid {
	mc := e.Result.MonteCarlo
	if mc == nil {
		return grid{}
	}
	all := mc.Outputs
	between := func(head string, of func(*calib.MonteCarloOutput) uncertainty.Interval) column {
		return texts(fmt.Sprintf("%.4g %%, %s", 100*e.Result.Coverage, head), "number", func(i int) string {
			return typeset(monteCarloInterval(&all[i], of(&all[i])))
		})
	}
	g := grid{Wide: true, Rows: len(all), Columns: []column{
		texts("result", "words", func(i int) string { return monteCarloName(&all[i]) }),
		texts("linear ± U", "number", func(i int) string {
			if isGain(&all[i]) {
				return typeset(gainDeviation(all[i].Linear))
			}
			return typeset(sizeOf(all[i].Linear))
		}),
		texts("Monte Carlo, mean (u)", "number value", func(i int) string { return typeset(monteCarloValue(&all[i])) }),
		between("symmetric in probability", func(o *calib.MonteCarloOutput) uncertainty.Interval { return o.Symmetric }),
		between("shortest", func(o *calib.MonteCarloOutput) uncertainty.Interval { return o.Shortest }),
		texts("digits validated", "number", func(i int) string {
			if all[i].Validated == 0 {
				return "none"
			}
			return fmt.Sprint(all[i].Validated)
		}),
	}}
	if !e.Result.Separable() {
		g.Notes = append(g.Notes, "Offset and series resistance cannot be told apart: the offset is what it would be if there were no unknown series resistance.")
	}
	if note := togetherSays(e); note != "" {
		g.Notes = append(g.Notes, typeset(note))
	}
	return g
}

// togetherSays is what the trials say of offset and series resistance together.
func togetherSays(e *calib.Evaluation) string {
	mc := e.Result.MonteCarlo
	rho, inside := float64(mc.Correlation), float64(mc.InRegion)
	if math.IsNaN(rho) || math.IsNaN(inside) {
		return ""
	}
	text := "Correlation of offset and series resistance by the trials: " + hundredths(rho)
	// That of the fit asked for is another fit's where each range has its own gain instead.
	if linear, ok := e.Result.Fit.Correlation["offset,series_resistance"]; ok && (!e.Result.ByRange.Used || e.Plan.Fit.Gain == "per range") {
		text += " (linear: " + hundredths(float64(linear)) + ")"
	}
	return text + fmt.Sprintf(". %.2f %% of the trials lie in the linear joint region of 95 %%.", 100*inside)
}

// monteCarloName is the name of an output, a gain as its deviation from 1.
func monteCarloName(o *calib.MonteCarloOutput) string {
	if isGain(o) {
		return o.Name + ", from 1"
	}
	return o.Name
}
