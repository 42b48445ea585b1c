package report

import (
	"errors"
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/diagnose"
)

// RehearsalFigure draws what many rehearsals came to, as a PNG.
func RehearsalFigure(r *diagnose.Rehearsal) ([]byte, error) {
	if r.Trials < 1 {
		return nil, errors.New("no rehearsal was finished: there is nothing to draw")
	}
	return rehearsalFigure(r).png(plot.DefaultTextHandler, figureDPI)
}

// rehearsalFigure lays it out: one panel for the verdicts, one for the first
// findings, one for the steps judged wrong.
func rehearsalFigure(r *diagnose.Rehearsal) *figureSheet {
	s := &figureSheet{name: "rehearsal.png", title: "What " + thousands(r.Trials) + " rehearsals came to", height: 80}
	if r.Trials == 1 {
		s.title = "What 1 rehearsal came to"
	}
	s.note = fmt.Sprintf("Seed %d. Whiskers: 95 %% intervals of the shares, by their numbers (Wilson).", r.Seed)
	if r.Interrupted {
		s.note += " Interrupted."
	}
	add := func(head, of, foot string, bars []figureBar, widest float64) {
		if len(bars) == 0 {
			return
		}
		panel := figureBarPanel(bars, widest)
		panel.head, panel.x, panel.foot = head, "Share of "+of+" (%)", foot
		panel.share = 16*float64(len(bars)) + 2*figureMargin + 15
		if foot != "" {
			panel.share += figureMargin
		}
		s.height += vg.Length(panel.share) + figurePanelGap
		s.panels = append(s.panels, panel)
	}
	verdicts, first, wrong := figureVerdicts(r), figureFirst(r), figureWrong(r)
	widest := math.Max(figureWidest(verdicts), figureWidest(first))
	add("Verdict", "the rehearsals", "", verdicts, widest)
	add("First finding", "the rehearsals", "", first, widest)
	add("Steps judged wrong, by their true errors", "such steps", "The steps of one rehearsal share its bench: their intervals are rather too short.", wrong, figureWidest(wrong))
	return s
}

func figureWidest(bars []figureBar) float64 {
	widest := 0.0
	for _, b := range bars {
		widest = math.Max(widest, math.Max(b.share, b.high))
	}
	return widest
}

// figureCount is a bar of n out of so many.
func figureCount(name string, n, of int, colour color.Color) figureBar {
	b := figureBar{name: figureTwoLines(name), share: 100 * float64(n) / float64(of), colour: colour}
	low, high := wilson(n, of)
	b.low, b.high = 100*low, 100*high
	b.words = fmt.Sprintf("%.3g %% (%s of %s)", b.share, thousands(n), thousands(of))
	return b
}

func figureVerdicts(r *diagnose.Rehearsal) []figureBar {
	var bars []figureBar
	for o := decision.Pass; o <= decision.Fail; o++ {
		if n := r.Verdicts[o.String()]; n > 0 {
			bars = append(bars, figureCount(o.String(), n, r.Trials, figureOutcome(o).Color))
		}
	}
	if n := r.Verdicts[decision.NotJudged.String()]; n > 0 {
		bars = append(bars, figureCount(decision.NotJudged.String(), n, r.Trials, figureSoft))
	}
	if r.Unfitted > 0 {
		bars = append(bars, figureCount("could not be fitted", r.Unfitted, r.Trials, figureSoft))
	}
	return bars
}

// figureFirst are the findings most often named first, and the others as one.
func figureFirst(r *diagnose.Rehearsal) []figureBar {
	var bars []figureBar
	kinds, rest := byCount(r.First), 0
	for i, kind := range kinds {
		switch {
		case i >= figureMostBars && len(kinds) > figureMostBars+1:
			rest += r.First[kind]
		case kind == diagnose.Nothing:
			bars = append(bars, figureCount(kind, r.First[kind], r.Trials, figureSoft))
		default:
			bars = append(bars, figureCount(kind, r.First[kind], r.Trials, figureBlue))
		}
	}
	if rest > 0 {
		bars = append(bars, figureCount("all others ("+calib.Counted(len(kinds)-figureMostBars, "finding")+")", rest, r.Trials, figureSoft))
	}
	return bars
}

func figureWrong(r *diagnose.Rehearsal) []figureBar {
	if r.Good+r.Bad == 0 {
		return nil
	}
	var bars []figureBar
	for _, x := range []struct {
		name  string
		n, of int
	}{{"bad ones that pass", r.FalseAccepts, r.Bad}, {"good ones that fail", r.FalseRejects, r.Good}} {
		if x.of > 0 {
			bars = append(bars, figureCount(x.name, x.n, x.of, figureOrange))
		} else {
			bars = append(bars, figureBar{name: x.name, words: "there were none", colour: figureOrange})
		}
	}
	return bars
}

// wilson is the interval of a binomial proportion for 95 %: E. B. Wilson, Probable
// inference, the law of succession, and statistical inference, J. Amer. Statist.
// Assoc. 22 (1927) 209–212.
func wilson(x, n int) (low, high float64) {
	z := distuv.UnitNormal.Quantile(0.975)
	N, p := float64(n), float64(x)/float64(n)
	middle := p + z*z/(2*N)
	half := z * math.Sqrt(p*(1-p)/N+z*z/(4*N*N))
	return math.Max(0, (middle-half)/(1+z*z/N)), math.Min(1, (middle+half)/(1+z*z/N))
}
