package diagnose

import (
	"fmt"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

func limited(e *calib.Evaluation) []calib.Finding { return benchLimits(e.Result.Limiting) }

// benchLimits says that the bench, not the detector, limits the decision, and
// which input to improve.
func benchLimits(l *calib.Limiting) []calib.Finding {
	if l == nil {
		return nil
	}
	do := ""
	if l.Input != "" {
		do = fmt.Sprintf("improve this first: %s. Five times better known, it would make the ratio %s.", l.Input, quantity.Format(l.After, 2, "1"))
	}
	return one(BenchLimits, do, "at %s the limit is under 3 times U (%s), down to %s at step %s: there the bench's uncertainty, not the detector, limits the decision.",
		calib.Counted(len(l.Steps), "step"), calib.List(l.Steps), quantity.Format(l.Capability, 2, "1"), l.Worst)
}
