package report

import (
	"fmt"
	"strings"

	"rungproof/calib/ledger"
	"rungproof/calib/quantity"
)

// LogJSON is entries of the log for programs.
func LogJSON(v any) ([]byte, error) { return indented(v) }

// LogList is a table of entries, a line each.
func LogList(entries []ledger.Entry) string {
	if len(entries) == 0 {
		return "No entries.\n"
	}
	var b strings.Builder
	widths := []int{6, 12, 13, 10, 20}
	fmt.Fprintln(&b, columnsOf([]string{"entry", "date", "serial", "condition", "gain, from 1 (u)", "verdict"}, widths...))
	for _, e := range entries {
		verdict := e.Verdict
		if e.SupersededBy != 0 {
			verdict = fmt.Sprintf("superseded by %d", e.SupersededBy)
		}
		fmt.Fprintln(&b, columnsOf([]string{fmt.Sprint(e.ID), e.Date, tail(e.Serial, 12), e.Condition, logGain(&e), verdict}, widths...))
	}
	return b.String()
}

func logGain(e *ledger.Entry) string {
	if e.Gain == nil {
		return fmt.Sprintf("%d ranges", len(e.Ranges))
	}
	return concise(e.Gain.Value-1, e.Gain.U, "1")
}

// LogEntry is one entry for a person.
func LogEntry(e *ledger.Entry) string {
	var b strings.Builder
	line := func(name, value string) {
		if value != "" {
			fmt.Fprintf(&b, "%-20s%s\n", name, value)
		}
	}
	line("entry", fmt.Sprint(e.ID))
	line("detector", e.Serial)
	line("measured", strings.TrimSpace(e.Date+" "+e.Condition))
	line("verdict", e.Verdict)
	if e.Temperature != nil {
		line("temperature", fmt.Sprintf("%.4g °C", *e.Temperature))
	}
	value := func(name string, p *ledger.Parameter, from float64, unit string) {
		if p != nil {
			line(name, sized(p.Value-from, p.K*p.U, unit))
		}
	}
	value("gain, from 1", e.Gain, 1, "1")
	for i := range e.Ranges {
		value("  on "+displayed(e.Ranges[i].Range), &e.Ranges[i].Parameter, 1, "1")
	}
	value("offset", e.Offset, 0, "V")
	value("series resistance", e.SeriesResistance, 0, "ohm")
	line("standards", strings.Join(e.Standards, ", "))
	line("note", e.Note)
	if e.Supersedes != 0 {
		line("supersedes", fmt.Sprintf("%d: %s", e.Supersedes, e.Reason))
	}
	if e.SupersededBy != 0 {
		line("superseded by", fmt.Sprint(e.SupersededBy))
	}
	line("logged", e.Logged.Format("2006-01-02 15:04:05 MST")+" by "+e.Who+", "+e.Software)
	line("stored", fmt.Sprintf("plan %d, readings %d, result %d bytes", len(e.Plan), len(e.Readings), len(e.Result)))
	line("SHA-256", e.Hash.String())
	return b.String()
}

// LogCheck is what a check of the log came to.
func LogCheck(r *ledger.Report, place string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: %d entries, %s of plans, readings and results\n", place, r.Entries, quantity.Format(float64(r.Bytes), 3, "B"))
	if r.Sound() {
		fmt.Fprintf(&b, "sound: nothing was altered, added or removed\nlast entry %d, SHA-256 %s\n", r.Last, r.Head)
		return b.String()
	}
	for _, f := range r.Findings {
		for _, l := range wrap(string(f.Kind)+": ", f.Text, "  ") {
			fmt.Fprintln(&b, l)
		}
	}
	return b.String()
}
