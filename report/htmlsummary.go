package report

import (
	"fmt"
	"math"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// summary is what the detector and the bench have, each with whose it is.
func summary(e *calib.Evaluation) grid {
	r := e.Result
	f := &r.Fit
	type line struct {
		name, whose string
		estimate    calib.Estimate
		instead     string // of the value
	}
	const detectors, benchs = "the detector's", "the bench's"
	offset := "offset"
	if e.Plan.Fit.OffsetPerRange {
		offset = "offset, of full scale"
	}
	series := "series resistance"
	if e.Plan.Fit.SeriesIn != "" {
		series += ", in " + e.Plan.Fit.SeriesIn
	}
	var lines []line
	add := func(name, whose string, x calib.Estimate) {
		lines = append(lines, line{name: name, whose: whose, estimate: x})
	}
	switch {
	case f.Gain.Known && !r.ByRange.Used:
		deviation := f.Gain
		deviation.Value--
		add("gain, deviation from 1", detectors, deviation)
	case e.Plan.Fit.Gain == "per frequency":
		lines = append(lines, line{name: "gain", whose: detectors, instead: "one for each frequency, below"})
	default:
		lines = append(lines, line{name: "gain", whose: detectors, instead: "one for each range, below"})
	}
	if o, s := r.Deciding(); f.Separable {
		add(offset, detectors, o)
		if f.OffsetQuadrature != nil {
			add(offset+", quadrature", detectors, *f.OffsetQuadrature)
		}
		add(series, benchs, s)
	} else if f.Intercept != nil && f.AsSeries != nil {
		add("either "+offset, detectors, *f.Intercept)
		add("or "+series, benchs, *f.AsSeries)
	}
	if len(f.Phase) == 1 {
		add("phase against the reference", "the reference's setting", f.Phase[0].Estimate)
	}
	g := grid{Rows: len(lines), Columns: []column{
		texts("", "words", func(i int) string { return lines[i].name }),
		texts("value ± U", "number value", func(i int) string {
			if lines[i].instead != "" {
				return lines[i].instead
			}
			return typeset(sizeOf(lines[i].estimate))
		}),
		texts("k", "number", func(i int) string {
			if !lines[i].estimate.Known {
				return ""
			}
			return factor(lines[i].estimate.K)
		}),
		texts("U from the readings alone", "number", func(i int) string { return fromReadings(lines[i].estimate) }),
		texts("whose", "words", func(i int) string { return lines[i].whose }),
		texts("shown to be there", "words", func(i int) string {
			switch x := lines[i].estimate; {
			case !x.Known:
				return ""
			case math.Abs(x.Value) <= x.Expanded():
				return "no, less than U"
			}
			return "yes"
		}),
	}}
	g.Notes = append(g.Notes, fmt.Sprintf("U is the expanded uncertainty, U = k·u, for a coverage of %.4g %%; k is that of each result's own budget.", 100*r.Coverage))
	g.Notes = append(g.Notes, separation(e)...)
	g.Notes = append(g.Notes, fitness(r))
	return g
}

// fromReadings is the expanded uncertainty that the readings bring to an estimate.
func fromReadings(x calib.Estimate) string {
	U := x.K * x.URandom
	switch {
	case !x.Known:
		return ""
	case x.Unit == "1":
		return quantity.Share(U, 2)
	case x.Unit == "rad":
		return quantity.Format(U*180/math.Pi, 2, "1") + "°"
	case x.Unit == "ohm":
		return quantity.Format(U, 2, "Ω")
	}
	return quantity.Format(U, 2, x.Unit)
}

// separation says what is between offset and series resistance.
func separation(e *calib.Evaluation) []string {
	r := e.Result
	var notes []string
	if !r.Fit.Separable {
		say := "Offset and series resistance cannot be told apart by these readings: each line is what it would be if the other were zero. "
		if c := r.Condition; c != nil {
			say += "All steps pass " + passingIf(float64(c.From), float64(c.To)) + "."
		} else {
			say += "No series resistance makes all steps pass."
		}
		notes = append(notes, typeset(say))
	}
	if r.ByRange.Used && e.Plan.Fit.Gain == "common" {
		notes = append(notes, "One gain for all ranges does not fit: all of this, the errors and the verdict come from the fit with a gain for each range, which are listed under Gains.")
	}
	return notes
}

func passingIf(from, to float64) string {
	switch low, high := quantity.Format(from, 3, "Ω"), quantity.Format(to, 3, "Ω"); {
	case math.IsInf(from, 0) && math.IsInf(to, 0):
		return "whatever the series resistance"
	case math.IsInf(from, 0):
		return "if the series resistance is at most " + high
	case math.IsInf(to, 0):
		return "if the series resistance is at least " + low
	default:
		return "if the series resistance is between " + low + " and " + high
	}
}

// fitness says how well the model fits, and how the readings repeat.
func fitness(r *calib.Result) string {
	f := &r.Fit
	say := fmt.Sprintf("Goodness of the fit: χ² = %.4g with %d degrees of freedom", float64(f.ChiSquared), f.DOF)
	if p := float64(f.P); !math.IsNaN(p) {
		say += fmt.Sprintf(" (%s of as much or more by chance)", chance(p))
	}
	if x := float64(r.Repeatability.Ratio); !math.IsNaN(x) {
		say += fmt.Sprintf("; repeated readings scatter %.2f times as much as predicted (%s)", x, chance(float64(r.Repeatability.P)))
	}
	say += "."
	if rho, ok := f.Correlation["offset,series_resistance"]; ok {
		say += " Correlation of offset and series resistance: " + hundredths(float64(rho)) + "."
	}
	return typeset(say)
}

// hundredths is a number with two decimals, zero without a sign.
func hundredths(x float64) string { return fmt.Sprintf("%.2f", math.Round(100*x)/100+0) }

// chance is a probability for people.
func chance(p float64) string {
	if p < 1e-6 {
		return "p under 0.000001"
	}
	return fmt.Sprintf("p = %.2g", p)
}
