package trend

import (
	"math"
	"time"

	"gonum.org/v1/gonum/stat/distuv"
)

// Record is how often the detector came back within its limit: of the intervals that began
// within it, by the result found at the end.
type Record struct {
	Intervals int
	Beyond    int // ended beyond the limit
	Held      time.Duration
	Failed    time.Duration // length of those that ended within, and beyond

	// P is the probability of so many beyond, or more, where each interval ends within
	// the limit with the target reliability: 1 without any.
	P float64

	// Interval is the longest that meets the target by the record; zero where the record
	// does not contradict the target, P ≥ 5 %.
	Interval time.Duration
}

// recordOf judges intervals as the interval test of NCSLI RP-1 does (method A3): they
// are changed only where the number beyond the limit is more than chance makes of the
// target, by the binomial distribution. The change follows the exponential model of
// reliability,
//
//	R(t) = exp(−λt)    λ = number beyond / time within the limit
//
// with half of an interval that ended beyond counted as within: when the error
// crossed its limit is not known.
func recordOf(points []Point, limit, target float64) Record {
	var r Record
	segment := segments(points)
	for i := 1; i < len(points); i++ {
		length := points[i].Time.Sub(points[i-1].Time)
		if segment[i] != segment[i-1] || length == 0 || math.Abs(points[i-1].Value) > limit {
			continue
		}
		r.Intervals++
		if math.Abs(points[i].Value) > limit {
			r.Beyond++
			r.Failed += length
		} else {
			r.Held += length
		}
	}
	r.P = 1
	if r.Beyond > 0 {
		r.P = distuv.Binomial{N: float64(r.Intervals), P: 1 - target}.Survival(float64(r.Beyond - 1))
	}
	if r.P < significance {
		within := float64(r.Held) + float64(r.Failed)/2
		r.Interval = time.Duration(-math.Log(target) / float64(r.Beyond) * within)
	}
	return r
}
