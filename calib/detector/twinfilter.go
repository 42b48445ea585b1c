package detector

import "math"

// chain is the low-pass of both channels, run at the full rate. Each pole is the
// continuous one matched, z = e^−u with u = 1/(rate·T), and lets dc through as it
// is: y ← e^−u·y + (1 − e^−u)·x, so that n of them let through
//
//	|H|² = (1 + sin²(πf/rate)/sinh²(u/2))^−n
//
// which is the continuous chain's at least, and at most that with |H| times
// (a/sin a · sinh(u/2)/(u/2))ⁿ, a = πf/rate: a pole's share is 1.1 at a quarter of
// the rate, 1.026 at an eighth, 1.0065 at a sixteenth. The noise bandwidth, half
// the sum of the squared impulse response times the rate, is the continuous one's
// times 1 − u²/12 of one pole and 1 + u²/6 or less of more.
//
// Such a pole leads by half a sample. The second of each pair takes what the first
// gave a sample ago and lags by as much: a step's response is the continuous one
// of an odd number of poles, and half a sample late of an even one, to within
// errors of the order of u². Rounding is 1e-16·rate·T of the signal.
type chain struct {
	keep, take float64 // e^−u and 1 − e^−u
	poles      int
	x, y       [MaxPoles]float64
}

// set is for a time constant of as many samples, settled to what is given.
func (c *chain) set(samples float64, poles int, at complex128) {
	c.keep = math.Exp(-1 / samples)
	c.take = 1 - c.keep // no rounding here, so dc is neither raised nor lowered
	c.poles = poles
	for k := range poles {
		c.x[k], c.y[k] = real(at), imag(at)
	}
}

func (c *chain) output() (x, y float64) { return c.x[c.poles-1], c.y[c.poles-1] }

// advance filters both channels in place.
func (c *chain) advance(x, y []float64) {
	k := 0
	for ; k+1 < c.poles; k += 2 {
		c.pair(k, x, y)
	}
	if k < c.poles {
		c.single(k, x, y)
	}
}

// pair is two poles at once: four recurrences that do not wait for each other.
func (c *chain) pair(k int, x, y []float64) {
	keep, take := c.keep, c.take
	x1, x2, y1, y2 := c.x[k], c.x[k+1], c.y[k], c.y[k+1]
	y = y[:len(x)]
	for i, v := range x {
		w := y[i]
		x2 = keep*x2 + take*x1
		x1 = keep*x1 + take*v
		y2 = keep*y2 + take*y1
		y1 = keep*y1 + take*w
		x[i], y[i] = x2, y2
	}
	c.x[k], c.x[k+1], c.y[k], c.y[k+1] = x1, x2, y1, y2
}

func (c *chain) single(k int, x, y []float64) {
	keep, take := c.keep, c.take
	x1, y1 := c.x[k], c.y[k]
	y = y[:len(x)]
	for i, v := range x {
		x1 = keep*x1 + take*v
		y1 = keep*y1 + take*y[i]
		x[i], y[i] = x1, y1
	}
	c.x[k], c.y[k] = x1, y1
}
