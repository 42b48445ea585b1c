package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Group of repeated readings: the sum of squares of their deviations from their
// own mean, and its degrees of freedom (one less than there are readings). Where
// the groups are to scatter differently, divide each sum by the predicted
// variance of its readings; the pooled standard deviation is then predicted to be 1.
type Group struct{ SumSquares, DOF float64 }

// Pooled is the standard deviation of a single reading that all groups share.
type Pooled struct {
	SD  float64 // unit of the readings; 0 without degrees of freedom
	DOF float64 // sum of the groups'; 0 means none here: no knowledge of SD, not a perfect one
}

// Pool combines groups (GUM 4.2.4 and H.3.6, note; ISO 5725-2, 7.4.5.1):
//
//	s² = ΣSS/Σν
func Pool(groups []Group) Pooled {
	sum := Group{}
	for _, g := range groups {
		if !(g.SumSquares >= 0 && g.DOF >= 0) {
			panic("uncertainty: a sum of squares and degrees of freedom are not negative")
		}
		sum.SumSquares += g.SumSquares
		sum.DOF += g.DOF
	}
	if sum.DOF == 0 {
		return Pooled{}
	}
	return Pooled{math.Sqrt(sum.SumSquares / sum.DOF), sum.DOF}
}

// ChanceOfMore is the probability that readings of the predicted standard
// deviation scatter as much as these, or more: that of χ² ≥ ν·s²/σ². Below 0.05
// the larger scatter is significant at that level; one-sided, as readings that
// agree too well are no reason for a larger uncertainty.
func (p Pooled) ChanceOfMore(predicted float64) float64 {
	switch {
	case !(predicted >= 0):
		panic("uncertainty: a standard deviation is not negative")
	case p.SD == 0:
		return 1
	case predicted == 0:
		return 0
	}
	ratio := p.SD / predicted
	return distuv.ChiSquared{K: p.DOF}.Survival(p.DOF * ratio * ratio)
}
