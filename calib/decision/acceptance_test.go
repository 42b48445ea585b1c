package decision

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The multiples of U in ILAC-G8:09/2019's table of guard bands: multiples and bounds from memory apart from those of
// 0 and U; the chance of a wrong accept at the acceptance limit recomputed in Python for U = 2u and U = 1.96u.
func TestGuardBandsOfG8(t *testing.T) {
	const limit, u = 1, 0.05
	for _, c := range []struct{ multiple, at2, at196, digits, bound float64 }{
		{3, 9.866e-10, 2.051e-9, 5e-13, 1e-6},            // "six sigma"
		{1.5, 0.0013498980, 0.0016410612, 5e-11, 0.0016}, // "three sigma"
		{1, 0.0227501319, 0.0249978951, 5e-11, 0.025},    // the guide's earlier edition
		{0.83, 0.0484572263, 0.0518897908, 5e-11, 0.05},  // ISO 14253-1:2017
		{0, 0.5, 0.5, 5e-11, 0.5},                        // simple acceptance
	} {
		rule := Guarded{c.multiple}
		at2 := Accepting(AcceptanceLimit(rule, limit, u, 2*u), u, limit)
		within(t, "U = 2u", at2, c.at2, c.digits)
		within(t, "U = 1.96u", Accepting(AcceptanceLimit(rule, limit, u, 1.96*u), u, limit), c.at196, c.digits)
		if at2 > c.bound {
			t.Errorf("w = %gU: a risk of %g, want %g at most", c.multiple, at2, c.bound)
		}
	}
	uncritical := AcceptanceLimit(Guarded{-1}, limit, u, 2*u)
	within(t, "uncritical, w = −U", uncritical, limit+2*u, 1e-15)
	within(t, "its wrong reject", Rejecting(uncritical, u, limit), 0.0227501319, 5e-11)
}

// ILAC-G8:09/2019, clause 4.2, for 9.9 to 10.1 with U = 0.04 and k = 2; p_c recomputed
// in Python. The rule of risk, by its definition: at most 1 % bad, or 10 %.
func TestRulesSideBySide(t *testing.T) {
	const limit, u, U = 0.1, 0.02, 0.04
	for _, c := range []struct {
		y, conformity                        float64
		simple, guarded, percent1, percent10 Outcome
	}{
		{10.00, 0.999999426697, Pass, Pass, Pass, Pass},
		{10.05, 0.993790334674, Pass, Pass, Pass, Pass},
		{10.07, 0.933192798731, Pass, ConditionalPass, ConditionalPass, Pass},
		{10.08, 0.841344746069, Pass, ConditionalPass, ConditionalPass, ConditionalPass},
		{10.11, 0.308537538726, Fail, ConditionalFail, ConditionalFail, ConditionalFail},
		{10.13, 0.066807201269, Fail, ConditionalFail, ConditionalFail, Fail},
		{10.15, 0.006209665326, Fail, Fail, Fail, Fail},
		{9.93, 0.933192798731, Pass, ConditionalPass, ConditionalPass, Pass},
	} {
		e := c.y - 10
		within(t, "p_c", Within(e, u, limit), c.conformity, 1e-12)
		for _, r := range []struct {
			rule Rule
			want Outcome
		}{{Simple{}, c.simple}, {Guarded{1}, c.guarded}, {Risk{0.01}, c.percent1}, {Risk{0.1}, c.percent10}} {
			if got := r.rule.Judge(e, limit, u, U); got != r.want {
				t.Errorf("%g by %T%v: %v, want %v", c.y, r.rule, r.rule, got, r.want)
			}
		}
	}
}

// Roots of Φ((−1 − A)/u) + Φ((A − 1)/u) = max, found by mpmath 1.3.0 with 40 digits; the
// guard z·u of a single limit would leave 0.1776 in the third.
func TestAcceptanceLimitOfRisk(t *testing.T) {
	for _, c := range []struct{ u, risk, want float64 }{
		{0.1, 0.02, 0.7946251089368177},
		{0.4, 0.05, 0.3404933904485002},
		{0.5, 0.05, 0.1018936397019014},
		{0.1, 1e-9, 0.4002192984992313},
		{0, 0.05, 1}, // without uncertainty, up to the limit
	} {
		within(t, "acceptance limit", AcceptanceLimit(Risk{c.risk}, 1, c.u, 2*c.u), c.want, 1e-14)
	}
	within(t, "no limit", 1/AcceptanceLimit(Risk{0.05}, inf, 1, 2), 0, 0)
}

// At an error of 0 the risk is 5.447 % already for u = 0.52 (mpmath 1.3.0), and the guard band larger than the limit.
func TestNothingAccepted(t *testing.T) {
	within(t, "risk at 0", Accepting(0, 0.52, 1), 0.05447039, 5e-9)
	for _, rule := range []Rule{Risk{0.05}, Guarded{1}} {
		if a := AcceptanceLimit(rule, 1, 0.52, 1.04); !math.IsNaN(a) {
			t.Errorf("%T: %g accepted, want NaN", rule, a)
		}
		if got := rule.Judge(0, 1, 0.52, 1.04); got != ConditionalPass {
			t.Errorf("%T: %v, want %v", rule, got, ConditionalPass)
		}
	}
	for _, bad := range []float64{0, 1, -0.1, math.NaN()} {
		panics(t, "a rule that accepts nothing or all", func() { AcceptanceLimit(Risk{bad}, 1, 0.1, 0.2) })
	}
}

// In whole numbers, which a float64 holds as they are; 1 − p_c at the limit is exactly one half.
func TestRulesPassAtEquality(t *testing.T) {
	for _, rule := range []Rule{Simple{}, Guarded{0}, Risk{0.5}} {
		if a := AcceptanceLimit(rule, 64, 1, 2); a != 64 {
			t.Errorf("%T: acceptance limit %v, want 64", rule, a)
		}
		if got := rule.Judge(-64, 64, 1, 2); got != Pass {
			t.Errorf("%T: %v at the limit, want %v", rule, got, Pass)
		}
	}
}

var anyRule = rapid.OneOf(
	rapid.Just[Rule](Simple{}),
	rapid.Map(rapid.Float64Range(0, 3), func(x float64) Rule { return Guarded{x} }),
	rapid.Map(rapid.Float64Range(1e-9, 0.5), func(x float64) Rule { return Risk{x} }),
)

// Up to a risk of one half no rule accepts beyond the limit; what passes is what the acceptance limit says, and a
// larger error is never judged better.
func TestRuleProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rule := anyRule.Draw(t, "rule")
		limit := rapid.Float64Range(1e-3, 10).Draw(t, "limit")
		u := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(1e-3, 10)).Draw(t, "u")
		e := rapid.Float64Range(0, 20).Draw(t, "e")
		a := AcceptanceLimit(rule, limit, u, 2*u)
		if a < 0 || a > limit {
			t.Fatalf("acceptance limit %g", a)
		}
		got := rule.Judge(e, limit, u, 2*u)
		if clear := !(math.Abs(e-a) < 1e-12*limit); clear && (got == Pass) != (e <= a) {
			t.Fatalf("%v, acceptance limit %g", got, a)
		}
		if (got <= ConditionalPass) != (e <= limit) {
			t.Fatalf("%v", got)
		}
		if minus := rule.Judge(-e, limit, u, 2*u); minus != got {
			t.Fatalf("%v, its opposite %v", got, minus)
		}
		if larger := rule.Judge(e+rapid.Float64Range(0, 5).Draw(t, "larger by"), limit, u, 2*u); larger < got {
			t.Fatalf("%v, the larger error %v", got, larger)
		}
		if g, ok := rule.(Guarded); ok && got != Judge(e, limit, g.Factor*2*u) {
			t.Fatalf("%v, with its guard band %v", got, Judge(e, limit, g.Factor*2*u))
		}
		if rule == (Simple{}) && got != Judge(e, limit, 0) {
			t.Fatalf("%v, without a guard band %v", got, Judge(e, limit, 0))
		}
	})
}

// Where the limits are many u apart the rule of risk is a guard band of z·u; elsewhere it accepts less, and
// it never accepts less for a larger risk.
func TestRiskIsAGuardBand(t *testing.T) {
	const z = 1.6448536269515 // one-sided 5 %, JCGM 106:2012, table 1, with the digits of mpmath 1.3.0
	rapid.Check(t, func(t *rapid.T) {
		u := rapid.Float64Range(0.01, 0.6).Draw(t, "u")
		a := AcceptanceLimit(Risk{0.05}, 1, u, 2*u)
		guarded := AcceptanceLimit(Guarded{z}, 1, u, u)
		if u < 0.1 && math.Abs(a-guarded) > 1e-12 {
			t.Fatalf("%.15g, guarded %.15g", a, guarded)
		}
		if a > guarded+1e-12 {
			t.Fatalf("%g, guarded %g", a, guarded)
		}
		if more := AcceptanceLimit(Risk{rapid.Float64Range(0.05, 0.99).Draw(t, "larger risk")}, 1, u, 2*u); more < a {
			t.Fatalf("%g, with a larger risk %g", a, more)
		}
	})
}
