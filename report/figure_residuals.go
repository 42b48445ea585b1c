package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/gonum/stat/distuv"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
)

// figureResidual is one step's standardised residual of the main fit.
type figureResidual struct {
	id    string
	index int // in the plan's steps
	z     float64
	mark  draw.GlyphStyle
}

// figureMostResiduals is the number of steps above which a cloud tells nothing.
const figureMostResiduals = 5000

// residualsFigure shows what the main fit leaves of each reading in units of its
// uncertainty: in the order of the plan and, for each cause found that the fit
// has no parameter for, against what the cause shows by.
func residualsFigure(e *calib.Evaluation) *figureSheet {
	points, phases := figureResiduals(e)
	if len(points) < 3 || len(points) > figureMostResiduals {
		return nil
	}
	s := &figureSheet{name: "residuals.png", title: "Residuals of the fit, and what the causes found make of them", height: 3.5 * 72}
	s.keys = figureResidualKeys(e, points, phases)
	limit := largestByChance(len(points))
	top := figureResidualPanel(points, figureByOrder(points), limit)
	top.share = 160
	s.panels = append(s.panels, top)
	var shown []string
	for _, ev := range evidenceOf(e) {
		by := figureShowsBy(e, ev)
		if by == nil || len(s.panels) > 3 || slices.Contains(shown, by.label) {
			continue
		}
		shown = append(shown, by.label)
		panel := figureResidualPanel(points, by, limit)
		panel.head, panel.share = fit(firstUpper(evidenceCause(ev)), 72), 150
		s.height += vg.Length(panel.share) + figurePanelGap
		s.panels = append(s.panels, panel)
	}
	if len(shown) == 0 {
		s.title = "Residuals of the fit"
	}
	s.caption = "Each reading less what the fit makes of it, over the standard uncertainty of that difference: about 19 of 20 lie within ±2, and all but 1 in 400 within ±3."
	if n := figureOutside(points, limit); n > 0 {
		s.caption += fmt.Sprintf(" %s ringed: beyond ±%s, where the largest of so many would come by chance once in 20 times (Šidák).", figureAre(n, "step"), figureNumber(limit, 1))
	}
	if len(shown) > 0 {
		s.caption += " Below, the same against what each cause found shows by, the thick lines being means; offset, gain and series resistance are in the fit and leave nothing here."
	}
	return s
}

// largestByChance is what the largest of n standardised residuals exceeds once in
// 20 times, on either side: Z. Šidák, J. Amer. Statist. Assoc. 62 (1967) 626–633.
func largestByChance(n int) float64 {
	each := -math.Expm1(math.Log(0.95) / float64(n))
	return distuv.UnitNormal.Quantile(1 - each/2)
}

// figureResiduals are the steps in the fit, and the phases of the reference.
func figureResiduals(e *calib.Evaluation) (points []figureResidual, phases []float64) {
	for i := range e.Result.Steps {
		r := &e.Result.Steps[i]
		if z := float64(r.Standardised); figureFinite(z) {
			points = append(points, figureResidual{id: r.ID, index: r.Index, z: z})
			if phase := e.Plan.Steps[r.Index].Phase; !slices.Contains(phases, phase) {
				phases = append(phases, phase)
			}
		}
	}
	slices.Sort(phases)
	for i := range points {
		step := &e.Plan.Steps[points[i].index]
		shape := figureMarks[slices.Index(phases, step.Phase)%len(figureMarks)]
		points[i].mark = figureCrowded(draw.GlyphStyle{Color: figureMark(step.Amplitude).Color, Shape: shape, Radius: 3.2}, len(points))
	}
	return points, phases
}

func figureResidualKeys(e *calib.Evaluation, points []figureResidual, phases []float64) []figureKey {
	keys := figureAmplitudes(e, len(points))
	for i := range keys {
		keys[i].line = draw.LineStyle{}
		if keys[i].mark.Shape != nil {
			keys[i].mark.Shape = draw.CircleGlyph{}
			if len(phases) > 1 { // there shapes are phases
				keys[i].mark = draw.GlyphStyle{}
				keys[i].shade = figureMark(figureAmplitudeOf(e, i)).Color
			}
		}
	}
	if len(phases) > 1 && len(phases) <= len(figureMarks) {
		for i, phase := range phases {
			words := degrees(phase)
			if i == 0 {
				words = "reference at " + words
			}
			keys = append(keys, figureKey{words: words, mark: draw.GlyphStyle{Color: figureSoft, Shape: figureMarks[i], Radius: 3.2}})
		}
	}
	return append(keys, figureKey{words: "±2, ±3", line: figureOther})
}

// figureAmplitudeOf is the i-th amplitude that steps use.
func figureAmplitudeOf(e *calib.Evaluation, i int) int {
	var used []int
	for k := range e.Result.Steps {
		used = append(used, e.Plan.Steps[e.Result.Steps[k].Index].Amplitude)
	}
	slices.Sort(used)
	return slices.Compact(used)[i]
}

func figureOutside(points []figureResidual, limit float64) int {
	n := 0
	for _, p := range points {
		if math.Abs(p.z) > limit {
			n++
		}
	}
	return n
}

// figureResidualPanel draws the residuals against a quantity; those beyond the
// limit are ringed, and named where they are few.
func figureResidualPanel(points []figureResidual, by *figureBy, limit float64) *figurePanel {
	const named, bend = 6, 3
	panel := newFigurePanel(1, by.label, "Residual / u")
	points = slices.DeleteFunc(slices.Clone(points), func(p figureResidual) bool { return !figureFinite(by.value(p.index)) })
	at := by.places(points)
	reach, x := 3.6, newFigureSpan()
	for i, p := range points {
		reach = math.Max(reach, 1.15*math.Abs(p.z))
		x.add(at[i])
	}
	panel.X.Min, panel.X.Max = x.padded(0.04)
	if by.ticks != nil {
		panel.X.Min, panel.X.Max = by.low, by.high
		panel.X.Tick.Marker, panel.X.Tick.Length = by.ticks, 0
		panel.X.Padding = 4
	}
	panel.Y.Min, panel.Y.Max = -reach, reach
	if reach < 5 {
		panel.Y.Tick.Marker = figureTicks(8)
	}
	if reach > 12 {
		scale := figureBentScale{bend}
		panel.Y.Scale, panel.Y.Tick.Marker = scale, scale
	}
	few := figureOutside(points, limit) <= named
	panel.layers(func(a *figureArea) {
		a.across(figureZero, 0)
		for _, y := range []float64{2, 3} {
			a.across(figureLine(figureSoft, 0.9, 6, 3), y)
			a.across(figureLine(figureSoft, 0.9, 6, 3), -y)
		}
	}, func(a *figureArea) {
		style := figureText(figureTickSize-1.5, xfont.WeightNormal, a.plot.X.Tick.Label.Handler)
		for i, p := range points {
			a.mark(p.mark, at[i], p.z)
			if math.Abs(p.z) <= limit {
				continue
			}
			a.DrawGlyph(draw.GlyphStyle{Color: figureInk, Shape: draw.RingGlyph{}, Radius: p.mark.Radius + 2.5}, a.at(at[i], p.z))
			if few && by.named {
				figureNameBeside(a, style, at[i], p)
			}
		}
		for _, m := range by.means(points, at) {
			a.line(figureLine(figureInk, 2.4), m[0], m[1])
		}
	})
	return panel
}

// figureNameBeside writes a step's name on the side of its mark where there is room.
func figureNameBeside(a *figureArea, style text.Style, x float64, p figureResidual) {
	name := tail(p.id, 12)
	to := a.at(x, p.z)
	to.X += p.mark.Radius + 5
	if width := style.Width(name); to.X+width > a.Max.X {
		to.X -= width + 2*(p.mark.Radius+5)
	}
	to.Y -= style.FontExtents().Ascent / 2
	a.FillText(style, to, strings.TrimSpace(name))
}
