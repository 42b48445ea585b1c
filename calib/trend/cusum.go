package trend

// CUSUM is a tabular cumulative sum chart (NIST/SEMATECH e-Handbook, 6.3.2.3), all in the
// unit of the values.
type CUSUM struct {
	Target float64
	Slack  float64 // k: half the shift that is to be found
	Limit  float64 // h
}

// Sums are the sums after a value.
type Sums struct {
	High, Low float64 // above and below target, both ≥ 0
	Signal    bool    // one of them is beyond the limit
}

// Run gives the sums after each value, from 0:
//
//	S_hi(i) = max(0, S_hi(i−1) + x_i − μ₀ − k)    S_lo(i) = max(0, S_lo(i−1) + μ₀ − k − x_i)
func (c CUSUM) Run(values []float64) []Sums {
	out := make([]Sums, len(values))
	var s Sums
	for i, x := range values {
		s.High = max(0, s.High+x-c.Target-c.Slack)
		s.Low = max(0, s.Low+c.Target-c.Slack-x)
		s.Signal = s.High > c.Limit || s.Low > c.Limit
		out[i] = s
	}
	return out
}
