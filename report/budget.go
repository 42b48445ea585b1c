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

// leastShare is the share of the variance that a line needs to be listed.
const leastShare = 0.0005

// Budget is an uncertainty budget as a table of 80 columns, the largest first.
func Budget(b *calib.Budget) string {
	var out strings.Builder
	paragraph := func(text string) { fmt.Fprintln(&out, strings.Join(wrap("", text, "  "), "\n")) }
	m := measureOf(b)
	paragraph(budgetResult(b))
	paragraph(fmt.Sprintf("u = %s; U = %s (%.4g %%, k = %.3g: %s)", m.of(b.U), m.of(b.Expanded), 100*b.Coverage, b.K, b.Basis))
	out.WriteByte('\n')
	row := func(name, u, shape, dof, contribution, share string) {
		if len([]rune(name)) >= budgetWidths[0] {
			fmt.Fprintln(&out, fit(name, columns))
			name = ""
		}
		fmt.Fprintf(&out, "%s%7s\n", columnsOf([]string{name, u, shape, dof, contribution, ""}, budgetWidths...), share)
	}
	row("input", "u of it", "distribution", "dof", "u from it", "share")
	lines, rest := largest(b, leastShare, math.MaxInt)
	for _, l := range lines {
		row(l.Name, uncertain(l.U, l.Unit), l.Shape.String(), freedom(l.DOF), m.of(math.Abs(l.Contribution)), sharePercent(l.Share))
	}
	if rest.count > 0 {
		row(rest.says(leastShare), "", "", "", rest.gives(m), sharePercent(rest.share))
	}
	if len(b.Improve) > 0 {
		out.WriteByte('\n')
	}
	for _, i := range b.Improve {
		paragraph(improvement(b, i))
	}
	return out.String()
}

// budgetWidths are the columns of a budget's table, but the last.
var budgetWidths = []int{30, 11, 14, 6, 12}

// budgetResult is the result that a budget is of, a gain as its deviation from 1.
func budgetResult(b *calib.Budget) string {
	if b.Unit == "1" && strings.HasPrefix(b.Of, calib.OfGain) {
		return b.Of + ", from 1: " + sized(b.Value-1, b.Expanded, b.Unit)
	}
	return b.Of + ": " + sized(b.Value, b.Expanded, b.Unit)
}

// improvement says what one thing better known would do.
func improvement(b *calib.Budget, i calib.Improvement) string {
	input := measureFor(i.From, i.Unit)
	to := input.of(i.To)
	if i.Value != 0 && i.Unit != "1" {
		to += fmt.Sprintf(" (%s)", quantity.Share(i.To/math.Abs(i.Value), 2))
	}
	return fmt.Sprintf("%s known to u = %s instead of %s: %s.", i.Name, to, input.of(i.From), expandedAfter(b, i))
}

// expandedAfter is what an improvement makes of the expanded uncertainty.
func expandedAfter(b *calib.Budget, i calib.Improvement) string {
	m := measureOf(b)
	after, now := m.of(i.After), m.of(b.Expanded)
	if after == now {
		return "U would stay at " + now
	}
	return fmt.Sprintf("U would be %s instead of %s", after, now)
}

// others are the small lines of a budget, taken together.
type others struct {
	count    int
	share, u float64
}

func (o others) says(least float64) string {
	if o.count == 1 {
		return fmt.Sprintf("1 more, under %.2g %%", 100*least)
	}
	return fmt.Sprintf("%d more, each under %.2g %%", o.count, 100*least)
}

// gives is the standard uncertainty that they give together, where it shows.
func (o others) gives(m measure) string {
	if o.share < leastShare {
		return ""
	}
	return m.of(o.u)
}

// largest are the lines of a budget by their share, the largest first. Those under
// a share, or more than so many, are summed, unless it is one that shows.
func largest(b *calib.Budget, least float64, most int) (lines []uncertainty.Line, rest others) {
	all := append([]uncertainty.Line(nil), b.Lines...)
	sort.SliceStable(all, func(i, j int) bool { return all[i].Share > all[j].Share })
	n := sort.Search(len(all), func(i int) bool { return all[i].Share < least })
	if n = min(n, most); n == len(all)-1 && all[n].Share >= leastShare {
		n++
	}
	for _, l := range all[n:] {
		rest.count++
		rest.share += l.Share
	}
	rest.u = b.U * math.Sqrt(rest.share)
	return all[:n], rest
}

// measure is a unit that uncertainties stand in beside one another.
type measure struct {
	scale float64
	unit  string
}

// measureFor is the unit that suits the largest of them.
func measureFor(largest float64, unit string) measure {
	scale, unit := scaleOf(largest, unit)
	return measure{scale, unit}
}

// measureOf is the unit of a budget.
func measureOf(b *calib.Budget) measure { return measureFor(b.Expanded, b.Unit) }

// of is an uncertainty to two digits.
func (m measure) of(u float64) string {
	return strings.TrimRight(quantity.Format(u/m.scale, 2, "1")+" "+m.unit, " ")
}

// sized is a value with its expanded uncertainty.
func sized(x, U float64, unit string) string {
	return sizeOf(calib.Estimate{Value: x, U: U, K: 1, Unit: unit, Known: true})
}

// uncertain is an uncertainty to two digits in the unit that suits it.
func uncertain(u float64, unit string) string { return measureFor(u, unit).of(u) }

func freedom(dof float64) string {
	if dof == 0 || math.IsInf(dof, 1) {
		return "inf"
	}
	return fmt.Sprintf("%.0f", dof)
}

func sharePercent(x float64) string { return fmt.Sprintf("%.1f %%", 100*x) }
