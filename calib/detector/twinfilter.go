package detector

import "math"

// chain is the low-pass of both channels, run at the full rate. Each pole is the
// continuous one matched, z = e^−u with u = 1/(rate·T), and lets dc through as it
// is: y ← e^−u·y + (1 − e^−u)·x. Of n poles
//
//	|H|² = (1 + sin²(πf/rate)/sinh²(u/2))^−n
//
// which exceeds the continuous chain's |H| by at most (a/sin a)ⁿ − 1 with
// a = πf/rate: 1 % where 13 samples a period and one pole are taken, 2.7 % where 8.
// White noise comes out as of the continuous bandwidth to within n·u²/8, relative
// (of one pole the bandwidth is tanh(u/2)/2T·… of 1/4T).
//
// Such a pole leads by half a sample. The second of each pair takes what the first
// gave a sample ago and lags by as much: a step's response is the continuous one
// of an odd number of poles, and half a sample late of an even one, with an error
// of the order of u² besides.
type chain struct {
	keep, take float64 // e^−u and 1 − e^−u
	poles      int
	x, y       [MaxPoles]float64
}

func (c *chain) set(samples float64, poles int, at complex128) {
	c.take = -math.Expm1(-1 / samples)
	c.keep = 1 - c.take
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
