package report

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// figureArea is the data area of a panel while it is drawn on. Coordinates are
// those of the axes; nothing is drawn outside.
type figureArea struct {
	draw.Canvas
	plot *plot.Plot
}

// figureLayer draws on a panel; layers lie on one another in the order they are added.
type figureLayer func(a *figureArea)

// Plot makes a layer a plotter.
func (l figureLayer) Plot(c draw.Canvas, p *plot.Plot) { l(&figureArea{c, p}) }

// figureXY is a place on the axes.
type figureXY struct{ x, y float64 }

func (a *figureArea) at(x, y float64) vg.Point {
	return vg.Point{X: a.Canvas.X(a.plot.X.Norm(x)), Y: a.Canvas.Y(a.plot.Y.Norm(y))}
}

func (a *figureArea) points(line []figureXY) []vg.Point {
	out := make([]vg.Point, len(line))
	for i, p := range line {
		out[i] = a.at(p.x, p.y)
	}
	return out
}

func (a *figureArea) line(s draw.LineStyle, line ...figureXY) {
	a.StrokeLines(s, a.ClipLinesXY(a.points(line))...)
}

func (a *figureArea) fill(c color.Color, polygon ...figureXY) {
	a.FillPolygon(c, a.ClipPolygonXY(a.points(polygon)))
}

// across and up are lines from edge to edge.
func (a *figureArea) across(s draw.LineStyle, y float64) {
	a.line(s, figureXY{a.plot.X.Min, y}, figureXY{a.plot.X.Max, y})
}

func (a *figureArea) up(s draw.LineStyle, x float64) {
	a.line(s, figureXY{x, a.plot.Y.Min}, figureXY{x, a.plot.Y.Max})
}

// bar is an error bar with its ends, an end only where it is in the picture.
func (a *figureArea) bar(s draw.LineStyle, x, low, high float64) {
	const half = 2.2
	a.line(s, figureXY{x, low}, figureXY{x, high})
	for _, y := range []float64{low, high} {
		if p := a.at(x, y); a.Contains(p) {
			a.StrokeLine2(s, p.X-half, p.Y, p.X+half, p.Y)
		}
	}
}

// whisker is an error bar that lies.
func (a *figureArea) whisker(s draw.LineStyle, y, low, high float64) {
	const half = 2.2
	a.line(s, figureXY{low, y}, figureXY{high, y})
	for _, x := range []float64{low, high} {
		p := a.at(x, y)
		a.StrokeLine2(s, p.X, p.Y-half, p.X, p.Y+half)
	}
}

// mark is a mark with a thin white edge, which parts it from the marks beneath.
func (a *figureArea) mark(s draw.GlyphStyle, x, y float64) {
	p := a.at(x, y)
	if _, _, _, alpha := s.Color.RGBA(); alpha == 0xffff {
		edge := s
		edge.Color, edge.Radius = color.White, s.Radius+0.6
		a.DrawGlyph(edge, p)
	}
	a.DrawGlyph(s, p)
}

// figureBack is the grid of a panel, its lowest layer.
func figureBack(a *figureArea) {
	s := figureLine(figureGrid, 0.7)
	for _, t := range a.plot.X.Tick.Marker.Ticks(a.plot.X.Min, a.plot.X.Max) {
		if !t.IsMinor() && a.plot.X.Tick.Length > 0 && t.Value >= a.plot.X.Min && t.Value <= a.plot.X.Max {
			a.up(s, t.Value)
		}
	}
	for _, t := range a.plot.Y.Tick.Marker.Ticks(a.plot.Y.Min, a.plot.Y.Max) {
		if !t.IsMinor() && a.plot.Y.Tick.Length > 0 && t.Value >= a.plot.Y.Min && t.Value <= a.plot.Y.Max {
			a.across(s, t.Value)
		}
	}
}

// figureFront is the frame of a panel, its highest layer.
func figureFront(a *figureArea) {
	a.StrokeLines(figureLine(figureInk, 0.8), []vg.Point{a.Min, {X: a.Max.X, Y: a.Min.Y}, a.Max, {X: a.Min.X, Y: a.Max.Y}, a.Min, {X: a.Max.X, Y: a.Min.Y}})
}

// layers adds layers between grid and frame.
func (p *figurePanel) layers(layers ...figureLayer) {
	p.Add(figureLayer(figureBack))
	for _, l := range layers {
		p.Add(l)
	}
	p.Add(figureLayer(figureFront))
}
