package decision_test

import (
	"fmt"

	"rungproof/calib/decision"
)

// An error of 0.8 mV against a limit of 1 mV, with u = 0.15 mV and U = 0.30 mV.
func Example() {
	const e, limit, u, U = 0.8e-3, 1e-3, 0.15e-3, 0.30e-3
	fmt.Printf("within the limit with a probability of %.1f %%\n", 100*decision.Within(e, u, limit))
	for _, rule := range []decision.Rule{decision.Simple{}, decision.Guarded{Factor: 1}, decision.Risk{MaxFalseAccept: 0.1}} {
		fmt.Printf("accepted up to %.2f mV: %v\n", 1e3*decision.AcceptanceLimit(rule, limit, u, U), rule.Judge(e, limit, u, U))
	}
	// Output:
	// within the limit with a probability of 90.9 %
	// accepted up to 1.00 mV: pass
	// accepted up to 0.70 mV: conditional pass
	// accepted up to 0.81 mV: pass
}

// The resistors of JCGM 106:2012, clause 9, in Ω.
func ExampleGlobal() {
	prior := decision.Prior{Mean: 1500, SD: 0.12}
	tolerance := decision.Interval{Lower: 1499.80, Upper: 1500.20}
	r := decision.Global(prior, 0.04, tolerance, decision.Interval{Lower: 1499.82, Upper: 1500.18})
	fmt.Printf("R_C %.1f %%, R_P %.1f %%\n", 100*r.Consumer, 100*r.Producer)
	fmt.Printf("guard band for R_C = 0.1 %%: %.3f Ω\n", decision.GuardFor(prior, 0.04, tolerance, 0.001))
	// Output:
	// R_C 1.0 %, R_P 6.9 %
	// guard band for R_C = 0.1 %: 0.068 Ω
}
