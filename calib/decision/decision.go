// Package decision says whether a measured error is within its limit, and with
// what certainty: the rules of ILAC-G8:09/2019, clause 4.2.
package decision

import "fmt"

// Outcome of a decision, from best to worst. The zero value is NotJudged.
type Outcome int

// The four outcomes of a guarded, non-binary rule, and none.
const (
	NotJudged Outcome = iota
	Pass
	ConditionalPass
	ConditionalFail
	Fail
)

var names = [...]string{"not judged", "pass", "conditional pass", "conditional fail", "fail"}

// String is the outcome as people and result.json write it.
func (o Outcome) String() string { return names[o] }

// MarshalText writes the outcome's name.
func (o Outcome) MarshalText() ([]byte, error) { return []byte(names[o]), nil }

// UnmarshalText reads the outcome's name.
func (o *Outcome) UnmarshalText(text []byte) error {
	for i, n := range names {
		if n == string(text) {
			*o = Outcome(i)
			return nil
		}
	}
	return fmt.Errorf("decision: %q is no outcome; one of %q", text, names)
}

// Judge decides on an error e against a symmetric limit with a guard band w ≥ 0
// on either side of it, all in one unit. Equality passes; the standard leaves it open.
//
//	|e| ≤ limit − w  pass          |e| ≤ limit + w  conditional fail
//	|e| ≤ limit      conditional pass        beyond fail
func Judge(e, limit, w float64) Outcome {
	if e < 0 {
		e = -e
	}
	switch {
	case e <= limit-w:
		return Pass
	case e <= limit:
		return ConditionalPass
	case e <= limit+w:
		return ConditionalFail
	}
	return Fail
}

// Worst is the worse of two outcomes; what is not judged does not count.
func Worst(a, b Outcome) Outcome { return max(a, b) }

// AtBest is o, but no better than bound. What is not judged stays so.
func AtBest(o, bound Outcome) Outcome {
	if o == NotJudged {
		return o
	}
	return max(o, bound)
}

// AtWorst is o, but no worse than bound, which is one of the four.
func AtWorst(o, bound Outcome) Outcome { return min(o, bound) }
