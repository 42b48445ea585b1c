package report

import (
	"strings"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// evidenceTable is how sure each cause is that the readings show.
func evidenceTable(e *calib.Evaluation) grid {
	all := evidenceOf(e)
	g := grid{Wide: true, Rows: len(all)}
	words := func(head string, of func(ev *calib.Evidence) string) column {
		return texts(head, "words", func(i int) string { return typeset(of(all[i])) })
	}
	number := func(head string, of func(ev *calib.Evidence) string) column {
		return texts(head, "number", func(i int) string { return typeset(of(all[i])) })
	}
	g.addFilled(
		words("cause", evidenceCause),
		number("size ± U", evidenceSize),
		words("whose", func(ev *calib.Evidence) string { return ev.Whose }),
		number("share of the deviation", evidenceShare),
		number("fall of χ²", evidenceFall),
		number("p", func(ev *calib.Evidence) string { return strings.TrimLeft(chance(ev.P), "p= ") }),
		words("strength", func(ev *calib.Evidence) string { return strings.ToLower(ev.Strength) }),
		words("contradicted by", func(ev *calib.Evidence) string { return strings.Join(ev.Contradict, "; ") }),
		words("what decides it", func(ev *calib.Evidence) string { return ev.Decides }),
	)
	g.Notes = []string{"Each cause is tried beside the ones above it. The share is of χ² of a detector and a bench without fault; p is the probability that chance alone makes any variant of the cause explain as much."}
	return g
}

// evidenceFall is a fall of χ², with one decimal where it is small.
func evidenceFall(ev *calib.Evidence) string {
	if ev.Fall < 100 {
		return quantity.Format(ev.Fall, 3, "1")
	}
	return thousands(int(ev.Fall + 0.5))
}
