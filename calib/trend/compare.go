package trend

import (
	"fmt"
	"math"
)

// Comparison is of two consecutive results between the same adjustments.
type Comparison struct {
	From, To   Point
	Difference float64 // To less From
	U          float64 // its expanded uncertainty, k = 2
	En         float64 // Difference/U
}

// Agree tells whether the results agree, |E_n| ≤ 1.
func (c Comparison) Agree() bool { return math.Abs(c.En) <= 1 }

// Compare gives the normalised error of each result against the one before:
//
//	E_n = (x₂ − x₁)/√(U₁² + U₂²)    ISO 13528, ISO/IEC 17043; U with k = 2
//
// Where both name the same standards their common parts cancel in the difference, but
// for what they differ by: (U₁c − U₂c)² stands in their place. Results on the two sides of
// an adjustment are not compared: they are meant to differ.
func Compare(h History) ([]Comparison, error) {
	points, err := h.ordered()
	if err != nil {
		return nil, err
	}
	if points[0].U == 0 {
		return nil, fmt.Errorf("no uncertainties are stated for %s: E_n compares by them", count(len(points), "result"))
	}
	var out []Comparison
	segment := segments(points)
	for i := 1; i < len(points); i++ {
		if segment[i] != segment[i-1] {
			continue
		}
		a, b := points[i-1], points[i]
		u := math.Hypot(a.U, b.U)
		if a.Standards == b.Standards {
			u = math.Hypot(math.Hypot(a.independent(), b.independent()), a.common()-b.common())
		}
		d := b.Value - a.Value
		out = append(out, Comparison{From: a, To: b, Difference: d, U: 2 * u, En: d / (2 * u)})
	}
	return out, nil
}
