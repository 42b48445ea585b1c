package report

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// figureDeciding is the line that the fit draws through what is left
// unexplained: V = (offset + r·I·gain)/gain. Where the two cannot be told apart
// it is two lines, all of it the one or all of it the other.
type figureDeciding struct {
	separable      bool
	offset, series calib.Estimate // of the fit that the errors come from; not separable: all of it as one
	correlation    float64        // of offset and series resistance
	gain           func(*calib.StepResult) float64
	perRange       bool    // the offset is a share of range
	factor         float64 // of coverage
}

// figureDecidingLine takes it from the fit that the errors come from.
func figureDecidingLine(e *calib.Evaluation) figureDeciding {
	r := e.Result
	f := figureDeciding{separable: r.Separable(), offset: r.Fit.Offset, series: r.Fit.SeriesResistance,
		correlation: float64(r.Fit.Correlation["offset,series_resistance"]), perRange: e.Plan.Fit.OffsetPerRange, factor: r.CoverageFactor}
	f.gain = func(*calib.StepResult) float64 { return r.Fit.Gain.Value }
	if !r.Fit.Gain.Known {
		f.gain = func(*calib.StepResult) float64 { return 1 }
	}
	for _, g := range []*calib.Gains{r.ByRange, r.ByFreq} {
		if g == nil || !g.Used {
			continue
		}
		if g.Offset.Known && g.SeriesResistance.Known {
			f.offset, f.series = g.Offset, g.SeriesResistance
		}
		f.gain = func(s *calib.StepResult) float64 {
			for _, k := range g.Gain {
				if k.Known && (k.Range == s.Range || k.Frequency != 0 && k.Frequency == e.Plan.Steps[s.Index].Frequency) {
					return k.Value
				}
			}
			return 1
		}
	}
	if !f.separable && r.Fit.Intercept != nil && r.Fit.AsSeries != nil {
		f.offset, f.series = *r.Fit.Intercept, *r.Fit.AsSeries
		f.series.Known = f.series.Known && figureFinite(f.series.Value, f.series.U) && f.series.U > 0
	}
	if math.IsNaN(f.correlation) {
		f.correlation = 0
	}
	return f
}

// along is what one unit of offset is worth in a step's unexplained voltage, and
// whether the step is to be mirrored. In two-phase readings the offset, fixed to
// the detector's axes, counts with the angle between it and the signal.
func (f figureDeciding) along(e *calib.Evaluation, s *calib.StepResult) (share float64, mirror bool) {
	share = 1
	if g := math.Abs(f.gain(s)); g > 0 {
		share = 1 / g
	}
	if f.perRange {
		share *= s.Range
	}
	if e.Plan.Detector.Reads != plan.TwoPhase || !f.offset.Known {
		return share, false
	}
	step := &e.Plan.Steps[s.Index]
	angle := s.PhaseDeg*math.Pi/180 - step.Phase
	for _, p := range e.Result.Fit.Phase {
		if p.Frequency == step.Frequency && p.Estimate.Known {
			angle += p.Estimate.Value
		}
	}
	turned := math.Cos(angle)
	if y := e.Result.Fit.OffsetQuadrature; y != nil && y.Known && f.offset.Value != 0 {
		turned = real(complex(1, y.Value/f.offset.Value) * cmplx.Rect(1, -angle))
	}
	return share * turned, math.Cos(angle) < 0
}

// slope is the voltage of the series resistance at a current; 0 where the line is
// level because the offset takes it all.
func (f figureDeciding) slope(current float64) float64 {
	if !f.separable || !f.series.Known {
		return 0
	}
	return f.series.Value * current
}

// figureStraight is a straight line through the panel.
type figureStraight struct {
	intercept, slope float64
	style            draw.LineStyle
}

func (l figureStraight) at(x float64) float64 { return l.intercept + l.slope*x }

// lines are the fitted lines, one for each intercept as long as there are few.
func (f figureDeciding) lines(intercepts []float64) []figureStraight {
	const most = 8
	var out []figureStraight
	if f.offset.Known && len(intercepts) <= most {
		for _, o := range intercepts {
			out = append(out, figureStraight{o, f.slope(1), figureFit})
		}
	}
	if !f.separable && f.series.Known {
		out = append(out, figureStraight{0, f.series.Value, figureOther})
	}
	return out
}

// band is the outline of the line's 95 % band (or whatever the plan's coverage
// is), from the covariance of offset and series resistance:
//
//	u²(V) = u²(o) + I²·u²(r) + 2·I·ρ·u(o)·u(r)
//
// with u(o) taken over the gain, as the intercept is.
func (f figureDeciding) band(intercept, left, right float64, at func(x, y float64) figureXY) []figureXY {
	if !f.offset.Known || f.perRange {
		return nil
	}
	share := 1.0
	if f.offset.Value != 0 {
		share = intercept / f.offset.Value
	}
	half := func(x float64) float64 {
		uo, ur := share*f.offset.U, f.series.U*x
		if !f.separable {
			ur = 0
		}
		return f.factor * math.Sqrt(math.Max(0, uo*uo+ur*ur+2*f.correlation*uo*ur))
	}
	const n = 60
	upper, lower := make([]figureXY, 0, 2*n+2), make([]figureXY, 0, n+1)
	for i := range n + 1 {
		x := left + (right-left)*float64(i)/n
		y := intercept + f.slope(x)
		upper, lower = append(upper, at(x, y+half(x))), append(lower, at(x, y-half(x)))
	}
	for i := range lower {
		upper = append(upper, lower[n-i])
	}
	return upper
}

// keys are the key's entries for the lines.
func (f figureDeciding) keys(e *calib.Evaluation) []figureKey {
	if !f.offset.Known {
		return nil
	}
	if !f.separable {
		keys := []figureKey{{words: "all of it an offset: " + figureNumberOf(f.offset), line: figureFit}}
		if f.series.Known {
			keys = append(keys, figureKey{words: "all of it a series resistance: " + figureNumberOf(f.series), line: figureOther})
		}
		return keys
	}
	keys := []figureKey{{words: "offset " + figureNumberOf(f.offset), mark: figureIntercept}}
	if f.perRange {
		keys[0].mark.Shape = nil
	}
	if f.series.Known {
		k := figureKey{words: "slope: series resistance " + figureNumberOf(f.series), line: figureFit, shade: figureShade}
		if f.perRange {
			k.shade = nil
		}
		keys = append(keys, k)
	}
	return keys
}

// caption says how to read the figure.
func (f figureDeciding) caption(points []figureLeft) string {
	c := "Each reading over the gain, less the voltage applied, with its expanded uncertainty, against the current through the arm of the series resistance."
	if len(points) > figureCrowd {
		c = "Each reading over the gain, less the voltage applied, against the current through the arm of the series resistance."
	}
	switch lines := len(figureDifferent(points, f)); {
	case !f.offset.Known:
		return c + " The readings do not determine the line."
	case !f.separable && figureNoCurrent(points):
		return c + " The line is the offset; no current flows that would show a series resistance."
	case !f.separable:
		return c + " The level line takes all of it for an offset, the dashed one for a series resistance; a point at another current would tell which."
	case f.perRange:
		return c + " The offset is a share of range, so that each range has a line of its own; the slope of all is the series resistance."
	case lines > 1:
		return c + " The offset is fixed to the detector's axes, so that its part, the intercept, turns with the phase; the slope is the series resistance."
	}
	return c + " The offset is the height at which the line crosses zero current; the series resistance is its slope."
}
