package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"rungproof/calib"
	"rungproof/calib/quantity"
	"rungproof/calib/uncertainty"
)

// BudgetJSON is a budget for programs.
func BudgetJSON(b *calib.Budget) ([]byte, error) { return indented(b) }

// Budget is an uncertainty budget as a table of 80 columns, the largest first.
func Budget(b *calib.Budget) string {
	var out strings.Builder
	value, unit := b.Value, b.Unit
	name := b.Of
	if unit == "1" && strings.HasPrefix(name, calib.OfGain) {
		value, name = value-1, name+", from 1"
	}
	fmt.Fprintf(&out, "%s: %s\n", name, sized(value, b.Expanded, unit))
	fmt.Fprintf(&out, "u = %s; U = %s (%.4g %%, k = %.3g: %s)\n\n", uncertain(b.U, unit), uncertain(b.Expanded, unit), 100*b.Coverage, b.K, b.Basis)
	fmt.Fprintf(&out, "%-34s%-11s%-13s%-7s%-9s%s\n", "input", "u of it", "distribution", "dof", "u from it", "share")
	rest, small := 0.0, 0
	for _, l := range bySize(b.Lines) {
		if l.Share < 0.0005 {
			rest, small = rest+l.Share, small+1
			continue
		}
		fmt.Fprintf(&out, "%-34s%-11s%-13s%-7s%-9s %s\n", fit(l.Name, 33), uncertain(l.U, l.Unit), l.Shape, freedom(l.DOF),
			uncertain(math.Abs(l.Contribution), unit), sharePercent(l.Share))
	}
	if small > 0 {
		fmt.Fprintf(&out, "%-74s %s\n", fmt.Sprintf("%d more, each under 0.05 %%", small), sharePercent(rest))
	}
	if len(b.Improve) > 0 {
		out.WriteByte('\n')
	}
	for _, i := range b.Improve {
		out.WriteString(strings.Join(wrap("", improvement(b, i), "  "), "\n") + "\n")
	}
	return out.String()
}

// improvement says what one thing better known would do.
func improvement(b *calib.Budget, i calib.Improvement) string {
	to := uncertain(i.To, i.Unit)
	if i.Value != 0 && i.Unit != "1" {
		to += fmt.Sprintf(" (%s)", quantity.Share(i.To/math.Abs(i.Value), 2))
	}
	return fmt.Sprintf("%s known to u = %s instead of %s: U would be %s instead of %s.",
		i.Name, to, uncertain(i.From, i.Unit), uncertain(i.After, b.Unit), uncertain(b.Expanded, b.Unit))
}

// bySize orders lines by their share, the largest first.
func bySize(lines []uncertainty.Line) []uncertainty.Line {
	out := append([]uncertainty.Line(nil), lines...)
	sort.SliceStable(out, func(i, j int) bool { return out[i].Share > out[j].Share })
	return out
}

// sized is a value with its expanded uncertainty.
func sized(x, U float64, unit string) string {
	return sizeOf(calib.Estimate{Value: x, U: U, K: 1, Unit: unit, Known: true})
}

// uncertain is an uncertainty to two digits.
func uncertain(u float64, unit string) string {
	switch unit {
	case "1":
		return quantity.Share(u, 2)
	case "ohm":
		unit = "Ω"
	}
	return quantity.Format(u, 2, unit)
}

func freedom(dof float64) string {
	if dof == 0 || math.IsInf(dof, 1) {
		return "inf"
	}
	return fmt.Sprintf("%.0f", dof)
}

func sharePercent(x float64) string { return fmt.Sprintf("%5.1f %%", 100*x) }
