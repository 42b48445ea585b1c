package decision

import (
	"fmt"
	"math"
)

// Conformity is the probability p_c that the true error lies from lower to
// upper, where e was measured with a standard uncertainty u ≥ 0: knowledge is
// normal, after JCGM 106:2012, clause 7, all in one unit.
//
//	p_c = Φ((T_U − y)/u) − Φ((T_L − y)/u)
//
// A limit may be infinite: then the tolerance is one-sided. Without uncertainty
// p_c is 1 from limit to limit, and 0 elsewhere. It panics where u < 0 or lower > upper.
func Conformity(e, u, lower, upper float64) float64 {
	below, above := deviates(e, u, lower, upper)
	switch {
	case below > 0: // both limits above e
		return tail(below) - tail(above)
	case above < 0: // both below
		return tail(-above) - tail(-below)
	}
	// Here e is within: 1 − tails would lose a tolerance much narrower than u.
	return (math.Erf(above/math.Sqrt2) + math.Erf(-below/math.Sqrt2)) / 2
}

// Within is Conformity with a symmetric limit: the probability that the true
// error lies from −limit to limit.
func Within(e, u, limit float64) float64 { return Conformity(e, u, -limit, limit) }

// nonconformity is 1 − Conformity, added up from the tails: as good at 1e-30 as at 0.5.
func nonconformity(e, u, lower, upper float64) float64 {
	below, above := deviates(e, u, lower, upper)
	return tail(-below) + tail(above)
}

// tail is 1 − Φ(z).
func tail(z float64) float64 { return math.Erfc(z/math.Sqrt2) / 2 }

// deviates are the limits as multiples of u from e.
func deviates(e, u, lower, upper float64) (below, above float64) {
	if u < 0 {
		panic(fmt.Sprintf("decision: a standard uncertainty of %g; want 0 or more", u))
	}
	if lower > upper {
		panic(fmt.Sprintf("decision: a lower limit of %g above the upper one of %g", lower, upper))
	}
	return deviate(lower, e, u, -1), deviate(upper, e, u, 1)
}

// deviate is (limit − e)/u. On the limit itself, without uncertainty, the error
// is within: outward, the sign of the way out, says where the limit then is.
func deviate(limit, e, u, outward float64) float64 {
	switch {
	case math.IsInf(limit, 0):
		return limit
	case u == 0 && limit == e:
		return math.Copysign(math.Inf(1), outward)
	}
	return (limit - e) / u
}
