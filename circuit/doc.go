// Package circuit is the resistive divider ladder as a network: what a generator leaves at one of its taps, what the
// detector sees there, and how every element bears on it.
//
// # Shape
//
//	EMF ── Source ──┬─ series arm ─┬─ series arm ─┬─ …        tap ── Input.Lead ──┬──┬── detector, high
//	                │              │              │                               R  C
//	              shunt          shunt          shunt                             │  │
//	                │              │              │                               │  │
//	 common ────────┴──────────────┴──────────────┴─ ReturnSeen ──┬───────────────┴──┴── detector, low
//	                                                              └─ Return ── generator, low
//
// Arms stand in order from the generator to the far end; any number of shunts may hang on one joint. Each is R and L in series
// with C across both, and two wires in series with that:
//
//	joint ── Lead ──(tap)── Stray ── R, L ∥ C ── common
//
// A detector tapped at a shunt arm sits between Stray and Lead: it sees the drop on Stray, not that on Lead. In arms that are not
// tapped the two simply add. A Tap arm is a joint without an element.
//
// # Units and signs
//
// SI units, frequencies in Hz, phasors as exp(+jωt). Everything is per volt of the generator's EMF, so peak or rms is the
// caller's choice, except in [Response.Power], where the EMF is rms. Currents run from the generator to the far end in
// series arms, from the joint to common in shunt arms, and out of the ladder in the detector's lead.
//
// # Method
//
// Two current distributions are found by current division alone: one for a unit current into the ladder's input with the detector
// taken off, and one for a unit current into the detector's terminals with the generator at zero. Drops, impedances and, by
// Tellegen's theorem, the derivatives by all elements follow from these two (S. W. Director and R. A. Rohrer, "The generalized adjoint
// network and network sensitivities", IEEE Transactions on Circuit Theory 16 (1969) 318–323); the time taken is proportional to the number of
// arms. The generator stays connected in the second distribution. The textbook two-port form Z = z22 − z12²/(z11 + Zs) would lose
// digits where the tap is close to the generator; here no impedance is ever found as a difference.
//
// Where a few numbers of the ladder vary over very many values, [Ladder.Compile] turns its solutions into a quotient of polynomials: a [Compiled].
//
// # Limits
//
// A 0 Ω element is a short. Where two shorts lie side by side their currents are not determined; they are then taken as
// equal, and the derivatives hold for both moving together. A generator without any resistance in its loop has no solution, and
// [Ladder.Check] refuses it; elements without any resistance, exactly at resonance with each other, have none either and give NaN.
//
// H and Z keep a relative accuracy of 1e-12. So do currents and derivatives, with two exceptions: of those at the tap and beyond it a load
// that lowers the tap's voltage n times takes a factor n, and a shunt current that the common lead or the load brings close to a change of sign
// is good to 1e-12 of the parts that it is the difference of.
//
// [Ladder.Check] is where faulty input is an error. The other methods take the ladder to be sound, and panic where the tap is none.
package circuit
