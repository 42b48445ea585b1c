// Package report puts an evaluation before people: a text summary, the tables of
// an expectation, figures, an HTML page, and the files of a report.
package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/quantity"
)

// Width of a terminal's line, and the most lines that a summary has.
const (
	columns  = 80
	maxLines = 40
)

// Text is the summary of an evaluation: at most 40 lines of 80 columns. Colour
// is a help, never the only sign.
func Text(e *calib.Evaluation, colour bool) string {
	var b strings.Builder
	head(&b, e, colour)
	parameters(&b, e)
	ranges(&b, e)
	deciding(&b, e)
	confirmed(&b, e.Result.MonteCarlo)
	left := maxLines - strings.Count(b.String(), "\n")
	b.WriteString(findings(e.Result.Findings, left))
	return b.String()
}

// head is the verdict and what it is about.
func head(b *strings.Builder, e *calib.Evaluation, colour bool) {
	p, r := e.Plan, e.Result
	verdict := strings.ToUpper(r.Verdict.String())
	if colour {
		verdict = "\x1b[1;" + verdictColour[r.Verdict] + "m" + verdict + "\x1b[0m"
	}
	fmt.Fprintln(b, verdict+"  "+fit(decisive(e), columns-2-len(r.Verdict.String())))
	about := []string{p.Title}
	if p.Detector.Serial != "" && !strings.Contains(p.Title, p.Detector.Serial) {
		about = append(about, "serial "+p.Detector.Serial)
	}
	if !p.Date.IsZero() {
		about = append(about, p.Date.Format("2006-01-02"))
	}
	if p.Condition != "" {
		about = append(about, p.Condition)
	}
	taken := 0
	for _, s := range r.Steps {
		taken += s.Repeats
	}
	fmt.Fprintln(b, fit(strings.Join(about, ", "), columns))
	fmt.Fprintf(b, "%d steps, %d readings, all voltages rms\n\n", len(r.Steps), taken)
}

// verdictColour is an ANSI colour for each outcome.
var verdictColour = map[decision.Outcome]string{
	decision.NotJudged: "37", decision.Pass: "34", decision.ConditionalPass: "36", decision.ConditionalFail: "33", decision.Fail: "31",
}

// fit cuts a line to a width.
func fit(s string, width int) string {
	if r := []rune(s); len(r) > width {
		return string(r[:width-1]) + "…"
	}
	return s
}

// decisive says in a line how the steps came out.
func decisive(e *calib.Evaluation) string {
	count := map[decision.Outcome]int{}
	for _, s := range e.Result.Steps {
		count[s.Outcome]++
	}
	var parts []string
	for o := decision.Fail; o >= decision.NotJudged; o-- {
		if count[o] > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", count[o], o))
		}
	}
	if n := len(e.Result.Missing); n > 0 {
		parts = append(parts, fmt.Sprintf("%d without a reading", n))
	}
	return fmt.Sprintf("of %d steps: %s", len(e.Plan.Steps), strings.Join(parts, ", "))
}

// parameters are gain, offset and series resistance, and whose they are.
func parameters(b *strings.Builder, e *calib.Evaluation) {
	r := e.Result
	f := &r.Fit
	fmt.Fprintf(b, "%-20s%-38s%s\n", "", fmt.Sprintf("value ± U (%.4g %% coverage)", 100*r.Coverage), "whose")
	line := func(name, value, whose string) { fmt.Fprintf(b, "%-20s%-38s%s\n", name, value, whose) }
	if r.ByRange.Used {
		line("gain, from 1", "one a range, below", "the detector's")
	} else if f.Gain.Known {
		line("gain, from 1", gainDeviation(f.Gain), "the detector's")
	}
	if offset, series := r.Deciding(); r.Separable() {
		line("offset", sizeOf(offset), "the detector's")
		if f.OffsetQuadrature != nil {
			line("offset, quadrature", sizeOf(*f.OffsetQuadrature), "the detector's")
		}
		line("series resistance", sizeOf(series), "the bench's")
	} else if f.Intercept != nil && f.AsSeries != nil {
		line("either an offset", sizeOf(*f.Intercept), "the detector's")
		line("or in series", sizeOf(*f.AsSeries), "the bench's")
	}
	b.WriteByte('\n')
}

// ranges are the worst step of each range, and the range's gain where one gain is
// not enough or the plan limits it.
func ranges(b *strings.Builder, e *calib.Evaluation) {
	r := e.Result
	worst := map[float64]*calib.StepResult{}
	var scales []float64
	for i := range r.Steps {
		s := &r.Steps[i]
		if w := worst[s.Range]; w == nil {
			scales = append(scales, s.Range)
			worst[s.Range] = s
		} else if worse(s, w) {
			worst[s.Range] = s
		}
	}
	sort.Sort(sort.Reverse(sort.Float64Slice(scales)))
	row := func(cells ...string) { fmt.Fprintln(b, strings.TrimRight(columnsOf(cells, 10, 9, 25, 19), " ")) }
	row("range", "worst at", "error ± U", "limit", "outcome")
	for i, full := range scales {
		if i == mostRanges && len(scales) > mostRanges+1 {
			fmt.Fprintf(b, "and %d more ranges\n", len(scales)-mostRanges)
			break
		}
		s := worst[full]
		row(displayed(full/e.Plan.Detector.ToRMS), tail(s.ID, 9), quantity.PlusMinus(float64(s.Error), float64(s.U), "V"),
			against(quantity.Format(float64(s.Limit), 3, "V"), float64(s.Error), float64(s.Limit)), s.Outcome.String())
	}
	shown := 0
	for i := range r.ByRange.Gain {
		g := r.ByRange.Gain[len(r.ByRange.Gain)-1-i]
		if g.Outcome == decision.NotJudged && !r.ByRange.Used {
			continue
		}
		if shown++; shown > mostRanges {
			fmt.Fprintln(b, "and more gains: see the report (--out) or --json")
			break
		}
		row(displayed(g.Range/e.Plan.Detector.ToRMS), "its gain", gainDeviation(g.Estimate), against(quantity.Share(g.Limit, 2), g.Value-1, g.Limit), g.Outcome.String())
	}
}

// mostRanges is how many ranges, and gains of ranges, the summary shows.
const mostRanges = 9

// against is a limit and the share of it that a deviation takes.
func against(limit string, deviation, bound float64) string {
	if math.IsNaN(bound) {
		return "none"
	}
	share := math.Abs(deviation) / bound
	if share > 10 {
		return limit + " (>1000 %)"
	}
	return limit + " (" + percent(share) + ")"
}

// columnsOf lays cells out in columns, with a space at least between them.
func columnsOf(cells []string, widths ...int) string {
	var b strings.Builder
	end := 0
	for i, c := range cells {
		b.WriteString(c)
		if i == len(cells)-1 {
			break
		}
		end += widths[i]
		pad := max(1, end-len([]rune(b.String())))
		b.WriteString(strings.Repeat(" ", pad))
	}
	return b.String()
}

// tail cuts a name at its front, where it is too long: steps differ at the end.
func tail(s string, width int) string {
	if r := []rune(s); len(r) > width {
		return "…" + string(r[len(r)-width+1:])
	}
	return s
}

// displayed is a full-scale value as the detector's panel has it.
func displayed(full float64) string { return quantity.Plain(full, "V") }

func percent(x float64) string { return fmt.Sprintf("%.0f %%", 100*x) }

// worse orders steps by outcome, then by the share of the limit that the error takes.
func worse(a, b *calib.StepResult) bool {
	if a.Outcome != b.Outcome {
		return a.Outcome > b.Outcome
	}
	return math.Abs(float64(a.Error))/float64(a.Limit) > math.Abs(float64(b.Error))/float64(b.Limit)
}

// findings are the findings in at most so many lines.
func findings(all []calib.Finding, lines int) string {
	if len(all) == 0 {
		return "No findings.\n"
	}
	var b strings.Builder
	used := 0
	for i, f := range all {
		block := wrap(f.Kind+": ", f.Text, "  ")
		if f.Do != "" {
			block = append(block, wrap("  -> ", f.Do, "     ")...)
		}
		// One line is kept for saying how many more there are.
		if keep := min(1, len(all)-1-i); used+len(block)+keep > lines {
			fmt.Fprintf(&b, "%s more: see the report (--out) or --json\n", calib.Counted(len(all)-i, "finding"))
			break
		}
		used += len(block)
		b.WriteString(strings.Join(block, "\n") + "\n")
	}
	return b.String()
}

// wrap breaks a text into lines of 80 columns, the first with a lead, the others indented.
func wrap(lead, text, indent string) []string {
	var lines []string
	line := lead
	empty := true
	for _, word := range glued(strings.Fields(text)) {
		if !empty && len([]rune(line))+1+len([]rune(word)) > columns {
			lines = append(lines, line)
			line, empty = indent, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	return append(lines, line)
}

// glued keeps a number and its unit in one word.
func glued(words []string) []string {
	var out []string
	for i, word := range words {
		if i > 0 && endsNumber(words[i-1]) && len([]rune(word)) <= 3 {
			out[len(out)-1] += " " + word
			continue
		}
		out = append(out, word)
	}
	return out
}

func endsNumber(word string) bool {
	return strings.Trim(word, "0123456789.)") != word && strings.Trim(word, "(-0123456789.)") == ""
}
