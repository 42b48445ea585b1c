package report

import (
	"fmt"
	"sort"
	"strings"

	"rungproof/calib/decision"
	"rungproof/calib/diagnose"
)

// RehearsalJSON is a rehearsal for programs.
func RehearsalJSON(r *diagnose.Rehearsal) ([]byte, error) { return indented(r) }

// Rehearsal is how often a plan gets it right, as a table.
func Rehearsal(r *diagnose.Rehearsal) string {
	var b strings.Builder
	note := ""
	if r.Interrupted {
		note = ", interrupted before the end"
	}
	fmt.Fprintf(&b, "%s rehearsals (seed %d%s)\n", thousands(r.Trials), r.Seed, note)
	if r.Unfitted > 0 {
		fmt.Fprintf(&b, "%d could not be fitted\n", r.Unfitted)
	}
	share := func(n, of int) string {
		if of == 0 {
			return "-"
		}
		return fmt.Sprintf("%5.1f %%  (%d of %d)", 100*float64(n)/float64(of), n, of)
	}
	b.WriteString("\nVerdict\n")
	for o := decision.Pass; o <= decision.Fail; o++ {
		if n := r.Verdicts[o.String()]; n > 0 {
			fmt.Fprintln(&b, columnsOf([]string{"  " + o.String(), share(n, r.Trials)}, 38))
		}
	}
	if n := r.Verdicts[decision.NotJudged.String()]; n > 0 {
		fmt.Fprintln(&b, columnsOf([]string{"  " + decision.NotJudged.String(), share(n, r.Trials)}, 38))
	}
	b.WriteString("\nSteps, by their true errors\n")
	fmt.Fprintln(&b, columnsOf([]string{"  bad ones that pass (false accepts)", share(r.FalseAccepts, r.Bad)}, 38))
	fmt.Fprintln(&b, columnsOf([]string{"  good ones that fail (false rejects)", share(r.FalseRejects, r.Good)}, 38))
	b.WriteString("\nFirst finding, and how often it is named at all\n")
	for _, k := range byCount(r.First) {
		fmt.Fprintln(&b, columnsOf([]string{"  " + k, share(r.First[k], r.Trials), named(r, k)}, 38, 28))
	}
	b.WriteString("\nIntervals that hold the truth\n")
	for _, k := range []string{"gain", "offset", "series resistance"} {
		fmt.Fprintln(&b, columnsOf([]string{"  " + k, share(r.Held[k], r.Trials-r.Unfitted)}, 38))
	}
	return b.String()
}

func named(r *diagnose.Rehearsal, kind string) string {
	if kind == diagnose.Nothing {
		return ""
	}
	return fmt.Sprintf("%.1f %%", 100*float64(r.Named[kind])/float64(r.Trials))
}

// byCount orders names by their counts, the largest first.
func byCount(count map[string]int) []string {
	names := make([]string, 0, len(count))
	for k := range count {
		names = append(names, k)
	}
	sort.Slice(names, func(i, j int) bool {
		if count[names[i]] != count[names[j]] {
			return count[names[i]] > count[names[j]]
		}
		return names[i] < names[j]
	})
	return names
}
