package diagnose

import (
	"rungproof/calib"
	"rungproof/calib/plan"
)

// Expected are what should be known of a plan before anyone has measured.
func Expected(p *plan.Plan, x *calib.Expectation) []calib.Finding {
	out := []calib.Finding{} // [] in JSON, not null
	if !x.Separable {
		out = append(out, one(NotSeparable, parting(x.Parting),
			"this plan cannot tell an offset of the detector from a series resistance of the bench: both are one column of the problem, at any number of readings.")...)
	}
	out = append(out, benchLimits(x.Limiting)...)
	return append(append(out, x.Warnings(p)...), calib.Cautions(p)...)
}
