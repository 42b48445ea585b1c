package calib

import (
	"math"
	"math/rand/v2"
	"testing"

	"rungproof/calib/decision"
	"rungproof/calib/plan"
)

// ILAC-G8:09/2019: a guard band of U accepts wrongly with at most 2.5 %, the risk
// rule with at most what it says, at an error that is exactly at the limit.
func TestFalseAcceptsAtTheLimit(t *testing.T) {
	for _, c := range []struct {
		rule    string
		guard   float64
		allowed float64
	}{{"guarded", 1, 0.025}, {"risk", 0, 0.05}, {"simple", 0, 0.5}} {
		p := *evaluateCase(t, "string").Plan
		p.Detector.Resolution = 0
		p.Decision = plan.Decision{Rule: c.rule, Guard: c.guard, MaxFalseAccept: c.allowed, Coverage: 0.95}
		limits := append([]plan.Limit(nil), p.Detector.Limits...)
		for i := range limits {
			limits[i].Range = 0
		}
		p.Detector.Limits = limits
		s := NewSimulator(&p)
		random := rand.New(rand.NewPCG(31, 32))
		accepted, of := 0, 0
		const campaigns = 400
		for range campaigns {
			e, err := Evaluate(&p, s.Readings(Truth{Gain: 1 + limits[0].Reading, Fine: true}, random))
			if err != nil {
				t.Fatal(err)
			}
			for _, step := range e.Result.Steps {
				of++
				if step.Outcome == decision.Pass {
					accepted++
				}
			}
		}
		// The steps of a campaign share the generator's error: a campaign, not a
		// step, is the unit of the count's scatter.
		share, sd := float64(accepted)/float64(of), math.Sqrt(c.allowed*(1-c.allowed)/campaigns)
		if share > c.allowed+3*sd {
			t.Errorf("%s: %.2f %% of errors at the limit are accepted, want at most %.2f %%", c.rule, 100*share, 100*c.allowed)
		}
		if share < c.allowed/5 {
			t.Errorf("%s: only %.2f %% are accepted: the rule is stricter than it says", c.rule, 100*share)
		}
	}
}

// The risk rule and the guarded one agree where the guard band has the same risk
// (JCGM 106: z = 1.6449 standard uncertainties for 5 %).
func TestRiskRuleAgreesWithItsGuardBand(t *testing.T) {
	e := evaluateCase(t, "arrival")
	byRisk, byBand := *e.Plan, *e.Plan
	byRisk.Decision = plan.Decision{Rule: "risk", MaxFalseAccept: 0.05, Coverage: 0.95}
	byBand.Decision = plan.Decision{Rule: "guarded", Guard: 1.6449 / 1.95996, Coverage: 0.95}
	a, err := Evaluate(&byRisk, e.Readings)
	if err != nil {
		t.Fatal(err)
	}
	b, err := Evaluate(&byBand, e.Readings)
	if err != nil {
		t.Fatal(err)
	}
	for i := range a.Result.Steps {
		x, y := &a.Result.Steps[i], &b.Result.Steps[i]
		near(t, "acceptance limit at "+x.ID, float64(x.Acceptance), float64(y.Acceptance), 1e-3*float64(x.Limit))
		if (x.Outcome == decision.Pass) != (y.Outcome == decision.Pass) {
			t.Errorf("step %s: %s by risk, %s by guard band", x.ID, x.Outcome, y.Outcome)
		}
	}
}

// A prior of the detectors' errors gives both global risks; they add up with what
// is accepted (JCGM 106, clause 9), and a better bench lowers them.
func TestGlobalRiskBeforeMeasuring(t *testing.T) {
	p := *evaluateCase(t, "string").Plan
	p.Decision.Prior = &plan.Prior{Reading: 0.003, Range: 0.0003}
	x, err := Expect(&p)
	if err != nil {
		t.Fatal(err)
	}
	better := p
	better.Generator.Amplitude.Relative /= 10
	y, err := Expect(&better)
	if err != nil {
		t.Fatal(err)
	}
	for i := range x.Steps {
		a, b := x.Steps[i].Global, y.Steps[i].Global
		if a == nil || !(a.Consumer > 0 && a.Consumer < 0.2 && a.Producer > 0 && a.Producer < 0.5) {
			t.Fatalf("step %s: %+v", x.Steps[i].ID, a)
		}
		if b.Producer >= a.Producer {
			t.Errorf("step %s: a better generator raises the producer's risk from %g to %g", x.Steps[i].ID, a.Producer, b.Producer)
		}
	}
}
