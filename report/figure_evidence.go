package report

import (
	"fmt"
	"image/color"
	"math"
	"strings"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib"
	"rungproof/calib/diagnose"
)

// figureOwner is how bars say whose a cause is: by colour and by the mark in them.
type figureOwner struct {
	whose string
	shade color.Color
	mark  draw.GlyphDrawer
}

var figureOwners = []figureOwner{
	{"the detector's", figureBlue, draw.CircleGlyph{}},
	{"the bench's", figureOrange, figureSquare},
	{"the readings'", figureGreen, figureUp},
	{"open", figurePurple, figureDiamond},
}

func ownerOf(whose string) figureOwner {
	for _, o := range figureOwners {
		if o.whose == whose {
			return o
		}
	}
	return figureOwners[len(figureOwners)-1]
}

func (o figureOwner) style() draw.GlyphStyle {
	return draw.GlyphStyle{Color: figureBlack, Shape: o.mark, Radius: 3}
}

// evidenceFigure shows what the readings speak for, and how loudly: a cause to a panel.
func evidenceFigure(e *calib.Evaluation) *figureSheet {
	var shown []*calib.Evidence
	fall := newFigureSpan()
	for _, ev := range evidenceOf(e) {
		if ev.Fall > 1 && figureFinite(ev.Fall, ev.Share) {
			shown = append(shown, ev)
			fall.add(ev.Fall)
		}
	}
	if len(shown) == 0 {
		return nil
	}
	s := &figureSheet{name: "evidence.png", title: "What the readings speak for", height: 80,
		note: "Bars: the fall of χ² when the cause is put into the model"}
	for _, o := range figureOwners {
		for _, ev := range shown {
			if ownerOf(ev.Whose) == o {
				s.keys = append(s.keys, figureKey{words: o.whose, shade: o.shade, mark: o.style()})
				break
			}
		}
	}
	scale := figureFallScale(fall)
	for i, ev := range shown {
		panel := figureEvidencePanel(ev, scale)
		panel.head = fit(firstUpper(evidenceCause(ev))+": "+typeset(evidenceSize(ev)), 80)
		panel.share = 18 + figureMargin
		if len(ev.Contradict) > 0 {
			panel.foot = fit(evidenceAgainst(ev), 92)
			panel.share += figureMargin
		}
		if i == len(shown)-1 {
			panel.share += 12
		} else {
			panel.X.Tick.Marker = figureUnlabelled{panel.X.Tick.Marker}
		}
		s.height += vg.Length(panel.share) + figurePanelGap
		s.panels = append(s.panels, panel)
	}
	s.caption = "Each cause that the readings show, in the order in which they were found, with its size ± U. A bar is the fall of χ² when that cause joins the ones above it; " +
		"at its end stands its share of what a detector and a bench without fault leave unexplained. A line beneath names its rivals, of which one of weight 1 explains the readings as well, and what else speaks against it."
	if scale.log {
		s.caption += " The scale is logarithmic and begins at 1, the fall that chance alone brings on average."
	}
	return s
}

// evidenceOf is the evidence of all findings that have some.
func evidenceOf(e *calib.Evaluation) []*calib.Evidence {
	var out []*calib.Evidence
	for i := range e.Result.Findings {
		if ev := e.Result.Findings[i].Evidence; ev != nil {
			out = append(out, ev)
		}
	}
	return out
}

// figureFalls is the common scale of the bars: linear from 0, or logarithmic from
// 1 where they differ much. Beyond the longest there is room for words.
type figureFalls struct {
	log          bool
	longest, top float64
}

func figureFallScale(fall figureSpan) figureFalls {
	const room = 0.6
	if fall.high < 10*fall.low {
		return figureFalls{false, fall.high, fall.high / room}
	}
	return figureFalls{true, fall.high, math.Pow(fall.high, 1/room)}
}

// figureFallTicks marks no more than the next decade after the longest bar.
type figureFallTicks struct{ figureFalls }

// Ticks are round numbers, or the decades.
func (t figureFallTicks) Ticks(low, high float64) []plot.Tick {
	if !t.log {
		return figureTicks(5).Ticks(low, math.Min(high, 1.2*t.longest))
	}
	return figureLogTicks{"", 5}.Ticks(low, math.Pow(10, math.Ceil(math.Log10(t.longest))))
}

func figureEvidencePanel(ev *calib.Evidence, scale figureFalls) *figurePanel {
	panel := newFigurePanel(1, "", "")
	panel.X.Min, panel.X.Max = 0, scale.top
	if scale.log {
		panel.X.Min, panel.X.Scale = 1, plot.LogScale{}
	}
	panel.X.Tick.Marker = figureFallTicks{scale}
	panel.Y.Min, panel.Y.Max = 0, 1
	panel.Y.Tick.Marker = plot.ConstantTicks{}
	panel.Y.Tick.Length = 0
	owner := ownerOf(ev.Whose)
	panel.layers(func(a *figureArea) {
		const low, high = 0.15, 0.85
		start := a.plot.X.Min
		a.fill(owner.shade, figureXY{start, low}, figureXY{ev.Fall, low}, figureXY{ev.Fall, high}, figureXY{start, high})
		end := a.at(ev.Fall, 0.5)
		if end.X-a.Min.X > 14 {
			a.DrawGlyph(owner.style(), vg.Point{X: end.X - 7, Y: end.Y})
		}
		style := figureText(figureTickSize, xfont.WeightNormal, a.plot.X.Tick.Label.Handler)
		style.YAlign = text.YCenter
		a.FillText(style, vg.Point{X: end.X + 4, Y: end.Y + style.FontExtents().Descent}, evidenceShare(ev)+" of the deviation")
	})
	return panel
}

// evidenceCause is a cause with its variant.
func evidenceCause(ev *calib.Evidence) string {
	if ev.Variant == "" {
		return ev.Cause
	}
	return fmt.Sprintf("%s (%s)", ev.Cause, ev.Variant)
}

// evidenceAgainst says what speaks against a cause in one line, its rivals together.
func evidenceAgainst(ev *calib.Evidence) string {
	var rivals, others []string
	for _, c := range ev.Contradict {
		if name, weight, is := strings.Cut(c, " explains as much"); is {
			rivals = append(rivals, strings.TrimSpace(name)+weight)
		} else {
			others = append(others, "but "+c)
		}
	}
	if len(rivals) > 0 {
		others = append([]string{"rivals: " + strings.Join(rivals, ", ")}, others...)
	}
	return strings.Join(others, "; ")
}

// evidenceSize is how large a cause is; a gain's deviation from 1.
func evidenceSize(ev *calib.Evidence) string {
	x := calib.Estimate{Value: ev.Size, U: ev.Expanded, K: 1, Unit: ev.Unit, Known: true}
	switch {
	case ev.Cause == diagnose.Gain || ev.Cause == diagnose.Convention:
		return gainDeviation(x)
	case x.Unit == "Ω":
		x.Unit = "ohm"
	}
	return sizeOf(x)
}

// evidenceShare is a share of the deviation, in whole percent where it is large.
func evidenceShare(ev *calib.Evidence) string {
	switch {
	case ev.Share < 0.0005:
		return "under 0.1 %"
	case ev.Share < 0.095:
		return sharePercent(ev.Share)
	}
	return percent(ev.Share)
}
