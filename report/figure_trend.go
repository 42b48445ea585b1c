package report

import (
	"fmt"
	"math"
	"strings"
	"time"
	"unicode"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib/trend"
)

// trendFiles are the figures of histories and, of several, an overview page.
func trendFiles(views []*TrendView) ([]file, error) {
	sheets := make([]*figureSheet, len(views))
	taken := map[string]int{}
	for i, v := range views {
		from, to := v.span()
		sheets[i] = trendFigure(v, from, to, 1)
		sheets[i].name = trendName(v, taken)
	}
	figures, err := drawFigures(sheets, plot.DefaultTextHandler, figureDPI)
	if err != nil {
		return nil, err
	}
	var files []file
	for _, f := range figures {
		files = append(files, file{f.Name, f.PNG})
	}
	if len(views) > 1 {
		page, err := fleetPage(views)
		if err != nil {
			return nil, err
		}
		files = append(files, file{"fleet.html", page})
	}
	return files, nil
}

// trendName is a file name that every system takes, and that no other view has.
func trendName(v *TrendView, taken map[string]int) string {
	safe := func(r rune) rune {
		switch {
		case r == 'µ' || r == 'μ':
			return 'u'
		case unicode.IsLetter(r) || unicode.IsDigit(r) || strings.ContainsRune("-_.", r):
			return r
		}
		return '-'
	}
	name := []rune(strings.Map(safe, "trend-"+v.Serial+"-"+v.Of))
	name = name[:min(len(name), 60)]
	// Some systems do not tell capitals from small letters.
	key := strings.ToLower(string(name))
	taken[key]++
	if n := taken[key]; n > 1 {
		return fmt.Sprintf("%s.%d.png", string(name), n)
	}
	return string(name) + ".png"
}

// span is the time that a history and its outlook take.
func (v *TrendView) span() (from, to time.Time) {
	points := v.Trend.Points
	return points[0].Time, v.outlook()
}

// outlook is the date to which the prediction is drawn: the next calibration, or a
// year after the last one where no date is known.
func (v *TrendView) outlook() time.Time {
	last := v.Trend.Points[len(v.Trend.Points)-1].Time
	if v.Advice != nil && v.Advice.Due.After(last) {
		return v.Advice.Due
	}
	return last.Add(trend.Year)
}

// trendMark is the mark of a result as found or as left.
func trendMark(asLeft bool) draw.GlyphStyle {
	if asLeft {
		return draw.GlyphStyle{Color: figureRed, Shape: figureDiamond, Radius: 2.9}
	}
	return draw.GlyphStyle{Color: figureBlue, Shape: draw.CircleGlyph{}, Radius: 2.5}
}

var (
	trendDue   = figureLine(figurePurple, 1.4, 2, 2.5)
	trendBreak = figureLine(figureSoft, 1, 1, 3)
	trendShade = figureAlpha(figureSky, 90)
)

// trendCrowd is the number of results above which marks are small.
const trendCrowd = 80

// trendStretch is a segment as it is drawn: its line and band, up to the next
// adjustment; of the last one up to the outlook.
type trendStretch struct {
	line      []figureXY
	low, high []figureXY
}

// trendFigure shows a history from one date to another, its marks so many times the usual size.
func trendFigure(v *TrendView, from, to time.Time, marks vg.Length) *figureSheet {
	points := v.Trend.Points
	last := points[len(points)-1].Time
	stretches := v.stretches()

	data := newFigureSpan()
	for _, p := range points {
		data.add(p.Value, p.Value-2*p.U, p.Value+2*p.U)
	}
	// A limit far away, or the wide band of a few results, must not flatten the rest.
	reach := math.Max(math.Abs(data.low), math.Abs(data.high))
	y := data
	y.add(0)
	limitShown := v.Limit <= 10*reach || reach == 0
	if limitShown {
		y.add(v.Limit, -v.Limit)
		reach = math.Max(reach, v.Limit)
	}
	for _, s := range stretches {
		for i := range s.low {
			y.add(math.Max(s.low[i].y, -1.5*reach), math.Min(s.high[i].y, 1.5*reach))
		}
	}
	low, high := y.padded(0.06)
	scale, unit := figureUnit(math.Max(-low, high), v.Unit)

	s := &figureSheet{title: tail(v.Serial, 40) + ": " + v.subject(), height: 4.2 * 72}
	panel := newFigurePanel(1, "", "Error / "+unit)
	panel.Y.Min, panel.Y.Max = low/scale, high/scale
	room := to.Sub(from).Seconds() * 0.03
	panel.X.Min, panel.X.Max = float64(from.Unix())-room, float64(to.Unix())+room
	panel.X.Tick.Marker = figureDates{}
	s.panels = []*figurePanel{panel}
	s.keys = v.trendKeys(stretches, limitShown)

	panel.layers(func(a *figureArea) {
		scaled := func(line []figureXY) []figureXY {
			out := make([]figureXY, len(line))
			for i, p := range line {
				out[i] = figureXY{p.x, p.y / scale}
			}
			return out
		}
		for _, s := range stretches {
			band := scaled(s.low)
			for i := len(s.high) - 1; i >= 0; i-- {
				band = append(band, figureXY{s.high[i].x, s.high[i].y / scale})
			}
			a.fill(trendShade, band...)
		}
		a.across(figureZero, 0)
		if limitShown {
			a.across(figureLimit, v.Limit/scale)
			a.across(figureLimit, -v.Limit/scale)
		}
		for _, s := range v.Trend.Segments[1:] {
			a.up(trendBreak, float64(points[s.From].Time.Unix()))
		}
		if v.Advice != nil {
			a.up(trendDue, float64(v.Advice.Due.Unix()))
		}
		for _, s := range stretches {
			known, ahead := s.line, []figureXY(nil)
			for i, p := range s.line {
				if p.x >= float64(last.Unix()) {
					known, ahead = s.line[:i+1], s.line[i:]
					break
				}
			}
			a.line(figureFit, scaled(known)...)
			a.line(figureOther, scaled(ahead)...)
		}
	}, func(a *figureArea) {
		for i, p := range points {
			m := trendMark(p.AsLeft)
			m.Radius *= marks
			if len(points) > trendCrowd {
				m.Radius *= 0.6
			}
			x := float64(p.Time.Unix()) + trendAside(points, i)*(a.plot.X.Max-a.plot.X.Min)
			if figureFinite(p.U) && p.U > 0 {
				a.bar(figureLine(m.Color, figureBarred), x, (p.Value-2*p.U)/scale, (p.Value+2*p.U)/scale)
			}
			a.mark(m, x, p.Value/scale)
		}
	})
	return s
}

// trendAside moves a result as found a little to the left, and one as left to the
// right, where both are of about the same date; as a share of the picture's width.
func trendAside(points []trend.Point, i int) float64 {
	const aside = 0.006
	near := func(k int) bool {
		return k >= 0 && k < len(points) && points[k].AsLeft != points[i].AsLeft && points[k].Time.Sub(points[i].Time).Abs() < 15*24*time.Hour
	}
	switch {
	case !near(i-1) && !near(i+1):
		return 0
	case points[i].AsLeft:
		return aside
	}
	return -aside
}

// stretches are the lines between adjustments with their 95 % bands. A segment that
// tells no drift and has one date has none.
func (v *TrendView) stretches() []trendStretch {
	const parts = 48
	var out []trendStretch
	points := v.Trend.Points
	for i, s := range v.Trend.Segments {
		from, mid, to := points[s.From].Time, points[s.To].Time, points[s.To].Time
		if s.Drift != nil {
			if to = v.outlook(); i+1 < len(v.Trend.Segments) {
				to = points[v.Trend.Segments[i+1].From].Time
			}
		}
		var st trendStretch
		add := func(date time.Time) {
			p, known := v.Trend.In(i, date)
			if !known || !figureFinite(p.Error, p.Low, p.High) {
				return
			}
			x := float64(date.Unix())
			st.line = append(st.line, figureXY{x, p.Error})
			st.low = append(st.low, figureXY{x, p.Low})
			st.high = append(st.high, figureXY{x, p.High})
		}
		for _, piece := range [][2]time.Time{{from, mid}, {mid, to}} {
			width := piece[1].Sub(piece[0])
			for k := range parts {
				if width > 0 {
					add(piece[0].Add(width / parts * time.Duration(k)))
				}
			}
		}
		if add(to); len(st.line) > 1 {
			out = append(out, st)
		}
	}
	return out
}

// trendKeys name what the figure of a history has in it.
func (v *TrendView) trendKeys(stretches []trendStretch, limitShown bool) []figureKey {
	var keys []figureKey
	for _, asLeft := range []bool{false, true} {
		for _, p := range v.Trend.Points {
			if p.AsLeft == asLeft {
				words := map[bool]string{false: "as found, ± U (k = 2)", true: "as left"}[asLeft]
				if asLeft && len(keys) == 0 {
					words += ", ± U (k = 2)"
				}
				keys = append(keys, figureKey{words: words, mark: trendMark(asLeft)})
				break
			}
		}
	}
	if len(stretches) > 0 {
		keys = append(keys, figureKey{words: "line with its 95 % band", line: figureFit, shade: trendShade})
	}
	if v.Trend.Drift != nil {
		keys = append(keys, figureKey{words: "predicted", line: figureOther})
	}
	if len(v.Trend.Segments) > 1 {
		keys = append(keys, figureKey{words: "adjustment", line: trendBreak})
	}
	switch {
	case math.IsNaN(v.Limit):
	case limitShown:
		keys = append(keys, figureKey{words: "limit ±" + uncertain(v.Limit, v.Unit), line: figureLimit})
	default:
		keys = append(keys, figureKey{words: "limit ±" + uncertain(v.Limit, v.Unit) + ", beyond the picture"})
	}
	if v.Advice != nil {
		keys = append(keys, figureKey{words: "due " + v.Advice.Due.Format(time.DateOnly), line: trendDue})
	}
	return keys
}

// figureDates marks an axis of seconds since 1970 with years, or with months where it is short.
type figureDates struct{}

// Ticks are about seven labelled dates.
func (figureDates) Ticks(low, high float64) []plot.Tick {
	const month = 365.25 * 86400 / 12
	months := (high - low) / month
	step, small := 1200, 240 // months
	for _, s := range [][2]int{{1, 1}, {2, 1}, {3, 1}, {6, 1}, {12, 3}, {24, 12}, {60, 12}, {120, 24}, {240, 120}} {
		if months/float64(s[0]) <= 9 {
			step, small = s[0], s[1]
			break
		}
	}
	var ticks []plot.Tick
	start := time.Unix(int64(low), 0).UTC()
	// Month 0 is January of year 0; the first tick is a whole number of small steps from it.
	for m := (start.Year()*12 + int(start.Month()) - 1) / small * small; ; m += small {
		date := time.Date(m/12, time.Month(m%12+1), 1, 0, 0, 0, 0, time.UTC)
		x := float64(date.Unix())
		if x > high {
			return ticks
		}
		if x < low {
			continue
		}
		t := plot.Tick{Value: x}
		if m%step == 0 {
			if t.Label = date.Format("2006"); step < 12 {
				t.Label = date.Format("2006-01")
			}
		}
		ticks = append(ticks, t)
	}
}
