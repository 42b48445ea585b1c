package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/gonum/stat/distuv"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
)

// figureResidual is what is left of one step's reading, over its standard uncertainty.
type figureResidual struct {
	id    string
	index int     // in the plan's steps
	z     float64 // residual of the main fit, positive where the reading is too large, whatever its sign
	plain float64 // the same of a detector and a bench without fault, inputs as stated
	sign  float64 // of the expected reading
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
	s := &figureSheet{name: "residuals.png", title: "Residuals of the fit, and where each cause found shows", height: 3.5 * 72}
	s.keys = figureResidualKeys(e, points, phases)
	limit := largestByChance(len(points))
	top := figureResidualPanel(points, figureByOrder(points), limit)
	top.share = 160
	s.panels = append(s.panels, top)
	plain := slices.Clone(points)
	for i := range plain {
		plain[i].z = plain[i].plain
	}
	var shown []string
	for _, ev := range evidenceOf(e) {
		by := figureShowsBy(e, ev)
		if by == nil || len(s.panels) > 3 || slices.Contains(shown, by.label) {
			continue
		}
		shown = append(shown, by.label)
		panel := figureResidualPanel(plain, by, limit)
		panel.head, panel.share = fit(firstUpper(evidenceCause(ev)), 72), 150
		s.height += vg.Length(panel.share) + figurePanelGap
		s.panels = append(s.panels, panel)
	}
	if len(shown) == 0 {
		s.title = "Residuals of the fit"
	}
	s.caption = "Each reading less what the fit makes of it, over the standard uncertainty of that difference, positive where it reads too much: by chance about 19 of 20 lie within ±2, and all but 1 in 400 within ±3."
	switch n := figureOutside(points, limit); {
	case figureRinged(points, limit):
		s.keys = append(s.keys, figureKey{words: "beyond ±" + figureNumber(limit, 1), mark: figureRing(3.2)})
		s.caption += fmt.Sprintf(" %s ringed, beyond ±%s: the largest of so many comes there by chance once in 20 times (Šidák).", figureAre(n, "step"), figureNumber(limit, 1))
	case n > 0:
		s.caption += fmt.Sprintf(" %d of %d are beyond ±%s, where the largest of so many comes by chance once in 20 times (Šidák): too many to be outliers.", n, len(points), figureNumber(limit, 1))
	}
	if len(shown) > 0 {
		s.caption += " Below, by how much the readings differ from those of a detector and a bench without fault, inputs as stated, against what each cause found shows by; the thick lines are means."
	}
	return s
}

// figureRinged tells whether outliers are few enough to be ringed.
func figureRinged(points []figureResidual, limit float64) bool {
	n := figureOutside(points, limit)
	return n > 0 && 5*n <= len(points)
}

func figureRing(inner vg.Length) draw.GlyphStyle {
	return draw.GlyphStyle{Color: figureInk, Shape: draw.RingGlyph{}, Radius: inner + 2.5}
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
			sign := math.Copysign(1, r.Expected)
			plain := (float64(r.Reading) - r.Expected) / math.Hypot(float64(r.UReading), r.UExpected)
			points = append(points, figureResidual{id: r.ID, index: r.Index, z: z * sign, plain: plain * sign, sign: sign})
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
	const named = 6
	panel := newFigurePanel(1, by.label, "Residual / u")
	ringed := by.named && figureRinged(points, limit)
	if !by.named {
		panel.y = "Deviation / u"
	}
	points = slices.DeleteFunc(slices.Clone(points), func(p figureResidual) bool { return !figureFinite(by.value(p.index), p.z) })
	if by.signed {
		panel.y = "Signed dev. / u"
		for i := range points {
			points[i].z *= points[i].sign
		}
	}
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
		scale := figureBentScale{1}
		panel.Y.Min, panel.Y.Max = -1.5*reach, 1.5*reach
		panel.Y.Scale, panel.Y.Tick.Marker = scale, figureSparse{scale}
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
			if !ringed || math.Abs(p.z) <= limit {
				continue
			}
			a.DrawGlyph(figureRing(p.mark.Radius), a.at(at[i], p.z))
			if few {
				figureNameBeside(a, style, at[i], p)
			}
		}
		for _, m := range by.means(points, at) {
			a.line(figureLine(figureInk, 2.4), m[0], m[1])
		}
	})
	return panel
}

// figureSparse leaves out the labels of a bent scale that would touch that of zero.
type figureSparse struct{ figureBentScale }

// Ticks are those of the scale.
func (s figureSparse) Ticks(low, high float64) []plot.Tick {
	const room = 0.1
	ticks := s.figureBentScale.Ticks(low, high)
	zero := s.Normalize(low, high, 0)
	for i, t := range ticks {
		if t.Value != 0 && math.Abs(s.Normalize(low, high, t.Value)-zero) < room {
			ticks[i].Label = ""
		}
	}
	return ticks
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
