package diagnose

import (
	"fmt"

	"rungproof/calib"
	"rungproof/calib/quantity"
)

// noSignal says that the detector does not respond to the ladder.
func noSignal(e *calib.Evaluation) []calib.Finding {
	if !e.Result.NoSignal {
		return nil
	}
	return one(NoSignal, "look for a lead that is off, a generator that is off, a reference at another frequency or at 90°, a wrong input.",
		"the readings do not follow the ladder: the gain is not distinguishable from zero, and nothing can be said of a series resistance.")
}

// odd lists readings out of all proportion to the others.
func odd(e *calib.Evaluation) []calib.Finding {
	all := e.Result.Odd
	if len(all) == 0 || e.Result.NoSignal {
		return nil
	}
	o := all[0]
	text := fmt.Sprintf("step %s reads %s where the other steps let expect %s, %s times as much",
		o.Step, quantity.Format(o.Reading, 3, "V"), quantity.Format(o.Likely, 3, "V"), times(o.Ratio))
	if len(all) > 1 {
		ids := make([]string, len(all)-1)
		for i, more := range all[1:] {
			ids[i] = more.Step
		}
		text += "; as odd: " + calib.List(ids)
	}
	return one(OddReading, "check its unit, its decimal point, its range and the setting of the box, then read it again.", "%s.", text)
}
