package report

import (
	"image/color"
	"math"
	"strings"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"rungproof/calib"
)

// figureBar is a share in percent: of a budget, one line of it or the small ones together.
type figureBar struct {
	name      string
	share     float64
	low, high float64 // its whisker; none where both are zero
	words     string  // at its end
	colour    color.Color
}

// What a budget's bar stands for.
var (
	figureOfInput   = figureBlue
	figureOfReading = figureOrange
	figureOfOthers  = figureSoft
)

const (
	figureMostBars  = 8
	figureLeastBar  = 0.005 // share of the variance
	figureNameWidth = 30    // runes in a line
)

// budgetFigure shows where the uncertainty of each result comes from.
func budgetFigure(e *calib.Evaluation) *figureSheet {
	s := &figureSheet{name: "budget.png", title: "Where the uncertainty comes from", height: 90}
	all, widest, row := [][]figureBar{}, 0.0, vg.Length(16)
	var shown []*calib.Budget
	kinds := map[color.Color]bool{}
	for _, b := range e.Result.Budgets {
		bars := figureBudgetBars(e, b)
		if len(bars) == 0 {
			continue
		}
		for _, bar := range bars {
			kinds[bar.colour] = true
			widest = math.Max(widest, bar.share)
			if strings.Contains(bar.name, "\n") {
				row = 28
			}
		}
		shown, all = append(shown, b), append(all, bars)
	}
	if len(all) == 0 {
		return nil
	}
	for _, k := range []figureKey{{words: "an input", shade: figureOfInput}, {words: "the readings", shade: figureOfReading}, {words: "all others", shade: figureOfOthers}} {
		if kinds[k.shade] {
			s.keys = append(s.keys, k)
		}
	}
	for i, bars := range all {
		panel := figureBarPanel(bars, widest)
		panel.head = figureMinus(firstUpper(budgetResult(shown[i]))) + ", k = " + factor(shown[i].K)
		panel.share = float64(row)*float64(len(bars)) + figureMargin
		if improve := shown[i].Improve; len(improve) > 0 {
			panel.foot = fit(improve[0].Name, figureNameWidth) + " five times better known: " + expandedAfter(shown[i], improve[0])
			panel.share += figureMargin
		}
		if i == len(all)-1 {
			panel.x = "Share of the variance (%)"
			panel.share += figureMargin + 15
		} else {
			panel.X.Tick.Marker = figureUnlabelled{panel.X.Tick.Marker}
		}
		s.height += vg.Length(panel.share) + figurePanelGap
		s.panels = append(s.panels, panel)
	}
	s.caption = "What each result's variance is made of, the largest first; at a bar its share, and in parentheses the standard uncertainty that it gives. " +
		"The line beneath says what the expanded uncertainty would be if the largest were five times better known, by the whole estimate done again."
	if !e.Result.Separable() {
		s.caption += " Offset and series resistance cannot be told apart: each is shown as if the other were zero."
	}
	return s
}

// figureBudgetBars are the largest contributions, and the others as one.
func figureBudgetBars(e *calib.Evaluation, b *calib.Budget) []figureBar {
	if !(b.U > 0) || !figureFinite(b.U, b.Expanded) {
		return nil
	}
	input := map[string]bool{"series resistance expected": true}
	for _, in := range e.Result.Inputs {
		input[in.Name] = true
	}
	m := measureOf(b)
	lines, rest := largest(b, figureLeastBar, figureMostBars)
	var bars []figureBar
	for _, l := range lines {
		colour := figureOfReading
		if input[l.Name] {
			colour = figureOfInput
		}
		bars = append(bars, figureBudgetBar(figureTwoLines(l.Name), l.Share, m.of(math.Abs(l.Contribution)), colour))
	}
	if rest.share >= leastShare {
		bars = append(bars, figureBudgetBar("all others ("+calib.Counted(rest.count, "line")+")", rest.share, m.of(rest.u), figureOfOthers))
	}
	return bars
}

func figureBudgetBar(name string, share float64, u string, colour color.Color) figureBar {
	return figureBar{name: name, share: 100 * share, words: sharePercent(share) + " (u = " + u + ")", colour: colour}
}

// figureTwoLines breaks a long name between words, and cuts what two lines do not hold.
func figureTwoLines(name string) string {
	r := []rune(name)
	if len(r) <= figureNameWidth {
		return name
	}
	cut := figureNameWidth
	if space := strings.LastIndex(string(r[:cut+1]), " "); space > 0 {
		cut = len([]rune(string(r[:cut+1])[:space]))
	}
	return string(r[:cut]) + "\n" + fit(strings.TrimSpace(string(r[cut:])), figureNameWidth)
}

// figureShareTicks marks shares up to the whole.
type figureShareTicks struct{ figureTicks }

// Ticks are those up to 100 %.
func (t figureShareTicks) Ticks(low, high float64) []plot.Tick {
	return t.figureTicks.Ticks(low, math.Min(high, 100))
}

// figureBarPanel draws the bars, the first on top, with room for what is written at the longest.
func figureBarPanel(bars []figureBar, widest float64) *figurePanel {
	const half, room = 0.34, 0.55
	panel := newFigurePanel(1, "", "")
	panel.X.Min, panel.X.Max = 0, widest/room
	panel.X.Tick.Marker = figureShareTicks{6}
	panel.Y.Min, panel.Y.Max = -0.5, float64(len(bars))-0.5
	names := plot.ConstantTicks{}
	for i, bar := range bars {
		names = append(names, plot.Tick{Value: float64(len(bars) - 1 - i), Label: bar.name})
	}
	panel.Y.Tick.Marker, panel.Y.Tick.Length, panel.Y.Padding = names, 0, 4
	panel.layers(func(a *figureArea) {
		style := figureText(figureTickSize, xfont.WeightNormal, a.plot.Y.Tick.Label.Handler)
		style.YAlign = text.YCenter
		for i, bar := range bars {
			y := float64(len(bars) - 1 - i)
			a.fill(bar.colour, figureXY{0, y - half}, figureXY{bar.share, y - half}, figureXY{bar.share, y + half}, figureXY{0, y + half})
			if bar.high > bar.low {
				a.whisker(figureLine(figureInk, figureBarred), y, bar.low, bar.high)
			}
			at := a.at(math.Max(bar.share, bar.high), y)
			a.FillText(style, vg.Point{X: at.X + 4, Y: at.Y + style.FontExtents().Descent}, bar.words)
		}
	})
	return panel
}
