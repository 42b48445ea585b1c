package report

import (
	"fmt"
	"math"
	"os"
	"strings"
	"time"

	"rungproof/calib/trend"
)

// TrendView is the history of one result of a detector, and what follows from it.
type TrendView struct {
	Serial   string             `json:"serial"`
	Of       string             `json:"of"`   // "gain", "offset" or a range
	Unit     string             `json:"unit"` // "1" or "V"
	Limit    float64            `json:"-"`    // of the error; NaN where the plan limits nothing
	History  trend.History      `json:"history"`
	Verdicts []string           `json:"verdicts"`
	Compared []trend.Comparison `json:"compared"`
	Trend    *trend.Trend       `json:"trend"`
	Reach    *trend.Reach       `json:"reach,omitempty"`
	Advice   *trend.Advice      `json:"advice,omitempty"`
}

// TrendJSON is histories for programs.
func TrendJSON(v []*TrendView) ([]byte, error) { return indented(v) }

// Trend is a history for a person.
func Trend(v *TrendView) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s, %s\n\n", v.Serial, v.subject())
	widths := []int{7, 12, 11, 26, 10}
	fmt.Fprintln(&b, columnsOf([]string{"entry", "date", "", "error ± U (k = 2)", "E_n", "verdict"}, widths...))
	en := map[int64]string{}
	for _, c := range v.Compared {
		mark := ""
		if !c.Agree() {
			mark = " !"
		}
		en[c.To.Entry] = fmt.Sprintf("%.2f%s", c.En, mark)
	}
	for i, p := range v.History {
		state := "as found"
		if p.AsLeft {
			state = "as left"
		}
		fmt.Fprintln(&b, columnsOf([]string{fmt.Sprint(p.Entry), p.Time.Format(time.DateOnly), state, sized(p.Value, 2*p.U, v.Unit), en[p.Entry], v.Verdicts[i]}, widths...))
	}
	b.WriteByte('\n')
	for _, text := range v.sentences() {
		fmt.Fprintln(&b, strings.Join(wrap("", text, "  "), "\n"))
	}
	b.WriteByte('\n')
	return b.String()
}

func (v *TrendView) subject() string {
	switch v.Of {
	case "gain":
		return "its gain, from 1"
	case "offset":
		return "its offset"
	}
	return "the gain of its " + v.Of + " range, from 1"
}

// sentences say what the history shows.
func (v *TrendView) sentences() []string {
	var out []string
	if d := v.Trend.Drift; d != nil {
		text := fmt.Sprintf("Drift: %s a year (95 %%: from %s to %s).", sized(d.PerYear, (d.High-d.Low)/2, v.Unit), uncertainSigned(d.Low, v.Unit), uncertainSigned(d.High, v.Unit))
		if !d.Significant() {
			text += " That is not beyond what scatter makes."
		} else {
			text += fmt.Sprintf(" It is beyond scatter (%s).", chance(d.P))
		}
		out = append(out, text)
	}
	if v.Trend.Assumption != "" {
		out = append(out, v.Trend.Assumption)
	}
	if r := v.Reach; r != nil {
		switch {
		case r.Safe.IsZero():
			out = append(out, fmt.Sprintf("The error stays within its limit of %s for as long as can be foreseen.", uncertain(v.Limit, v.Unit)))
		default:
			text := fmt.Sprintf("With %.0f %% probability the error is within its limit of %s up to %s", 100*r.Probability, uncertain(v.Limit, v.Unit), r.Safe.Format(time.DateOnly))
			if !r.Expected.IsZero() {
				text += "; it is expected to meet it on " + r.Expected.Format(time.DateOnly)
			}
			out = append(out, text+".")
		}
	}
	if a := v.Advice; a != nil {
		out = append(out, fmt.Sprintf("Next calibration: %s.", a.Due.Format(time.DateOnly))+" "+a.Text)
	}
	if a := v.Advice; a != nil {
		if p, ok := v.Trend.At(a.Due); ok {
			out = append(out, fmt.Sprintf("A calibration on that day should find an error between %s and %s (control limits, 99.73 %%).",
				uncertainSigned(p.ControlLow, v.Unit), uncertainSigned(p.ControlHigh, v.Unit)))
		}
	}
	if math.IsNaN(v.Limit) {
		out = append(out, "The stored plan limits nothing here (or none is stored): no date can be given.")
	}
	return out
}

func uncertainSigned(x float64, unit string) string {
	if x < 0 {
		return "-" + uncertain(-x, unit)
	}
	return uncertain(x, unit)
}

// Due lists the detectors by the date on which they are due.
func Due(views []*TrendView, today time.Time) string {
	if len(views) == 0 {
		return "None is due.\n"
	}
	var b strings.Builder
	sorted := append([]*TrendView(nil), views...)
	for i := range sorted {
		for j := i; j > 0 && sorted[j].Advice.Due.Before(sorted[j-1].Advice.Due); j-- {
			sorted[j], sorted[j-1] = sorted[j-1], sorted[j]
		}
	}
	widths := []int{12, 14, 14}
	fmt.Fprintln(&b, columnsOf([]string{"due", "serial", "last", "decided by"}, widths...))
	for _, v := range sorted {
		last := v.History[len(v.History)-1].Time
		state := ""
		if v.Advice.Due.Before(today) {
			state = ", overdue"
		}
		fmt.Fprintln(&b, columnsOf([]string{v.Advice.Due.Format(time.DateOnly), tail(v.Serial, 13), last.Format(time.DateOnly), string(v.Advice.Decides) + state}, widths...))
		for _, l := range wrap("  ", v.Advice.Text, "  ") {
			fmt.Fprintln(&b, l)
		}
	}
	return b.String()
}

// WriteTrends writes a figure for each history, and an overview page of all.
func WriteTrends(dir string, views []*TrendView) error {
	files, err := trendFiles(views)
	if err != nil {
		return err
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return fmt.Errorf("the figures cannot be written: %w", err)
	}
	return writeAll(dir, files)
}
