package report

import (
	"fmt"
	"math"
	"strings"
	"time"

	"rungproof/calib"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// ExpectJSON is an expectation for programs.
func ExpectJSON(x *calib.Expectation) ([]byte, error) { return indented(x) }

// Expect is an expectation as tables of 80 columns: two lines a step.
func Expect(p *plan.Plan, x *calib.Expectation) string {
	var b strings.Builder
	if p.Title != "" {
		fmt.Fprintln(&b, fit(p.Title, columns))
	}
	fmt.Fprintf(&b, "%d steps; %s of waiting for the filter, changes of setting not counted\n", len(x.Steps), duration(x.BenchTime))
	fmt.Fprintf(&b, "all voltages rms; U is expanded, for a coverage of %.4g %%\n\n", 100*p.Decision.Coverage)
	fmt.Fprintln(&b, columnsOf([]string{"step", "drop (standard u)", "phase", "one reading's", "wait", "limit"}, expectWidths...))
	fmt.Fprintln(&b, columnsOf([]string{"", "", "", "scatter", "", "(limit/U)"}, expectWidths...))
	for _, s := range x.Steps {
		expectedStep(&b, p, &s)
	}
	b.WriteByte('\n')
	resolves(&b, p, x)
	globalRisks(&b, p, x)
	b.WriteString(findings(x.Findings, math.MaxInt))
	return b.String()
}

// expectedStep writes a step: what is set, then what is to be seen.
func expectedStep(b *strings.Builder, p *plan.Plan, s *calib.ExpectedStep) {
	limit := "not judged"
	if !math.IsNaN(float64(s.Limit)) {
		limit = fmt.Sprintf("%s (%s)", quantity.Format(float64(s.Limit), 3, "V"), quantity.Format(float64(s.Ratio), 2, "1"))
	}
	set := fmt.Sprintf("%s, on %s at %s", stepSettings(p, &p.Steps[s.Index]), displayed(s.Range/p.Detector.ToRMS), percent(s.Share))
	fmt.Fprintln(b, columnsOf([]string{tail(s.ID, 6), fit(set, columns-7)}, 7))
	fmt.Fprintln(b, columnsOf([]string{"", quantity.Concise(s.Drop, s.UExpected, "V"), fmt.Sprintf("%.2f°", math.Round(100*s.PhaseDeg)/100+0),
		quantity.Format(s.SigmaOne, 2, "V"), duration(s.Wait), limit}, expectWidths...))
}

// expectWidths are the columns of an expectation's table.
var expectWidths = []int{7, 22, 10, 15, 10}

// resolves says what the plan can tell, before anyone has measured.
func resolves(b *strings.Builder, p *plan.Plan, x *calib.Expectation) {
	u := func(e calib.Estimate) string {
		if !e.Known {
			return "not determined"
		}
		return uncertain(e.Expanded(), e.Unit)
	}
	fmt.Fprintln(b, "What this plan can resolve (U of what is found)")
	fmt.Fprintf(b, "  gain               %s\n", u(x.Gain))
	if x.Separable {
		fmt.Fprintf(b, "  offset             %s\n", u(x.Offset))
		fmt.Fprintf(b, "  series resistance  %s\n", u(x.SeriesResistance))
		for _, pair := range []string{"gain,offset", "gain,series_resistance", "offset,series_resistance"} {
			if rho, ok := x.Correlation[pair]; ok {
				a, c, _ := strings.Cut(strings.ReplaceAll(pair, "_", " "), ",")
				fmt.Fprintf(b, "  correlation of %s and %s: %.2f\n", a, c, math.Round(100*float64(rho))/100+0)
			}
		}
	} else {
		fmt.Fprintln(b, "  an offset and a series resistance cannot be told apart.")
	}
	for _, g := range x.GainByRange {
		fmt.Fprintf(b, "  gain of the %s range  %s\n", displayed(g.Range/p.Detector.ToRMS), u(g.Estimate))
	}
	if found := finds(x); found != "" {
		fmt.Fprintln(b, strings.Join(wrap("  ", found, "  "), "\n"))
	}
	b.WriteByte('\n')
}

// finds is what a detector or a bench must have for the plan to find it.
func finds(x *calib.Expectation) string {
	var errors []string
	add := func(name string, least float64, unit string) {
		if !math.IsNaN(least) {
			errors = append(errors, fmt.Sprintf("%s of %s", name, uncertain(least, unit)))
		}
	}
	d := &x.Detectable
	add("a gain error", float64(d.Gain), "1")
	add("an offset", float64(d.Offset), x.Offset.Unit)
	add("a series resistance", float64(d.Series), "ohm")
	if len(errors) == 0 {
		return ""
	}
	return fmt.Sprintf("found with %s power at %s false alarm (2.8 u): %s",
		percent(calib.Power), percent(calib.FalseAlarm), strings.Join(errors, ", "))
}

// globalRisks are the largest risks that the rule runs with detectors of the plan's prior.
func globalRisks(b *strings.Builder, p *plan.Plan, x *calib.Expectation) {
	prior := p.Decision.Prior
	if prior == nil {
		return
	}
	var consumer, producer *calib.ExpectedStep
	for i := range x.Steps {
		s := &x.Steps[i]
		if s.Global == nil {
			continue
		}
		if consumer == nil || s.Global.Consumer > consumer.Global.Consumer {
			consumer = s
		}
		if producer == nil || s.Global.Producer > producer.Global.Producer {
			producer = s
		}
	}
	if consumer == nil {
		return
	}
	fmt.Fprintln(b, strings.Join(wrap("", fmt.Sprintf("Risks of the rule (%s), for detectors whose errors have a standard deviation of %s (the prior)",
		ruleName(p), spread(prior)), "  "), "\n"))
	fmt.Fprintf(b, "  accepted though bad (consumer's risk)   %s at most, at %s\n", probability(consumer.Global.Consumer), tail(consumer.ID, 20))
	fmt.Fprintf(b, "  rejected though good (producer's risk)  %s at most, at %s\n\n", probability(producer.Global.Producer), tail(producer.ID, 20))
}

// spread is a prior in words.
func spread(x *plan.Prior) string {
	var parts []string
	if x.Reading > 0 {
		parts = append(parts, quantity.Share(x.Reading, 2)+" of the value applied")
	}
	if x.Range > 0 {
		parts = append(parts, quantity.Share(x.Range, 2)+" of full scale")
	}
	return strings.Join(parts, " plus ")
}

// duration is a time for people: 1.8 s, 4 min 12 s, 1 h 5 min.
func duration(seconds float64) string {
	d := time.Duration(seconds * float64(time.Second))
	switch {
	case d < time.Minute:
		return quantity.Format(seconds, 2, "s")
	case d < time.Hour:
		return fmt.Sprintf("%d min %d s", int(d.Minutes()), int(d.Seconds())%60)
	}
	return fmt.Sprintf("%d h %d min", int(d.Hours()), int(d.Minutes())%60)
}
