package decision

import (
	"fmt"
	"math"
)

// Prior is what is known of a detector's error before it is measured: a normal distribution.
type Prior struct {
	Mean float64
	SD   float64 // above 0
}

// Interval is of tolerance or of acceptance, its limits in the error's unit; they may be infinite.
type Interval struct {
	Lower, Upper float64
}

// Symmetric is the interval from −limit to limit.
func Symmetric(limit float64) Interval { return Interval{-limit, limit} }

// empty also holds for limits that are NaN, as AcceptanceLimit has them where nothing can be accepted.
func (i Interval) empty() bool { return !(i.Lower <= i.Upper) }

// GlobalRisk is what a rule does to detectors not yet measured: probabilities, 0 to 1.
// Accepted = Conforming − Producer + Consumer.
type GlobalRisk struct {
	Conforming        float64 // within tolerance, whatever is measured: p_c of the prior
	Accepted          float64 // the measured error is in the acceptance interval
	Consumer          float64 // R_C: accepted and out of tolerance
	Producer          float64 // R_P: rejected and within tolerance
	BadGivenAccepted  float64 // of those accepted, the share out of tolerance; NaN where none is
	GoodGivenRejected float64 // of those rejected, the share within tolerance; NaN where none is
}

// Global is the risk of accepting by a measured error of standard uncertainty u ≥ 0,
// where its true value has the prior: JCGM 106:2012, clause 9, to 1e-12 or better.
// An acceptance interval whose limits have crossed, or are NaN, accepts nothing.
func Global(prior Prior, u float64, tolerance, acceptance Interval) GlobalRisk {
	k := learn(prior, u, tolerance)
	r := GlobalRisk{Conforming: Conformity(prior.Mean, prior.SD, tolerance.Lower, tolerance.Upper)}
	rejected := 1.0
	if acceptance.empty() {
		r.Producer = r.Conforming
	} else {
		r.Accepted = Conformity(prior.Mean, k.reading.Sigma, acceptance.Lower, acceptance.Upper)
		rejected = nonconformity(prior.Mean, k.reading.Sigma, acceptance.Lower, acceptance.Upper)
		r.Consumer = k.average(nonconformity, acceptance.Lower, acceptance.Upper)
		r.Producer = k.average(Conformity, math.Inf(-1), acceptance.Lower) + k.average(Conformity, acceptance.Upper, math.Inf(1))
	}
	r.BadGivenAccepted = r.Consumer / r.Accepted
	r.GoodGivenRejected = r.Producer / rejected
	return r
}

// GuardFor is the guard band w that holds the global consumer's risk R_C to the risk
// wanted, above 0 and below 1: the acceptance interval is the tolerance less w at each
// limit. Below 0 it is room to accept beyond the limits; it is −Inf where all can be
// accepted unmeasured, since 1 − p_c of the prior is the wanted risk or less.
func GuardFor(prior Prior, u float64, tolerance Interval, risk float64) float64 {
	if !(0 < risk && risk < 1) {
		panic(fmt.Sprintf("decision: a consumer's risk of %g; want one above 0 and below 1", risk))
	}
	k := learn(prior, u, tolerance)
	if nonconformity(prior.Mean, prior.SD, tolerance.Lower, tolerance.Upper) <= risk {
		return math.Inf(-1)
	}
	far := reach * k.reading.Sigma
	room := min(tolerance.Upper-prior.Mean, prior.Mean-tolerance.Lower)
	nothing := min((tolerance.Upper-tolerance.Lower)/2, room+far)
	return boundary(nothing, room-far, func(w float64) bool {
		return k.average(nonconformity, tolerance.Lower+w, tolerance.Upper-w) <= risk
	})
}
