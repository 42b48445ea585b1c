package report

import (
	"fmt"
	"strings"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// DecidingJSON is for programs what tells two causes apart.
func DecidingJSON(d *diagnose.Deciding) ([]byte, error) { return indented(d) }

// Deciding is what tells the cause that is ranked first from its nearest rival.
func Deciding(p *plan.Plan, d *diagnose.Deciding) string {
	var b strings.Builder
	para := func(text string) { fmt.Fprintln(&b, strings.Join(wrap("", text, "  "), "\n")) }
	switch {
	case d.First == diagnose.Nothing:
		para("The readings show no cause: there is nothing to decide.")
		return b.String()
	case d.Rival == "":
		para(fmt.Sprintf("The readings speak for %s, and no other cause explains as much. To be surer: %s", d.First, d.Words))
		return b.String()
	}
	para(fmt.Sprintf("Between %s and %s:", d.First, d.Rival))
	if len(d.Steps) == 0 {
		para("no step that [bench] allows tells them apart.")
	}
	for _, s := range d.Steps {
		para(fmt.Sprintf("%s, on %s, %s (%s): parts them by %s standard deviations.", stepSettings(s.Plan, &s.Step),
			displayed(s.Plan.Detector.Ranges[s.Step.Range]/p.Detector.ToRMS), calib.Counted(s.Readings, "reading"), duration(s.Time), quantity.Format(s.Apart, 2, "1")))
	}
	para("What decides: " + d.Words)
	if len(d.Blocks) > 0 {
		b.WriteString("\nTo paste at the end of the plan:\n\n" + strings.Join(d.Blocks, "\n"))
	}
	return b.String()
}
