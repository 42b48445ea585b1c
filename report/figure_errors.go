package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/quantity"
)

// figureJudged is one judged step of the errors figure. Shares are of its limit.
type figureJudged struct {
	full     float64 // V, the range
	share, U float64
	zone     float64 // half-width of the acceptance zone; 0 where nothing can pass
	outcome  decision.Outcome
	beside   bool // something beside the error counts against it

	x, left, right float64 // its place, and the edges of it
}

// errorsFigure shows each error as a share of its limit, range by range.
func errorsFigure(e *calib.Evaluation) *figureSheet {
	steps := figureJudgedSteps(e)
	if len(steps) == 0 {
		return nil
	}
	s := &figureSheet{name: "errors.png", title: "Errors against their limits", height: 4.6 * 72}
	ticks, edges := figureByRange(steps)
	panel := newFigurePanel(1, "Range (full scale, rms), steps in the order of the plan", "Error / limit")
	panel.X.Min, panel.X.Max = edges[0], edges[len(edges)-1]
	panel.Y.Tick.Marker = figureTicks(7)
	panel.X.Tick.Marker, panel.X.Tick.Length, panel.X.Padding = ticks, 0, 4
	reach, y := 1.3, newFigureSpan()
	for _, p := range steps {
		y.add(math.Abs(p.share)+p.U, math.Abs(p.share))
	}
	reach = math.Max(reach, math.Min(1.08*y.high, 3.2))
	panel.Y.Min, panel.Y.Max = -reach, reach

	outcomes := map[decision.Outcome]bool{}
	beyond, worse, nothing := 0, 0, 0
	for _, p := range steps {
		outcomes[p.outcome] = true
		if math.Abs(p.share) > reach {
			beyond++
		}
		if p.beside {
			worse++
		}
		if p.zone == 0 {
			nothing++
		}
	}
	for o := decision.Pass; o <= decision.Fail; o++ {
		if outcomes[o] {
			s.keys = append(s.keys, figureKey{words: o.String(), mark: figureOutcome(o)})
		}
	}
	s.keys = append(s.keys, figureKey{words: "limit", line: figureLimit}, figureKey{words: "zone of acceptance", shade: figureZone})

	panel.layers(func(a *figureArea) {
		for i := 0; i < len(steps); {
			k := i
			for k < len(steps) && steps[k].full == steps[i].full {
				k++
			}
			figureShadeZone(a, steps[i:k])
			i = k
		}
		for _, x := range edges[1 : len(edges)-1] {
			a.up(figureLine(figureSoft, 0.7, 2, 3), x)
		}
		a.across(figureZero, 0)
		a.across(figureLimit, 1)
		a.across(figureLimit, -1)
	}, func(a *figureArea) {
		for _, p := range steps {
			m := figureCrowded(figureOutcome(p.outcome), len(steps))
			switch {
			case p.share > reach:
				m.Shape, m.Radius = figureArrow{}, 4.5
				a.mark(m, p.x, reach)
			case p.share < -reach:
				m.Shape, m.Radius = figureArrow{down: true}, 4.5
				a.mark(m, p.x, -reach)
			default:
				if len(steps) <= figureCrowd {
					a.bar(figureLine(m.Color, figureBarred), p.x, p.share-p.U, p.share+p.U)
				}
				a.mark(m, p.x, p.share)
			}
		}
	})
	s.panels = []*figurePanel{panel}
	bars := "its bar the expanded uncertainty as a share of the limit"
	if len(steps) > figureCrowd {
		bars = "drawn without its uncertainty, there being so many"
	}
	s.caption = fmt.Sprintf("Each judged step's error over its limit, %s; between the lines at ±1 it keeps to the limit, and in the shaded zone it passes by the plan's rule: %s.", bars, ruleName(e.Plan))
	if nothing > 0 {
		s.caption += fmt.Sprintf(" %s without a zone: so uncertain that not even an error of zero passes.", figureAre(nothing, "step"))
	}
	if beyond > 0 {
		s.caption += fmt.Sprintf(" An arrow stands for an error farther out than the picture reaches (%s).", figureCounted(beyond, "step"))
	}
	if worse > 0 {
		s.caption += fmt.Sprintf(" %s marked worse than the place alone would say: a phase, a flag, full scale exceeded, or an offset that cannot be told from a series resistance counts too.", figureAre(worse, "step"))
	}
	return s
}

// figureZone is the colour of the zone of acceptance.
var figureZone = figureAlpha(figureGreen, 45)

func figureAre(n int, what string) string {
	if n == 1 {
		return "1 " + what + " is"
	}
	return figureCounted(n, what) + " are"
}

// figureJudgedSteps are the judged steps, by range from the smallest.
func figureJudgedSteps(e *calib.Evaluation) []figureJudged {
	var steps []figureJudged
	for i := range e.Result.Steps {
		r := &e.Result.Steps[i]
		limit := float64(r.Limit)
		p := figureJudged{full: r.Range, share: float64(r.Error) / limit, U: float64(r.U) / limit, outcome: r.Outcome}
		if r.Outcome == decision.NotJudged || !(limit > 0) || !figureFinite(p.share, p.U) {
			continue
		}
		if a := float64(r.Acceptance); a > 0 && figureFinite(a) {
			p.zone = a / limit
		}
		p.beside = beside(r)
		steps = append(steps, p)
	}
	slices.SortStableFunc(steps, func(p, q figureJudged) int { return cmp.Compare(p.full, q.full) })
	return steps
}

// figureByRange places the steps: each range has room for its steps, and for its
// name at least. It gives the names and the edges of the ranges.
func figureByRange(steps []figureJudged) (plot.ConstantTicks, []float64) {
	const room = 0.11 // of the axis, for a name
	var starts []int
	for i := range steps {
		if i == 0 || steps[i].full != steps[i-1].full {
			starts = append(starts, i)
		}
	}
	least := room * float64(len(steps))
	inset := 0.006 * float64(len(steps)) // keeps the marks off the edges
	every := 1 + (len(starts)-1)/9
	ticks, edges := plot.ConstantTicks{}, []float64{0}
	for g, start := range starts {
		end := len(steps)
		if g+1 < len(starts) {
			end = starts[g+1]
		}
		left, width := edges[g], math.Max(float64(end-start), least)
		each := (width - 2*inset) / float64(end-start)
		for i := start; i < end; i++ {
			x := left + inset + float64(i-start)*each
			steps[i].left, steps[i].x, steps[i].right = x, x+each/2, x+each
		}
		steps[start].left, steps[end-1].right = left, left+width
		edges = append(edges, left+width)
		if g%every == 0 {
			ticks = append(ticks, plot.Tick{Value: left + width/2, Label: quantity.Format(steps[start].full, 3, "V")})
		}
	}
	for i, t := range ticks {
		ticks[i].Label = figureTrim(t.Label)
	}
	return ticks, edges
}

// figureShadeZone shades the zone of acceptance of the steps of one range.
func figureShadeZone(a *figureArea, steps []figureJudged) {
	var outline []figureXY
	for _, p := range steps {
		outline = append(outline, figureXY{p.left, p.zone}, figureXY{p.right, p.zone})
	}
	for _, p := range slices.Backward(steps) {
		outline = append(outline, figureXY{p.right, -p.zone}, figureXY{p.left, -p.zone})
	}
	a.fill(figureZone, outline...)
}
