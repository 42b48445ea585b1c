package report

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// Quantiles of χ² with two degrees of freedom, −2·ln(1 − p).
var (
	figureChi68 = -2 * math.Log(1-0.68)
	figureChi95 = -2 * math.Log(1-0.95)
)

var (
	figureRegion68 = figureAlpha(figureBlue, 120)
	figureRegion95 = figureAlpha(figureBlue, 55)
	figurePass     = figureAlpha(figureGreen, 55)
)

// jointFigure shows offset and series resistance together.
func jointFigure(e *calib.Evaluation) *figureSheet {
	f := &e.Result.Fit
	s := &figureSheet{name: "joint.png", title: "Offset and series resistance together", height: 4.6 * 72}
	switch {
	case f.Separable && f.Offset.Known && f.SeriesResistance.Known && f.Offset.U > 0 && f.SeriesResistance.U > 0:
		s.region(f)
	case !f.Separable && f.Intercept != nil && f.AsSeries != nil && f.Intercept.Known && f.AsSeries.Known &&
		figureTells(*f.AsSeries) && figureTells(*f.Intercept):
		s.valley(e)
	default:
		return nil
	}
	return s
}

// figureTells is false for an estimate so near to zero that a line through it has no direction.
func figureTells(x calib.Estimate) bool {
	return figureFinite(x.Value, x.U) && x.U > 0 && math.Abs(x.Value) > 0.01*x.U
}

// jointPanel makes the panel for a span of each, zero shown where it is near.
func jointPanel(o, r figureSpan, unit string) (p *figurePanel, scaleO, scaleR float64) {
	for _, s := range []*figureSpan{&o, &r} {
		if width := s.high - s.low; s.low > 0 && s.low < 0.5*width || s.high < 0 && -s.high < 0.5*width {
			s.add(0)
		}
		s.low, s.high = s.padded(0.12)
	}
	scaleO, unitO := figureUnit(math.Max(o.high, -o.low), unit)
	scaleR, unitR := figureUnit(math.Max(r.high, -r.low), "ohm")
	if unit == "1" {
		unitO += " of range"
	}
	p = newFigurePanel(1, "Offset ("+unitO+")", "Series resistance ("+unitR+")")
	p.X.Min, p.X.Max = o.low/scaleO, o.high/scaleO
	p.Y.Min, p.Y.Max = r.low/scaleR, r.high/scaleR
	return p, scaleO, scaleR
}

// region draws the two of a separable fit: an ellipse of the covariance.
func (s *figureSheet) region(f *calib.FitResult) {
	rho := float64(f.Correlation["offset,series_resistance"])
	if !figureFinite(rho) {
		rho = 0
	}
	o, r := newFigureSpan(), newFigureSpan()
	reach := math.Sqrt(figureChi95)
	o.add(f.Offset.Value-reach*f.Offset.U, f.Offset.Value+reach*f.Offset.U)
	r.add(f.SeriesResistance.Value-reach*f.SeriesResistance.U, f.SeriesResistance.Value+reach*f.SeriesResistance.U)
	panel, scaleO, scaleR := jointPanel(o, r, f.Offset.Unit)
	// With independent a and b of unit variance, o = u_o·a and
	// r = u_r·(ρ·a + √(1−ρ²)·b) have the covariance.
	ellipse := func(chi2 float64) []figureXY {
		const n = 180
		out := make([]figureXY, n)
		for i := range out {
			a := math.Sqrt(chi2) * math.Cos(2*math.Pi*float64(i)/n)
			b := math.Sqrt(chi2) * math.Sin(2*math.Pi*float64(i)/n)
			out[i] = figureXY{(f.Offset.Value + f.Offset.U*a) / scaleO,
				(f.SeriesResistance.Value + f.SeriesResistance.U*(rho*a+math.Sqrt(math.Max(0, 1-rho*rho))*b)) / scaleR}
		}
		return out
	}
	point := draw.GlyphStyle{Color: figureBlack, Shape: draw.CircleGlyph{}, Radius: 3.4}
	panel.layers(func(a *figureArea) {
		for _, zone := range []struct {
			chi2  float64
			color draw.LineStyle
		}{{figureChi95, figureLine(figureRegion95, 0)}, {figureChi68, figureLine(figureRegion68, 0)}} {
			outline := ellipse(zone.chi2)
			a.fill(zone.color.Color, outline...)
			a.line(figureLine(figureBlue, 1), append(outline, outline[0])...)
		}
		a.across(figureZero, 0)
		a.up(figureZero, 0)
		a.mark(point, f.Offset.Value/scaleO, f.SeriesResistance.Value/scaleR)
	})
	s.panels = []*figurePanel{panel}
	s.keys = []figureKey{{words: "fit", mark: point}, {words: "68 % region", shade: figureRegion68}, {words: "95 % region", shade: figureRegion95}}
	s.caption = fmt.Sprintf("Where offset and series resistance lie together, with probabilities of 68 %% and 95 %%; a slanting ellipse means that the readings part the two less well (correlation %s).", figureNumber(rho, 2))
	var away []string
	if panel.X.Min > 0 || panel.X.Max < 0 {
		away = append(away, "no offset")
	}
	if panel.Y.Min > 0 || panel.Y.Max < 0 {
		away = append(away, "no series resistance")
	}
	switch len(away) {
	case 1:
		s.caption += " A detector or bench with " + away[0] + " would lie outside the picture."
	case 2:
		s.caption += " Zero, of either, lies outside the picture."
	}
}

// valley draws the pairs that explain the readings equally well where the two
// cannot be told apart: o/intercept + r/as series = 1.
func (s *figureSheet) valley(e *calib.Evaluation) {
	f := &e.Result.Fit
	o0, r0 := f.Intercept.Value, f.AsSeries.Value
	half := f.Intercept.Expanded()
	o, r := newFigureSpan(), newFigureSpan()
	o.add(0, o0-half, o0+half)
	r.add(0, r0-f.AsSeries.Expanded(), r0+f.AsSeries.Expanded())
	panel, scaleO, scaleR := jointPanel(o, r, f.Intercept.Unit)
	at := func(r, aside float64) figureXY { return figureXY{(o0*(1-r/r0) + aside) / scaleO, r / scaleR} }
	low, high := panel.Y.Min*scaleR, panel.Y.Max*scaleR
	one := draw.GlyphStyle{Color: figureBlack, Shape: draw.CircleGlyph{}, Radius: 4}
	other := draw.GlyphStyle{Color: figureBlack, Shape: figureDiamond, Radius: 4}
	from, to, passes := math.NaN(), math.NaN(), false
	if c := e.Result.Condition; c != nil {
		from, to = math.Max(float64(c.From), low), math.Min(float64(c.To), high)
		passes = from < to
	}
	panel.layers(func(a *figureArea) {
		if passes {
			left, right := panel.X.Min, panel.X.Max
			a.fill(figurePass, figureXY{left, from / scaleR}, figureXY{right, from / scaleR}, figureXY{right, to / scaleR}, figureXY{left, to / scaleR})
		}
		a.fill(figureAlpha(figureSoft, 90), at(low, -half), at(low, half), at(high, half), at(high, -half))
		a.line(figureFit, at(low, 0), at(high, 0))
		a.across(figureZero, 0)
		a.up(figureZero, 0)
		a.mark(one, o0/scaleO, 0)
		a.mark(other, 0, r0/scaleR)
	})
	s.panels = []*figurePanel{panel}
	s.keys = []figureKey{
		{words: "all an offset: " + figureNumberOf(*f.Intercept), mark: one},
		{words: "all a series resistance: " + figureNumberOf(*f.AsSeries), mark: other},
		{words: "equally good, with its uncertainty", line: figureFit, shade: figureAlpha(figureSoft, 90)},
	}
	s.caption = "The readings cannot tell an offset from a series resistance: every pair on the line explains them equally well."
	switch c := e.Result.Condition; {
	case passes:
		s.keys = append(s.keys, figureKey{words: "all steps pass", shade: figurePass})
		s.caption += " In the green band all steps pass."
	case c != nil:
		s.caption += fmt.Sprintf(" All steps would pass with a series resistance from %s to %s, outside the picture.",
			quantity.Format(float64(c.From), 3, "Ω"), quantity.Format(float64(c.To), 3, "Ω"))
	default:
		s.caption += " With no series resistance do all steps pass."
	}
}
