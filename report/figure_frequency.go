package report

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
)

// frequencyFigure shows gain and phase against frequency; nothing for plans of one frequency.
func frequencyFigure(e *calib.Evaluation) *figureSheet {
	if e.Result.ByFreq == nil {
		return nil
	}
	var gains, phases []figureResponse
	for _, g := range e.Result.ByFreq.Gain {
		if g.Known && g.Frequency > 0 {
			gains = append(gains, figureResponse{g.Frequency, g.Value - 1, g.Expanded(), g.K * g.URandom})
		}
	}
	for _, p := range e.Result.Fit.Phase {
		if p.Estimate.Known && p.Frequency > 0 {
			phases = append(phases, figureResponse{p.Frequency, p.Estimate.Value, p.Estimate.Expanded(), p.Estimate.K * p.Estimate.URandom})
		}
	}
	if len(gains) < 2 {
		return nil
	}
	s := &figureSheet{name: "frequency.png", title: "Gain and phase against frequency", height: 5.6 * 72}
	scale, unit := figureUnit(figureLargest(gains), "1")
	gain := figureResponsePanel(gains, scale, "Gain less 1 ("+unit+")", figureColors[0], draw.CircleGlyph{})
	s.panels = []*figurePanel{gain}
	if len(phases) >= 2 {
		scale, unit := math.Pi/180, "°"
		if figureLargest(phases) < 0.01 {
			scale, unit = 1e-3, "mrad"
		}
		s.panels = append(s.panels, figureResponsePanel(phases, scale, "Phase ("+unit+")", figureColors[1], figureSquare))
	} else {
		s.title, s.height = "Gain against frequency", 4*72
	}
	if last := len(s.panels) - 1; last > 0 {
		s.panels[0].X.Tick.Marker = figureUnlabelled{s.panels[0].X.Tick.Marker}
	}
	s.panels[len(s.panels)-1].x = "Frequency"
	low, high := math.Inf(1), math.Inf(-1)
	for _, p := range s.panels {
		low, high = math.Min(low, p.X.Min), math.Max(high, p.X.Max)
	}
	for _, p := range s.panels {
		p.X.Min, p.X.Max = low, high
	}
	s.keys = []figureKey{
		{words: "expanded uncertainty", line: figureLine(figureSoft, figureBarred)},
		{words: "its part from the readings", line: figureLine(figureSoft, 3.2)},
	}
	s.caption = "The deviation of the gain from 1 at each frequency"
	if len(phases) >= 2 {
		s.caption += " and the phase of the detector's reference"
	}
	s.caption += ". The thin bar is the expanded uncertainty, the thick one its part from the readings: gains differ where the thick bars do, for what the standards bring is common to all."
	return s
}

// figureResponse is a gain's deviation or a phase at one frequency.
type figureResponse struct{ frequency, value, U, random float64 }

func figureLargest(points []figureResponse) float64 {
	largest := 0.0
	for _, p := range points {
		largest = math.Max(largest, math.Abs(p.value)+p.U)
	}
	return largest
}

// figureResponsePanel draws one quantity against frequency.
func figureResponsePanel(points []figureResponse, scale float64, label string, c color.NRGBA, shape draw.GlyphDrawer) *figurePanel {
	panel := newFigurePanel(1, "", label)
	x, y := newFigureSpan(), newFigureSpan()
	for _, p := range points {
		x.add(p.frequency)
		y.add((p.value-p.U)/scale, (p.value+p.U)/scale)
	}
	if width := y.high - y.low; y.low > 0 && y.low < width || y.high < 0 && -y.high < width {
		y.add(0)
	}
	panel.X.Min, panel.X.Max = x.decades()
	panel.X.Scale, panel.X.Tick.Marker = plot.LogScale{}, figureLogTicks{"Hz", 7}
	panel.Y.Min, panel.Y.Max = y.padded(0.1)
	panel.layers(func(a *figureArea) {
		a.across(figureZero, 0)
		mark := figureCrowded(draw.GlyphStyle{Color: c, Shape: shape, Radius: 3.4}, len(points))
		for _, p := range points {
			if len(points) <= figureCrowd {
				a.bar(figureLine(c, figureBarred), p.frequency, (p.value-p.U)/scale, (p.value+p.U)/scale)
				a.line(figureLine(c, 3.2), figureXY{p.frequency, (p.value - p.random) / scale}, figureXY{p.frequency, (p.value + p.random) / scale})
			}
			a.mark(mark, p.frequency, p.value/scale)
		}
	})
	return panel
}
