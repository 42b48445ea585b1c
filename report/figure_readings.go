package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// figureReading is one step of the readings figure.
type figureReading struct {
	applied, read float64 // V rms, without sign
	amplitude     int
	share, U      float64 // error and its expanded uncertainty over the reading expected; NaN where nothing is expected
	limit         float64 // the same; NaN where not judged
	full          float64 // V, the range
	rule          *plan.Limit
}

// readingsFigure shows the readings against the voltage applied, and below them
// the errors in percent.
func readingsFigure(e *calib.Evaluation) *figureSheet {
	s := &figureSheet{name: "readings.png", title: "Readings against the voltage applied", height: 6.2 * 72}
	points := figureReadings(e)
	if len(points) == 0 {
		return nil
	}
	x, y := newFigureSpan(), newFigureSpan()
	for _, p := range points {
		x.add(p.applied)
		y.add(p.read)
	}
	upper := newFigurePanel(0.56, "", "Reading (rms, sign dropped)")
	lower := newFigurePanel(0.44, "Voltage applied (rms, wiring as stated)", "Error (% of expected)")
	upper.X.Min, upper.X.Max = x.decades()
	upper.Y.Min, upper.Y.Max = y.decades()
	upper.Y.Scale, upper.Y.Tick.Marker = plot.LogScale{}, figureLogTicks{"V", 5}
	lower.X.Min, lower.X.Max = upper.X.Min, upper.X.Max
	for _, p := range []*figurePanel{upper, lower} {
		p.X.Scale, p.X.Tick.Marker = plot.LogScale{}, figureLogTicks{"V", 7}
	}
	upper.X.Tick.Marker = figureUnlabelled{upper.X.Tick.Marker}
	lowest, judged := figureShares(lower, points)

	gain, words := 1.0, "reading = voltage applied"
	if g := e.Result.Fit.Gain; g.Known && g.Value > 0 {
		gain, words = g.Value, "fitted gain"
	}
	s.keys = append(figureAmplitudes(e, len(points)), figureKey{words: words, line: figureFit})
	upper.layers(func(a *figureArea) {
		low := math.Max(upper.X.Min, upper.Y.Min/gain)
		high := math.Min(upper.X.Max, upper.Y.Max/gain)
		if low < high {
			a.line(figureFit, figureXY{low, gain * low}, figureXY{high, gain * high})
		}
	}, func(a *figureArea) {
		for _, p := range points {
			a.mark(figureCrowded(figureMark(p.amplitude), len(points)), p.applied, p.read)
		}
	})
	if judged {
		s.keys = append(s.keys, figureKey{words: "limits of error", shade: figureShade, line: figureLine(figureShade, 0)})
	}
	lower.layers(func(a *figureArea) {
		figureLimitBands(a, points)
		a.across(figureZero, 0)
	}, func(a *figureArea) {
		for _, p := range points {
			if math.IsNaN(p.share) {
				continue
			}
			m := figureCrowded(figureMark(p.amplitude), len(points))
			if len(points) <= figureCrowd {
				a.bar(figureLine(m.Color, figureBarred), p.applied, 100*(p.share-p.U), 100*(p.share+p.U))
			}
			a.mark(m, p.applied, 100*p.share)
		}
	})
	s.panels = []*figurePanel{upper, lower}
	s.caption = "Above, each step's reading: points leave the line where an offset and a series resistance count, at the low end. " +
		fmt.Sprintf("Below, its error in percent of the reading expected%s, on a scale that is linear within ±%s %% and logarithmic beyond.",
			figureBars(len(points)), figureNumber(lowest, max(0, -int(math.Floor(math.Log10(lowest)+1e-9)))))
	if slices.ContainsFunc(e.Result.Steps, func(r calib.StepResult) bool { return r.Expected < 0 }) {
		s.caption += " With the reference turned by 180° a gain shows on the same side and an offset on the other."
	}
	if n := len(e.Result.Steps) - len(points); n > 0 {
		s.caption += fmt.Sprintf(" %s with nothing applied, or read as exactly zero, cannot stand on these scales.", figureCounted(n, "step"))
	}
	return s
}

// figureReadings are the steps that can stand on logarithmic axes.
func figureReadings(e *calib.Evaluation) []figureReading {
	var points []figureReading
	for i := range e.Result.Steps {
		r := &e.Result.Steps[i]
		step := &e.Plan.Steps[r.Index]
		p := figureReading{applied: r.Drop, read: math.Abs(float64(r.Reading)), amplitude: step.Amplitude,
			share: math.NaN(), U: math.NaN(), limit: math.NaN(), full: r.Range, rule: e.Plan.LimitAt(r.Range, step.Frequency)}
		if e.Plan.Detector.Reads == plan.InPhase {
			p.applied = math.Abs(r.Expected)
		}
		if !(p.applied > 0 && p.read > 0) || !figureFinite(p.applied, p.read) {
			continue
		}
		expected := math.Abs(float64(r.Reading - r.Error))
		// A negative reading's error counts outwards: both signs of one voltage agree.
		share := float64(r.Error) / expected * math.Copysign(1, r.Expected)
		if expected > 0 && figureFinite(share, float64(r.U)) {
			p.share, p.U, p.limit = share, float64(r.U)/expected, float64(r.Limit)/expected
		}
		points = append(points, p)
	}
	return points
}

// figureShares sets the vertical axis of the lower panel: bent at the power of
// ten below the smallest limit, or the smallest error bar.
func figureShares(panel *figurePanel, points []figureReading) (bend float64, judged bool) {
	least, y := math.Inf(1), newFigureSpan()
	for _, p := range points {
		if p.limit > 0 {
			judged = true
			least = math.Min(least, 100*p.limit)
			y.add(100*p.limit, -100*p.limit)
		}
		y.add(100*p.share, 100*(p.share+p.U), 100*(p.share-p.U))
	}
	if !judged {
		for _, p := range points {
			if p.U > 0 {
				least = math.Min(least, 100*p.U)
			}
		}
	}
	if !figureFinite(least) || y.empty() {
		least = 1
		y.add(-1, 1)
	}
	bend = math.Pow(10, math.Max(-5, math.Floor(math.Log10(least))))
	scale := figureBentScale{bend}
	panel.Y.Scale, panel.Y.Tick.Marker = scale, scale
	reach := 1.6 * math.Max(bend, math.Max(-y.low, y.high))
	panel.Y.Min, panel.Y.Max = -reach, reach
	return bend, judged
}

// figureLimitBands shades the limits of error, a band for each range and rule:
// the limit is a share of the reading and a share of the range.
func figureLimitBands(a *figureArea, points []figureReading) {
	type band struct {
		full float64
		rule *plan.Limit
	}
	of := map[band][]figureReading{}
	var bands []band
	for _, p := range points {
		if !(p.limit > 0) {
			continue
		}
		b := band{p.full, p.rule}
		if of[b] == nil {
			bands = append(bands, b)
		}
		of[b] = append(of[b], p)
	}
	const beyond = 1.12 // a single point has a band too
	for _, b := range bands {
		ps := of[b]
		slices.SortStableFunc(ps, func(p, q figureReading) int { return cmp.Compare(p.applied, q.applied) })
		first, last := ps[0], ps[len(ps)-1]
		first.applied, last.applied = first.applied/beyond, last.applied*beyond
		ps = slices.Concat([]figureReading{first}, ps, []figureReading{last})
		var outline []figureXY
		for _, p := range ps {
			outline = append(outline, figureXY{p.applied, 100 * p.limit})
		}
		for _, p := range slices.Backward(ps) {
			outline = append(outline, figureXY{p.applied, -100 * p.limit})
		}
		a.fill(figureShade, outline...)
	}
}

// figureAmplitudes are the key's entries for the amplitudes that were used.
func figureAmplitudes(e *calib.Evaluation, points int) []figureKey {
	const most = 8
	used := map[int]bool{}
	for i := range e.Result.Steps {
		used[e.Plan.Steps[e.Result.Steps[i].Index].Amplitude] = true
	}
	var keys []figureKey
	for i, a := range e.Plan.Generator.Amplitudes {
		if !used[i] {
			continue
		}
		if len(keys) == most {
			keys = append(keys, figureKey{words: fmt.Sprintf("and %d more", len(used)-most)})
			break
		}
		m := figureMark(i)
		words := a.Shown
		if len(keys) == 0 {
			words = "generator at " + words
		}
		k := figureKey{words: words, mark: m}
		if points <= figureCrowd {
			k.line = figureLine(m.Color, figureBarred)
		}
		keys = append(keys, k)
	}
	return keys
}

// figureBars says what the error bars are, where there are any.
func figureBars(points int) string {
	if points > figureCrowd {
		return ""
	}
	return " with its expanded uncertainty"
}

func figureCounted(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
