package decision

// LeastCapability is the common practice: below it the measurement, more than what is measured, decides the outcome.
const LeastCapability = 3

// Capability is the limit over the expanded uncertainty. It is the index C_m = T/(4·u) of
// JCGM 106:2012, clause 7.6.3, with U = 2u: the T there is the whole tolerance, twice
// this limit, so C_m = T/(2U) = limit/U. It is +Inf without uncertainty.
func Capability(limit, U float64) float64 { return limit / U }
