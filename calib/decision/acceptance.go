package decision

import (
	"fmt"
	"math"
)

// Rule is a rule of decision on an error e against a symmetric limit, where e has
// the standard uncertainty u and the expanded uncertainty U, all in one unit.
// It is Simple, Guarded or Risk.
type Rule interface {
	// Judge gives one of the four outcomes; equality gives the better one.
	Judge(e, limit, u, U float64) Outcome

	acceptance(limit, u, U float64) float64
}

// AcceptanceLimit is the largest |e| that passes by the rule. It is NaN where nothing
// can: not even an error of 0 is far enough from the limit.
func AcceptanceLimit(rule Rule, limit, u, U float64) float64 {
	if a := rule.acceptance(limit, u, U); a >= 0 {
		return a
	}
	return math.NaN()
}

// Simple is simple acceptance, ILAC-G8:09/2019, clause 4.2.1: A = T. Just within
// the limit, the chance of a false accept is one half.
type Simple struct{}

// Judge passes up to the limit and fails beyond.
func (Simple) Judge(e, limit, _, _ float64) Outcome { return Judge(e, limit, 0) }

func (Simple) acceptance(limit, _, _ float64) float64 { return limit }

// Guarded is the non-binary rule with a guard band w = Factor·U, ILAC-G8:09/2019,
// clause 4.2.3: A = T − w.
type Guarded struct {
	Factor float64 // 1 is common; below 0 it passes beyond the limit, which G8 calls uncritical
}

// Judge is that of the package, with the rule's guard band.
func (g Guarded) Judge(e, limit, _, U float64) Outcome { return Judge(e, limit, g.Factor*U) }

func (g Guarded) acceptance(limit, _, U float64) float64 { return limit - g.Factor*U }

// Risk accepts while the probability of a false accept is MaxFalseAccept at most.
// Unlike a guard band it counts both limits, so it also holds where u is not small beside them.
type Risk struct {
	MaxFalseAccept float64 // above 0 and below 1, usually 0.01 to 0.05; above 0.5 it passes beyond the limit
}

// Judge looks at both risks of deciding on this very error, p_c being the
// probability that the true one is within the limit:
//
//	1 − p_c ≤ max  pass                   p_c ≥ max  conditional fail
//	|e| ≤ limit    conditional pass       else fail
//
// So a conditional fail is one that, failed, would be a false reject with a
// probability of max or more. Where u is a small part of the limit this is
// Guarded with the one-sided quantile of max, w = z·u.
func (r Risk) Judge(e, limit, u, _ float64) Outcome {
	switch {
	case r.accepts(e, u, limit):
		return Pass
	case math.Abs(e) <= limit:
		return ConditionalPass
	case Rejecting(e, u, limit) >= r.MaxFalseAccept:
		return ConditionalFail
	}
	return Fail
}

func (r Risk) accepts(e, u, limit float64) bool {
	if !(0 < r.MaxFalseAccept && r.MaxFalseAccept < 1) {
		panic(fmt.Sprintf("decision: a largest risk of %g; want one above 0 and below 1", r.MaxFalseAccept))
	}
	return Accepting(e, u, limit) <= r.MaxFalseAccept
}

func (r Risk) acceptance(limit, u, _ float64) float64 {
	accepts := func(e float64) bool { return r.accepts(e, u, limit) }
	beyond := limit + 40*u // Φ(−40) is no float64
	switch {
	case !accepts(0):
		return math.NaN()
	case accepts(beyond): // the limit is infinite, or there is no uncertainty
		return beyond
	}
	return boundary(0, beyond, accepts)
}

// boundary is the last number on the way from in, where holds is true, to out, where it is not.
func boundary(in, out float64, holds func(float64) bool) float64 {
	for {
		mid := in + (out-in)/2
		switch {
		case mid == in || mid == out:
			return in
		case holds(mid):
			in = mid
		default:
			out = mid
		}
	}
}
