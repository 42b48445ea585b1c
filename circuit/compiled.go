package circuit

import "math/bits"

// Compiled is a ladder's transfer at one frequency as a function of a few variables x₁ … x_q, all else fixed:
//
//	H(x) = N(x)/D(x),  N and D multi-affine: Σ over the subsets S of {1 … q} of a complex coefficient times Π xₖ, k in S
//
// [Ladder.Compile] makes one. H has a relative accuracy of 1e-12. Any number of goroutines may use a Compiled that none of them contracts
// into. With too many or too few values its methods panic. Where the values leave a loop with nothing but shorts, two shunts of 0 Ω side by
// side for one, N = D = 0 and the results are NaN.
type Compiled struct {
	// The coefficient of a subset S stands at the number whose binary digits say who is in S, the first variable's digit being the highest.
	// So the polynomials without x₁ are the first half of all, and those that x₁ multiplies the second.
	coefficients []quotient
}

// quotient is N and D of one transfer, or one coefficient of each. Four real numbers stay in registers, and Go's division of complex
// numbers is several times slower than what Transfer does.
type quotient struct{ nRe, nIm, dRe, dIm float64 }

// plus gives q + x·p.
func (q quotient) plus(p quotient, x float64) quotient {
	return quotient{q.nRe + x*p.nRe, q.nIm + x*p.nIm, q.dRe + x*p.dRe, q.dIm + x*p.dIm}
}

// value gives N/D = N·D*/|D|².
func (q quotient) value() complex128 {
	scale := 1 / (q.dRe*q.dRe + q.dIm*q.dIm)
	return complex((q.nRe*q.dRe+q.nIm*q.dIm)*scale, (q.nIm*q.dRe-q.nRe*q.dIm)*scale)
}

// Variables tells how many variables are left.
func (c *Compiled) Variables() int { return bits.Len(uint(len(c.coefficients))) - 1 }

// Contract fixes the first len(x) variables and leaves what remains, a function of the others, in another Compiled. What many states share is
// so worked out once. The zero value will do for into; its storage is used again.
func (c *Compiled) Contract(x []float64, into *Compiled) {
	if len(x) > c.Variables() {
		panic("circuit: Contract of more variables than there are")
	}
	from := c.coefficients
	size := len(from) >> len(x)
	if room := max(size, len(from)/2); cap(into.coefficients) < room {
		into.coefficients = make([]quotient, room)
	}
	to := into.coefficients[:cap(into.coefficients)]
	if len(x) == 0 {
		copy(to, from)
	}
	for _, xk := range x {
		from = contract(from, xk, to)
	}
	into.coefficients = to[:size]
}

// contract fixes the first variable. to may be where the coefficients already are.
func contract(from []quotient, x float64, to []quotient) []quotient {
	half := len(from) / 2
	without, with, to := from[:half], from[half:][:half], to[:half]
	for i := range to {
		to[i] = without[i].plus(with[i], x)
	}
	return to
}

// at gives N and D at x, which has all variables.
func at(c []quotient, x []float64) quotient {
	switch len(x) {
	case 0:
		return c[0]
	case 1:
		return c[0].plus(c[1], x[0])
	case 2:
		c := (*[4]quotient)(c)
		return c[0].plus(c[1], x[1]).plus(c[2].plus(c[3], x[1]), x[0])
	}
	half := len(c) / 2
	return at(c[:half], x[1:]).plus(at(c[half:], x[1:]), x[0])
}

// Transfer gives H.
func (c *Compiled) Transfer(x []float64) complex128 {
	if len(c.coefficients) != 1<<len(x) {
		panic("circuit: Transfer with more or fewer values than variables")
	}
	return at(c.coefficients, x).value()
}

// Squared gives |H|² where one variable is left.
func (c *Compiled) Squared(x float64) float64 {
	if len(c.coefficients) != 2 {
		panic("circuit: Squared without exactly one variable left")
	}
	q := c.coefficients[0].plus(c.coefficients[1], x)
	return (q.nRe*q.nRe + q.nIm*q.nIm) / (q.dRe*q.dRe + q.dIm*q.dIm)
}

// Gradient gives H, and in dh its derivatives by all variables, each in 1 over its variable's unit. With N = N₀ + N₁·xₖ and likewise D,
//
//	∂H/∂xₖ = (N₁·D₀ − N₀·D₁)/D²
//
// which is a product by the shunt arm of a divider, where (N₁ − H·D₁)/D would be a difference. Each is good to 1e-12 of itself and of H over the
// impedance that the variable meets.
func (c *Compiled) Gradient(x []float64, dh []complex128) complex128 {
	if len(c.coefficients) != 1<<len(x) || len(dh) != len(x) {
		panic("circuit: Gradient with more or fewer values or derivatives than variables")
	}
	if len(x) == 0 {
		return c.coefficients[0].value()
	}
	const few = 3
	var small [1 << (few - 1)]quotient
	work := small[:]
	if len(x) > few {
		var large [1 << (maxVariables - 1)]quotient
		work = large[:]
	}
	from := c.coefficients
	last := len(x) - 1
	for k, xk := range x[:last] {
		half := len(from) / 2
		dh[k] = slope(at(from[:half], x[k+1:]), at(from[half:], x[k+1:]))
		from = contract(from, xk, work)
	}
	dh[last] = slope(from[0], from[1])
	q := from[0].plus(from[1], x[last])
	scale := 1 / (q.dRe*q.dRe + q.dIm*q.dIm)
	re, im := (q.dRe*q.dRe-q.dIm*q.dIm)*scale*scale, -2*q.dRe*q.dIm*scale*scale // 1/D²
	for k, d := range dh {
		dh[k] = complex(real(d)*re-imag(d)*im, real(d)*im+imag(d)*re)
	}
	return complex((q.nRe*q.dRe+q.nIm*q.dIm)*scale, (q.nIm*q.dRe-q.nRe*q.dIm)*scale)
}

// slope gives N₁·D₀ − N₀·D₁ of N₀ and D₀, without a variable, and N₁ and D₁, that it multiplies.
func slope(q0, q1 quotient) complex128 {
	return complex(
		q1.nRe*q0.dRe-q1.nIm*q0.dIm-q0.nRe*q1.dRe+q0.nIm*q1.dIm,
		q1.nRe*q0.dIm+q1.nIm*q0.dRe-q0.nRe*q1.dIm-q0.nIm*q1.dRe)
}
