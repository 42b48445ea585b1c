package report

import (
	"fmt"
	"math"
	"strings"

	"rungproof/calib"
)

// budgetTables are the uncertainty budgets, each with its sums and with what to improve first.
func budgetTables(e *calib.Evaluation) []grid {
	var out []grid
	for _, b := range e.Result.Budgets {
		out = append(out, budgetTable(b))
	}
	return out
}

func budgetTable(b *calib.Budget) grid {
	lines, rest := largest(b, leastShare, math.MaxInt)
	m := measureOf(b)
	var rows [][6]string
	for _, l := range lines {
		rows = append(rows, [6]string{l.Name, uncertain(l.U, l.Unit), l.Shape.String(), unlimited(freedom(l.DOF)), m.of(math.Abs(l.Contribution)), sharePercent(l.Share)})
	}
	if rest.count > 0 {
		rows = append(rows, [6]string{rest.says(leastShare), "", "", "", rest.gives(m), sharePercent(rest.share)})
	}
	rows = append(rows,
		[6]string{"combined, u", "", "", unlimited(freedom(math.Floor(b.DOF))), m.of(b.U), sharePercent(1)},
		[6]string{fmt.Sprintf("expanded, U (%.4g %%)", 100*b.Coverage), "k = " + factor(b.K), b.Basis, "", m.of(b.Expanded), ""})
	g := grid{Caption: typeset(firstUpper(budgetResult(b))), Rows: len(rows), Sums: 2}
	for i, head := range []string{"input", "standard uncertainty", "distribution", "degrees of freedom", "contribution to u", "share of the variance"} {
		class := "number"
		if i == 0 || i == 2 {
			class = "words"
		}
		g.Columns = append(g.Columns, texts(head, class, func(row int) string { return typeset(rows[row][i]) }))
	}
	for k, i := range b.Improve {
		lead := ""
		if k == 0 {
			lead = "Improve first: "
		}
		g.Notes = append(g.Notes, typeset(lead+improvement(b, i)))
	}
	return g
}

// factor is a coverage factor.
func factor(k float64) string { return fmt.Sprintf("%.2f", k) }

// unlimited writes infinitely many degrees of freedom as the sign.
func unlimited(dof string) string { return strings.Replace(dof, "inf", "∞", 1) }

// firstUpper makes the first letter, one of the 26, a capital.
func firstUpper(s string) string { return strings.ToUpper(s[:1]) + s[1:] }
