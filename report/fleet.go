package report

import (
	"bytes"
	_ "embed"
	"encoding/base64"
	"fmt"
	"html/template"
	"slices"
	"strings"
	"time"

	"gonum.org/v1/plot"

	"rungproof/calib/decision"
)

//go:embed fleet.tmpl
var fleetSource string

var fleetTemplate = template.Must(template.New("fleet").Parse(fleetSource))

// fleetCard is one detector on the overview page.
type fleetCard struct {
	Serial, Last, Drift, Due, Alt string
	Verdict                       mark
	Picture                       template.URL
}

// fleetDPI is the resolution of the small pictures, which are shown at half their size.
const fleetDPI = 110

// fleetPage is one page, without network or script, with a small figure of each
// detector, all over the same time; the one due first comes first.
func fleetPage(views []*TrendView) ([]byte, error) {
	sorted := slices.Clone(views)
	slices.SortStableFunc(sorted, func(a, b *TrendView) int {
		switch {
		case a.Advice == nil && b.Advice == nil:
			return strings.Compare(a.Serial, b.Serial)
		case a.Advice == nil:
			return 1
		case b.Advice == nil:
			return -1
		}
		return a.Advice.Due.Compare(b.Advice.Due)
	})
	from, to := sorted[0].span()
	for _, v := range sorted[1:] {
		f, t := v.span()
		if f.Before(from) {
			from = f
		}
		if t.After(to) {
			to = t
		}
	}
	sheets := make([]*figureSheet, len(sorted))
	for i, v := range sorted {
		sheets[i] = trendFigure(v, from, to, 1.5)
		sheets[i].title, sheets[i].keys, sheets[i].height = v.subject(), nil, 2.7*72
	}
	figures, err := drawFigures(sheets, plot.DefaultTextHandler, fleetDPI)
	if err != nil {
		return nil, err
	}
	cards := make([]fleetCard, len(sorted))
	for i, v := range sorted {
		cards[i] = v.card()
		cards[i].Picture = template.URL("data:image/png;base64," + base64.StdEncoding.EncodeToString(figures[i].PNG))
	}
	var b bytes.Buffer
	if err := fleetTemplate.Execute(&b, cards); err != nil {
		return nil, fmt.Errorf("the overview page: %w", err)
	}
	return b.Bytes(), nil
}

// card says in words what the small figure shows.
func (v *TrendView) card() fleetCard {
	points := v.Trend.Points
	last := points[len(points)-1]
	state := "as found"
	if last.AsLeft {
		state = "as left"
	}
	c := fleetCard{Serial: v.Serial, Alt: "History of " + v.subject(),
		Last:  typeset(fmt.Sprintf("%s on %s, %s", sized(last.Value, 2*last.U, v.Unit), last.Time.Format(time.DateOnly), state)),
		Drift: "none can be told yet", Due: "no limit stated"}
	if d := v.Trend.Drift; d != nil {
		c.Drift = typeset(sized(d.PerYear, (d.High-d.Low)/2, v.Unit) + " a year")
		if !d.Significant() {
			c.Drift += ", not beyond scatter"
		}
	}
	if v.Advice != nil {
		c.Due = v.Advice.Due.Format(time.DateOnly) + ", by the " + string(v.Advice.Decides)
	}
	for i, p := range v.History {
		if p.Entry == last.Entry && i < len(v.Verdicts) {
			c.Verdict = verdictMark(v.Verdicts[i])
		}
	}
	return c
}

// verdictMark is the mark of an outcome by its word.
func verdictMark(word string) mark {
	for o := decision.NotJudged; o <= decision.Fail; o++ {
		if o.String() == word {
			return markOf(o)
		}
	}
	return mark{Word: word, Symbol: "–", Class: "not-judged"}
}
