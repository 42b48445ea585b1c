package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// figureLeft is what one step leaves unexplained.
type figureLeft struct {
	current   float64 // A rms, signed
	value, U  float64 // V, at the detector's input; U expanded
	intercept float64 // V, the offset's part in it by the fit
	amplitude int
}

// unexplainedFigure shows what an offset and a series resistance are fitted to:
// the one is the line's intercept, the other its slope.
func unexplainedFigure(e *calib.Evaluation) *figureSheet {
	line := figureDecidingLine(e)
	points := figureLeftovers(e, line)
	if len(points) == 0 {
		return nil
	}
	s := &figureSheet{name: "unexplained.png", title: "What is left unexplained, against the current", height: 4.8 * 72, beside: true}
	s.keys = append(figureAmplitudes(e, len(points)), line.keys(e)...)
	all := newFigureView(points, line)
	s.panels = append(s.panels, figureLeftPanel(all, line, "all currents"))
	s.caption = line.caption(points)
	outside := all.outside
	if near := figureNearZero(points); len(near) > 0 && e.Result.Fit.Separable {
		zoom := newFigureView(near, line)
		s.panels = append(s.panels, figureLeftPanel(zoom, line, "small currents"))
		s.panels[1].y = ""
		if _, unit := figureUnit(zoom.largest(), "V"); unit != figureUnitOf(all) {
			s.panels[1].y = "Left unexplained (" + unit + ")"
		}
		s.caption += " The right panel shows the small currents larger."
	} else {
		s.panels[0].title = ""
	}
	switch {
	case line.separable || !line.offset.Known:
	case figureNoCurrent(points):
		s.note = "No current: only an offset shows here."
	case figureOneCurrent(points):
		s.note = "One current: an offset and a series resistance look the same here."
	default:
		s.note = "An offset and a series resistance cannot be told apart by these readings."
	}
	if all.spread {
		s.caption += " Points of one current are moved apart along the line, in the order of the plan."
	}
	if outside > 0 {
		s.caption += fmt.Sprintf(" %s too uncertain for this scale and left out.", figureAre(outside, "point"))
	}
	return s
}

// figureLeftovers are the steps that the fit used. A two-phase reading with the
// reference turned about has its offset turned instead of its current: it is
// mirrored, so that all points have the offset the same way up.
func figureLeftovers(e *calib.Evaluation, line figureDeciding) []figureLeft {
	var points []figureLeft
	for i := range e.Result.Steps {
		r := &e.Result.Steps[i]
		p := figureLeft{current: r.Current, value: float64(r.Unexplained), U: e.Result.CoverageFactor * float64(r.UUnexplained),
			amplitude: e.Plan.Steps[r.Index].Amplitude}
		if !figureFinite(p.current, p.value, p.U) {
			continue
		}
		share, mirror := line.along(e, r)
		p.intercept = line.offset.Value * share
		if mirror {
			p.current, p.value, p.intercept = -p.current, -p.value, -p.intercept
		}
		points = append(points, p)
	}
	return points
}

// figureOneCurrent tells whether all points stand at about one current.
func figureOneCurrent(points []figureLeft) bool {
	x := newFigureSpan()
	for _, p := range points {
		x.add(p.current)
	}
	return x.high-x.low <= 0.05*math.Max(x.high, -x.low)
}

// figureNoCurrent tells whether the source was off at all points.
func figureNoCurrent(points []figureLeft) bool {
	return !slices.ContainsFunc(points, func(p figureLeft) bool { return p.current != 0 })
}

// figureNearZero are the points of currents small against the largest, where
// there are such that still have a current; they tell the intercept best.
func figureNearZero(points []figureLeft) []figureLeft {
	largest, near := 0.0, []figureLeft(nil)
	for _, p := range points {
		largest = math.Max(largest, math.Abs(p.current))
	}
	for _, p := range points {
		if math.Abs(p.current) <= 0.25*largest {
			near = append(near, p)
		}
	}
	if figureNoCurrent(near) {
		return nil
	}
	return near
}

// figureView is what a panel shows: the points that tell something at its scale.
type figureView struct {
	points                 []figureLeft
	outside                int
	spread                 bool // points of one current are moved apart
	left, right, low, high float64
	intercepts             []float64 // of the lines
}

// newFigureView chooses the scale by the line and shows the points whose error
// bars are small against it, and the most certain ones in any case; every one of
// these is in the picture, an outlier too.
func newFigureView(points []figureLeft, line figureDeciding) figureView {
	const largestBar = 0.12 // half of an error bar, over the height of the picture
	var v figureView
	x := newFigureSpan()
	x.add(0)
	least := math.Inf(1)
	for _, p := range points {
		x.add(p.current)
		least = math.Min(least, p.U)
	}
	if v.left, v.right = x.padded(0.08); x.high == x.low {
		v.left, v.right = -1e-6, 1e-6
	}
	bare := newFigureSpan()
	for _, p := range points {
		if p.U <= 2*least {
			bare.add(p.intercept+line.slope(x.low), p.intercept+line.slope(x.high), p.value, 0)
		}
	}
	height := math.Max(bare.high-bare.low, 2*least)
	y := newFigureSpan()
	y.add(0)
	for _, p := range points {
		if p.U > math.Max(largestBar*height, 1.5*least) {
			v.outside++
			continue
		}
		v.points = append(v.points, p)
		y.add(p.value-p.U, p.value+p.U, p.intercept, p.intercept+line.slope(v.left), p.intercept+line.slope(v.right))
	}
	v.low, v.high = y.padded(0.08)
	v.intercepts = figureDifferent(v.points, line)
	v.moveApart(line)
	return v
}

func (v figureView) largest() float64 { return math.Max(math.Abs(v.low), math.Abs(v.high)) }

func figureUnitOf(v figureView) string {
	_, unit := figureUnit(v.largest(), "V")
	return unit
}

// moveApart moves points that stand at one current along the line, so that they can be seen.
func (v *figureView) moveApart(line figureDeciding) {
	if len(v.points) > figureCrowd {
		return
	}
	width := v.right - v.left
	slices.SortStableFunc(v.points, func(p, q figureLeft) int { return cmp.Compare(p.current, q.current) })
	for i := 0; i < len(v.points); {
		k := i
		for k < len(v.points) && v.points[k].current-v.points[i].current <= 0.012*width {
			k++
		}
		n := k - i
		step := math.Min(0.015, 0.06/float64(n)) * width
		for j := range n {
			dx := (float64(j) - float64(n-1)/2) * step
			v.points[i+j].current += dx
			v.points[i+j].value += line.slope(dx)
		}
		v.spread = v.spread || n > 1
		i = k
	}
}

// figureDifferent are the intercepts that differ by more than a tenth of the offset's uncertainty.
func figureDifferent(points []figureLeft, line figureDeciding) []float64 {
	var all []float64
	for _, p := range points {
		all = append(all, p.intercept)
	}
	slices.Sort(all)
	var out []float64
	for _, o := range all {
		if last := len(out) - 1; last < 0 || o-out[last] > 0.1*line.offset.U*math.Abs(o)/math.Max(math.Abs(line.offset.Value), line.offset.U) {
			out = append(out, o)
		}
	}
	return out
}

// figureLeftPanel draws one view.
func figureLeftPanel(v figureView, line figureDeciding, title string) *figurePanel {
	scaleX, unitX := figureUnit(math.Max(math.Abs(v.left), math.Abs(v.right)), "A")
	scaleY, unitY := figureUnit(v.largest(), "V")
	panel := newFigurePanel(1, "Current in the arm (rms, "+unitX+")", "Left unexplained ("+unitY+")")
	panel.title = title
	panel.X.Min, panel.X.Max = v.left/scaleX, v.right/scaleX
	panel.Y.Min, panel.Y.Max = v.low/scaleY, v.high/scaleY
	panel.X.Tick.Marker = figureTicks(5)
	at := func(x, y float64) figureXY { return figureXY{x / scaleX, y / scaleY} }
	panel.layers(func(a *figureArea) {
		if len(v.intercepts) == 1 {
			a.fill(figureShade, line.band(v.intercepts[0], v.left, v.right, at)...)
		}
		a.across(figureZero, 0)
		a.up(figureZero, 0)
		for _, l := range line.lines(v.intercepts) {
			a.line(l.style, at(v.left, l.at(v.left)), at(v.right, l.at(v.right)))
		}
	}, func(a *figureArea) {
		for _, p := range v.points {
			m := figureCrowded(figureMark(p.amplitude), len(v.points))
			if v.spread {
				m.Radius *= 0.75
			}
			if len(v.points) <= figureCrowd {
				a.bar(figureLine(m.Color, figureBarred), p.current/scaleX, (p.value-p.U)/scaleY, (p.value+p.U)/scaleY)
			}
			a.mark(m, p.current/scaleX, p.value/scaleY)
		}
		for _, o := range v.intercepts {
			if line.separable && len(v.intercepts) == 1 {
				a.mark(figureIntercept, 0, o/scaleY)
			}
		}
	})
	return panel
}

// figureIntercept marks where the line meets the axis of no current.
var figureIntercept = draw.GlyphStyle{Color: figureBlack, Shape: figureStar, Radius: 4.5}

// figureNumberOf writes an estimate of the fit.
func figureNumberOf(x calib.Estimate) string {
	switch x.Unit {
	case "ohm":
		return figureMinus(quantity.Concise(x.Value, x.U, "Ω"))
	case "1":
		return figureMinus(quantity.Share(x.Value, 4)) + " of range, u = " + quantity.Share(x.U, 2)
	}
	return figureMinus(quantity.Concise(x.Value, x.U, x.Unit))
}
