package decision

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// The resistors of JCGM 106:2012, clause 9: made to 1500 Ω with a standard deviation of 0.12 Ω, measured
// with u = 0.04 Ω, within 0.2 Ω.
var (
	resistors = Prior{1500, 0.12}
	resistor  = Interval{1499.80, 1500.20}
)

const meter = 0.04

func guarded(t Interval, w float64) Interval { return Interval{t.Lower + w, t.Upper - w} }

// Print from memory: p_c 0.90, R_C about 1 %, R_P about 7 % with a guard band of 0.02 Ω.
func TestGlobalAsPrinted(t *testing.T) {
	r := Global(resistors, meter, resistor, guarded(resistor, 0.02))
	within(t, "p_c", r.Conforming, 0.90, 0.005)
	within(t, "R_C", r.Consumer, 0.01, 0.005)
	within(t, "R_P", r.Producer, 0.07, 0.005)
}

// By mpmath 1.3.0 with 40 digits, integrating over the true value where the package integrates over the reading.
func TestGlobalDigits(t *testing.T) {
	for _, c := range []struct {
		what                  string
		prior                 Prior
		u                     float64
		tolerance, acceptance Interval
		want                  GlobalRisk
	}{
		{"resistors", resistors, meter, resistor, resistor,
			GlobalRisk{0.90441929545437, 0.88615370199334, 0.018942206717029, 0.037207800178058, 0.021375757585191, 0.32682485798424}},
		{"resistors, guarded", resistors, meter, resistor, guarded(resistor, 0.02),
			GlobalRisk{0.90441929545437, 0.84527107651462, 0.0098782915217723, 0.069026510461521, 0.011686536776467, 0.4461125231576}},
		{"off centre", Prior{0.3, 0.5}, 0.2, Symmetric(1), Symmetric(0.8),
			GlobalRisk{0.91458215274251, 0.8028762110781, 0.0041838803476687, 0.11588982201208, 0.005211115100858, 0.58790378698532}},
		{"a fine meter", Prior{0, 1}, 0.001, Symmetric(1), Symmetric(0.999),
			GlobalRisk{0.68268949213709, 0.682205066747, 4.0301579546982e-5, 0.00052472696963081, 5.907546207353e-5, 0.0016511495770547}},
		{"a coarse meter", Prior{0, 0.01}, 1, Symmetric(0.02), Symmetric(1),
			GlobalRisk{0.95449973610364, 0.68266529627443, 0.031056226049678, 0.30289066587889, 0.045492609949801, 0.95448327057487}},
		{"a small risk", Prior{0, 1}, 0.1, Symmetric(3), Symmetric(2.6),
			GlobalRisk{0.99730020393674, 0.99032115731487, 5.9442873617286e-9, 0.0069790525661532, 6.0023834872374e-9, 0.72106271309464}},
	} {
		r := Global(c.prior, c.u, c.tolerance, c.acceptance)
		within(t, c.what+", p_c", r.Conforming, c.want.Conforming, 2e-12)
		within(t, c.what+", accepted", r.Accepted, c.want.Accepted, 2e-12)
		within(t, c.what+", R_C", r.Consumer, c.want.Consumer, 2e-12)
		within(t, c.what+", R_P", r.Producer, c.want.Producer, 2e-12)
		within(t, c.what+", bad given accepted", r.BadGivenAccepted, c.want.BadGivenAccepted, 1e-11)
		within(t, c.what+", good given rejected", r.GoodGivenRejected, c.want.GoodGivenRejected, 1e-11)
	}
}

// Guard bands for the resistors by mpmath 1.3.0; at 5 % there is room to accept beyond the limits.
func TestGuardFor(t *testing.T) {
	for _, c := range []struct{ risk, want float64 }{
		{0.01, 0.019665941699508}, {0.001, 0.067901705078137}, {0.05, -0.04745435356028},
	} {
		within(t, "guard band", GuardFor(resistors, meter, resistor, c.risk), c.want, 1e-10)
	}
	if w := GuardFor(resistors, meter, resistor, 0.1); !math.IsInf(w, -1) {
		t.Errorf("guard band for a risk that taking them all keeps to: %g, want -Inf", w)
	}
	panics(t, "no risk at all", func() { GuardFor(resistors, meter, resistor, 0) })
}

// Draws of the true error and of the reading must fall as the integrals say, within four standard errors.
func TestGlobalAgainstMonteCarlo(t *testing.T) {
	const n = 400_000
	for i, c := range []struct {
		prior                 Prior
		u                     float64
		tolerance, acceptance Interval
	}{
		{resistors, meter, resistor, guarded(resistor, 0.02)},
		{Prior{0.3, 0.5}, 0.2, Symmetric(1), Symmetric(1.1)},
		{Prior{-1, 1}, 2, Interval{-inf, 0.5}, Interval{-inf, 0}},
		{Prior{0, 1}, 0.05, Interval{0.5, 2}, Interval{0.6, inf}},
	} {
		draw := rand.New(rand.NewPCG(106, uint64(i)))
		var conforming, accepted, consumer, producer float64
		for range n {
			x := c.prior.Mean + c.prior.SD*draw.NormFloat64()
			y := x + c.u*draw.NormFloat64()
			good := c.tolerance.Lower <= x && x <= c.tolerance.Upper
			taken := c.acceptance.Lower <= y && y <= c.acceptance.Upper
			for _, count := range []struct {
				of *float64
				is bool
			}{{&conforming, good}, {&accepted, taken}, {&consumer, taken && !good}, {&producer, !taken && good}} {
				if count.is {
					*count.of += 1. / n
				}
			}
		}
		r := Global(c.prior, c.u, c.tolerance, c.acceptance)
		for _, share := range []struct {
			what      string
			got, want float64
		}{{"p_c", r.Conforming, conforming}, {"accepted", r.Accepted, accepted}, {"R_C", r.Consumer, consumer}, {"R_P", r.Producer, producer}} {
			within(t, share.what, share.got, share.want, 4*math.Sqrt(share.got*(1-share.got)/n))
		}
	}
}

// What must hold without any integral.
func TestGlobalExtremes(t *testing.T) {
	prior, tolerance := Prior{0.2, 1}, Symmetric(1)
	good := Conformity(0.2, 1, -1, 1)

	exact := Global(prior, 0, tolerance, tolerance)
	within(t, "no uncertainty, R_C", exact.Consumer, 0, 1e-15)
	within(t, "no uncertainty, R_P", exact.Producer, 0, 1e-15)
	within(t, "no uncertainty, accepted", exact.Accepted, good, 1e-15)

	all := Global(prior, 0.5, tolerance, Symmetric(inf))
	within(t, "all accepted, R_C", all.Consumer, 1-good, 1e-14)
	within(t, "all accepted, bad", all.BadGivenAccepted, 1-good, 1e-14)
	within(t, "all accepted, R_P", all.Producer, 0, 0)

	for _, nothing := range []Interval{{0.1, -0.1}, Symmetric(math.NaN())} {
		none := Global(prior, 0.5, tolerance, nothing)
		within(t, "none accepted, R_C", none.Consumer, 0, 0)
		within(t, "none accepted, R_P", none.Producer, good, 1e-15)
		within(t, "none accepted, good given rejected", none.GoodGivenRejected, good, 1e-15)
		if none.Accepted != 0 || !math.IsNaN(none.BadGivenAccepted) {
			t.Errorf("none accepted: %+v", none)
		}
	}

	// A reading that tells nothing takes good and bad alike.
	blind := Global(prior, 1e6, tolerance, Symmetric(1e6))
	within(t, "blind, bad given accepted", blind.BadGivenAccepted, 1-good, 1e-6)
	within(t, "blind, good given rejected", blind.GoodGivenRejected, good, 1e-6)

	free := Global(prior, 0.5, Symmetric(inf), tolerance)
	within(t, "no tolerance, R_C", free.Consumer, 0, 0)
	within(t, "no tolerance, R_P", free.Producer, 1-free.Accepted, 1e-14)

	panics(t, "a prior without spread", func() { Global(Prior{}, 1, tolerance, tolerance) })
	panics(t, "a guard band without spread", func() { GuardFor(Prior{}, 1, tolerance, 0.01) })
}

// accepted = p_c − R_P + R_C; the risks are probabilities; a guard band takes from the consumer's
// and adds to the producer's; neither the unit nor the sign of the error matters.
func TestGlobalProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		prior := Prior{rapid.Float64Range(-3, 3).Draw(t, "mean"), rapid.Float64Range(0.01, 10).Draw(t, "sd")}
		u := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(1e-4, 10)).Draw(t, "u")
		tolerance := Symmetric(rapid.Float64Range(0.1, 5).Draw(t, "limit"))
		w := rapid.Float64Range(-2, tolerance.Upper).Draw(t, "w")
		r := Global(prior, u, tolerance, guarded(tolerance, w))
		if d := r.Accepted - (r.Conforming - r.Producer + r.Consumer); math.Abs(d) > 1e-12 {
			t.Fatalf("accepted is not p_c − R_P + R_C by %g: %+v", d, r)
		}
		if r.Consumer < 0 || r.Consumer > r.Accepted+1e-12 || r.Producer < 0 || r.Producer > r.Conforming+1e-12 {
			t.Fatalf("%+v", r)
		}
		wider := Global(prior, u, tolerance, guarded(tolerance, w+rapid.Float64Range(0, 2).Draw(t, "wider by")))
		if wider.Consumer > r.Consumer+1e-12 || wider.Producer < r.Producer-1e-12 {
			t.Fatalf("%+v, with a wider guard band %+v", r, wider)
		}
		const unit = -1024 // a power of two scales without rounding
		turned := Global(Prior{unit * prior.Mean, -unit * prior.SD}, -unit*u, Symmetric(-unit*tolerance.Upper), Symmetric(-unit*(tolerance.Upper-w)))
		if math.Abs(turned.Consumer-r.Consumer) > 1e-12 || math.Abs(turned.Producer-r.Producer) > 1e-12 {
			t.Fatalf("%+v, in another unit %+v", r, turned)
		}
	})
}

// The guard band found holds the risk wanted, also at one limit only.
func TestGuardForProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		prior := Prior{rapid.Float64Range(-2, 2).Draw(t, "mean"), rapid.Float64Range(0.1, 3).Draw(t, "sd")}
		u := rapid.Float64Range(0.01, 3).Draw(t, "u")
		tolerance := rapid.SampledFrom([]Interval{Symmetric(1), {-inf, 0.5}, {-1, inf}}).Draw(t, "tolerance")
		unmeasured := nonconformity(prior.Mean, prior.SD, tolerance.Lower, tolerance.Upper)
		risk := unmeasured * rapid.Float64Range(0.001, 0.99).Draw(t, "share of the risk unmeasured")
		if risk < 1e-9 {
			t.Skip("hardly a bad one to be accepted")
		}
		w := GuardFor(prior, u, tolerance, risk)
		if got := Global(prior, u, tolerance, guarded(tolerance, w)).Consumer; math.Abs(got-risk) > 1e-12 {
			t.Fatalf("a guard band of %g leaves a risk of %g, want %g", w, got, risk)
		}
	})
}

func BenchmarkGlobal(b *testing.B) {
	for b.Loop() {
		Global(resistors, meter, resistor, guarded(resistor, 0.02))
	}
}

func BenchmarkGuardFor(b *testing.B) {
	for b.Loop() {
		GuardFor(resistors, meter, resistor, 0.01)
	}
}
