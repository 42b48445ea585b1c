package decision

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/stat/distuv"
)

// knowledge is what measuring adds to a prior N(μ, σ²). The reading y, of standard
// uncertainty u, will be drawn from N(μ, σ² + u²); once it is there, the true error is
// N(μ + g·(y − μ), g·u²) with g = σ²/(σ² + u²).
type knowledge struct {
	reading   distuv.Normal
	gain      float64 // g
	u         float64 // √g·u
	tolerance Interval
	breaks    []float64 // readings between which the integrand is smooth, ascending
}

// Panels of three standard deviations are short enough for 20 points of the
// Legendre rule to leave no error that a float64 shows.
const (
	panel  = 3
	points = 20
	turn   = 9  // standard deviations to where Φ is 1 in a float64
	reach  = 39 // to where the normal density is 0
)

func learn(prior Prior, u float64, tolerance Interval) knowledge {
	if !(prior.SD > 0) {
		panic(fmt.Sprintf("decision: a prior with a standard deviation of %g; want one above 0", prior.SD))
	}
	sd := math.Hypot(prior.SD, u)
	share := prior.SD / sd
	k := knowledge{reading: distuv.Normal{Mu: prior.Mean, Sigma: sd}, gain: share * share, u: share * u, tolerance: tolerance}
	for z := -reach; z <= reach; z += panel {
		k.breaks = append(k.breaks, prior.Mean+float64(z)*sd)
	}
	// p_c turns from 1 to 0 about the readings that put the true error on a limit.
	for _, limit := range []float64{tolerance.Lower, tolerance.Upper} {
		for z := -turn; z <= turn; z += panel {
			k.breaks = append(k.breaks, prior.Mean+(limit-prior.Mean+float64(z)*k.u)/k.gain)
		}
	}
	slices.Sort(k.breaks)
	return k
}

// average is the integral of a specific risk, weighted with the density of the readings, from lower to upper;
// 0 where these have crossed.
func (k knowledge) average(risk func(e, u, lower, upper float64) float64, lower, upper float64) float64 {
	mean, sd := k.reading.Mu, k.reading.Sigma
	weighted := func(y float64) float64 {
		return k.reading.Prob(y) * risk(mean+k.gain*(y-mean), k.u, k.tolerance.Lower, k.tolerance.Upper)
	}
	sum := 0.0
	from, end := max(lower, mean-reach*sd), min(upper, mean+reach*sd)
	for _, b := range k.breaks {
		if to := min(b, end); from < to {
			sum += quad.Fixed(weighted, from, to, points, quad.Legendre{}, 0)
			from = to
		}
	}
	return sum
}
