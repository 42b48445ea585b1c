package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// AdviceJSON is an advice for programs.
func AdviceJSON(a *calib.Advice) ([]byte, error) { return indented(a) }

// Advice is what to measure next: a table of 80 columns, two lines a step, and the
// block to paste into the plan.
func Advice(a *calib.Advice) string {
	var b strings.Builder
	if a.Plan.Title != "" {
		fmt.Fprintln(&b, fit(a.Plan.Title, columns))
	}
	paragraph := func(text string) { fmt.Fprintln(&b, strings.Join(wrap("", text, "  "), "\n")) }
	paragraph(advised(a))
	b.WriteByte('\n')
	beforeAndAfter(&b, a)
	if len(a.Steps) == 0 {
		b.WriteByte('\n')
		paragraph("Nothing to add. What limits the uncertainty is then the bench: rungproof budget says which part of it.")
		return b.String()
	}
	b.WriteByte('\n')
	fmt.Fprintln(&b, columnsOf([]string{"step", "readings", "time", "U of gain", "of offset", "of series resistance"}, adviseWidths...))
	for i := range a.Steps {
		adviseStep(&b, a.Plan, &a.Steps[i])
	}
	fmt.Fprintf(&b, "\nTo paste at the end of the plan:\n\n%s", a.Block)
	return b.String()
}

// advised is what was found, in words.
func advised(a *calib.Advice) string {
	what := map[string]string{calib.OfGain: "the gain", calib.OfOffset: "the offset", calib.OfSeries: "the series resistance",
		"": "gain, offset and series resistance together"}[a.For]
	given := duration(60 * a.Minutes)
	least := fmt.Sprintf("one is worth it where it makes U smaller by %s a minute or more", percent(calib.LeastReturn))
	if a.For == "" {
		least = strings.Replace(least, "U", "their U, on average,", 1)
	}
	return fmt.Sprintf("What to measure next, for %s: %s in %s of %s, out of %s that the bench allows; %s (%s).",
		what, calib.Counted(len(a.Steps), "step"), duration(a.Time), given, strconv.Itoa(a.Candidates), a.Stopped, least)
}

var adviseWidths = []int{8, 10, 11, 15, 15}

// beforeAndAfter compares the uncertainties.
func beforeAndAfter(b *strings.Builder, a *calib.Advice) {
	row := func(cells ...string) { fmt.Fprintln(b, columnsOf(cells, 21, 18)) }
	row(fmt.Sprintf("U (%.4g %%)", 100*a.Coverage), "now", "then")
	x, y := &a.Before, &a.After
	row("  gain", known(float64(x.Gain), "1"), known(float64(y.Gain), "1"))
	row("  offset", known(float64(x.Offset), x.OffsetUnit), known(float64(y.Offset), y.OffsetUnit))
	row("  series resistance", known(float64(x.Series), "ohm"), known(float64(y.Series), "ohm"))
}

// adviseStep writes a step: what is set, then what it costs and brings.
func adviseStep(b *strings.Builder, p *plan.Plan, s *calib.AdvisedStep) {
	full := s.Range / p.Detector.ToRMS
	set := fmt.Sprintf("%s, on %s at %s", stepSettings(p, &p.Steps[s.Index]), displayed(full), percent(math.Abs(s.Expected)/s.Range))
	fmt.Fprintln(b, columnsOf([]string{s.ID, fit(set, columns-8)}, 8))
	fmt.Fprintln(b, columnsOf([]string{"", strconv.Itoa(s.Repeats), duration(s.Time), known(float64(s.After.Gain), "1"),
		known(float64(s.After.Offset), s.After.OffsetUnit), known(float64(s.After.Series), "ohm")}, adviseWidths...))
}

// known is an uncertainty, or that there is none to be had.
func known(u float64, unit string) string {
	if math.IsNaN(u) {
		return "not determined"
	}
	return uncertain(u, unit)
}
