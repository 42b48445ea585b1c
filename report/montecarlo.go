package report

import (
	"fmt"
	"strings"

	"rungproof/calib"
	"rungproof/calib/uncertainty"
)

// confirmed says in the summary what Monte Carlo found.
func confirmed(b *strings.Builder, mc *calib.MonteCarlo) {
	if mc == nil {
		return
	}
	fmt.Fprintln(b, strings.Join(wrap("Monte Carlo: ", monteCarloSays(mc), "  "), "\n"))
	for i, o := range mc.Outputs {
		if i == mostRanges && len(mc.Outputs) > mostRanges+1 {
			fmt.Fprintf(b, "  and %d more results: see the report (--out) or --json\n", len(mc.Outputs)-i)
			break
		}
		fmt.Fprintln(b, columnsOf([]string{"  " + fit(o.Name, 20), monteCarloValue(&o), monteCarloInterval(&o, o.Symmetric)}, 23, 22))
	}
	b.WriteByte('\n')
}

// monteCarloSays is the outcome of a Monte Carlo confirmation in a sentence.
func monteCarloSays(mc *calib.MonteCarlo) string {
	how := ""
	switch {
	case mc.Interrupted:
		how = ", interrupted before the end"
	case mc.Adaptive:
		how = ", as many as two steady digits take"
	}
	text := fmt.Sprintf("%s trials of the full estimate (seed %d%s). ", thousands(mc.Trials), mc.Seed, how)
	if mc.Unsettled > 0 {
		text += fmt.Sprintf("%s did not settle and are left out. ", thousands(mc.Unsettled))
	}
	if mc.Validated > 0 {
		return text + fmt.Sprintf("The linear intervals are validated to %s of u (JCGM 101, clause 8).", calib.Counted(mc.Validated, "digit"))
	}
	var not []string
	for _, o := range mc.Outputs {
		if o.Validated == 0 {
			not = append(not, o.Name)
		}
	}
	return text + "The linear interval is not validated (JCGM 101, clause 8) for " + calib.List(not) + "; take the ones below."
}

// monteCarloValue is the mean with the standard uncertainty, both of the trials.
func monteCarloValue(o *calib.MonteCarloOutput) string {
	mean := o.Mean
	if isGain(o) {
		mean--
	}
	return concise(mean, o.U, o.Unit)
}

// monteCarloInterval is an interval of the trials.
func monteCarloInterval(o *calib.MonteCarloOutput, i uncertainty.Interval) string {
	if isGain(o) {
		i.Low, i.High = i.Low-1, i.High-1
	}
	return interval(i.Low, i.High, o.U, o.Unit)
}

// isGain tells whether an output is a gain, which is written as its deviation from 1.
func isGain(o *calib.MonteCarloOutput) bool { return strings.HasPrefix(o.Name, calib.OfGain) }

// thousands is a whole number with its thousands apart.
func thousands(n int) string {
	s := fmt.Sprint(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + " " + s[i:]
	}
	return s
}
