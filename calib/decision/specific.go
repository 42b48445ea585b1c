package decision

// Accepting is the specific consumer's risk of JCGM 106:2012, clause 9: the
// probability 1 − p_c that a detector accepted on this very error, e with standard
// uncertainty u, is beyond the symmetric limit.
func Accepting(e, u, limit float64) float64 { return nonconformity(e, u, -limit, limit) }

// Rejecting is the specific producer's risk: the probability p_c that a detector
// rejected on this very error is within the limit.
func Rejecting(e, u, limit float64) float64 { return Within(e, u, limit) }
