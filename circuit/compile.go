package circuit

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
)

const (
	maxVariables     = 10    // of Compile: 1024 coefficients
	compiledAccuracy = 1e-12 // relative, of H; what Solve itself keeps
)

// Compile gives H at f Hz as a function of up to 10 of the ladder's numbers, for any values of them of 0 or more. It is for work that needs
// H at very many of them, such as a Monte Carlo simulation. It takes 2^q solutions of the ladder, and the form pays up to about 5 variables.
//
// The form is exact. One impedance bears on a network's determinant and on each of its cofactors linearly, so every transfer is bilinear in it,
// (a + b·x)/(c + d·x), and in several together a quotient of multi-affine polynomials (H. W. Bode, Network Analysis and Feedback Amplifier
// Design, 1945, on the bilinear theorem, from memory). So is it in 1 + jωC·Z, and thereby in C.
//
// The coefficients are differences of N and D between the corners of a box, each variable being 0 or far beyond all impedances that it meets.
// That keeps their digits: at a corner the product of its variables outweighs all that is taken off. And the terms of D do not cancel. What is left
// with a resistance shorted or taken out is passive like the whole, so D = d·(Z + x), Z what the resistance meets, Re Z ≥ 0; therefore
// |Z| + x ≤ √2·|Z + x|, and so on for Z's own parts.
//
// Compile compares the form with [Ladder.Transfer] at a few places around the ladder's own values, and fails where it is off by more than 1e-12:
// where two signals nearly cancel at the detector, or an undamped resonance is close.
func (l *Ladder) Compile(f float64, variables []Variable) (*Compiled, error) {
	if err := l.checkCompile(f, variables); err != nil {
		return nil, err
	}
	work := *l
	work.Arms = slices.Clone(l.Arms)
	places := make([]*float64, len(variables))
	for k, v := range variables {
		places[k] = v.In(&work)
	}
	var ws Workspace
	_, d, exponent := ws.fraction(&work, f)
	if d == 0 || cmplx.IsNaN(d) || cmplx.IsInf(d) {
		return nil, errors.New("a loop of the ladder has no impedance at all, so its currents are not determined; want a resistance in it")
	}
	box := make([]float64, len(variables))
	impedance := cmplx.Abs(work.Solve(f, &ws).InputImpedance)
	for k, v := range variables {
		box[k] = v.reach(*places[k], impedance, 2*math.Pi*f)
	}

	c := &Compiled{make([]quotient, 1<<len(variables))}
	for corner := range c.coefficients {
		for k, place := range places {
			*place = 0
			if corner&digit(k, len(places)) != 0 {
				*place = box[k]
			}
		}
		n, d, e := ws.fraction(&work, f)
		c.coefficients[corner] = quotientOf(n, d, e-exponent)
	}
	for k := range variables {
		bit := digit(k, len(variables))
		for i, high := range c.coefficients {
			if i&bit != 0 {
				low := c.coefficients[i-bit]
				c.coefficients[i] = quotient{}.plus(high.plus(low, -1), 1/box[k])
			}
		}
	}
	if err := c.compare(l, f, variables, box); err != nil {
		return nil, err
	}
	return c, nil
}

// digit is that of variable k in the number of a coefficient or a corner.
func digit(k, variables int) int { return 1 << (variables - 1 - k) }

func (l *Ladder) checkCompile(f float64, variables []Variable) error {
	if err := l.Check(); err != nil {
		return err
	}
	if !(f >= 0) || math.IsInf(f, 1) {
		return fmt.Errorf("frequency is %g Hz, want a finite value of 0 or more", f)
	}
	if len(variables) > maxVariables {
		return fmt.Errorf("%d variables, want at most %d", len(variables), maxVariables)
	}
	var places []*float64
	for _, v := range variables {
		switch {
		case v.Element < 0 || v.Element >= elements:
			return fmt.Errorf("%v to vary: a ladder has no such element", v)
		case v.Element.ofArm() && (v.Arm < 0 || v.Arm >= len(l.Arms)):
			return fmt.Errorf("%v to vary: want an arm of 1 to %d", v, len(l.Arms))
		case v.Element.ofArm() && l.Arms[v.Arm].Place == Tap:
			return fmt.Errorf("%v to vary: that arm is a tap and has no element", v)
		case slices.Contains(places, v.In(l)):
			return fmt.Errorf("%v to vary: named twice", v)
		case math.IsInf(*v.In(l), 1):
			return fmt.Errorf("%v to vary: the input is open, want a finite value", v)
		}
		places = append(places, v.In(l))
	}
	return nil
}

// reach is the far end of the box for a variable of some nominal value in a ladder of some input impedance: 10¹² times the greater. A power
// of two, so that scaling rounds nothing.
func (v Variable) reach(nominal, impedance, omega float64) float64 {
	switch v.Element {
	case ArmL:
		impedance /= omega
	case ArmC, InputC:
		impedance = 1 / (impedance * omega)
	}
	if math.IsInf(impedance, 1) { // at DC: of no effect
		impedance = 1
	}
	_, exponent := math.Frexp(max(nominal, impedance))
	return math.Ldexp(1, exponent+40)
}

// fraction solves the ladder and gives H as N/D, both over 2^exponent.
//
// D is the determinant of the ladder's loops: the product of the impedances around each of them, those nearer to the generator opened. The solution
// goes through them anyway. An element with C across it adds a factor 1 + jωC·(R + jωL), the detector's R a loop of its own. Where a loop
// has nothing in it but shorts, N vanishes with D.
func (w *Workspace) fraction(l *Ladder, f float64) (n, d complex128, exponent int) {
	unloaded := *l
	unloaded.Input.R = math.Inf(1)
	h, z := w.solve(&unloaded, f)
	d = 1
	loop := func(impedance complex128) {
		d *= impedance
		_, e := math.Frexp(max(math.Abs(real(d)), math.Abs(imag(d))))
		d = scaled(d, -e)
		exponent += e
	}
	beyond := open
	for k := len(w.branches) - 1; k >= 0; k-- {
		b := &w.branches[k]
		if !isOpen(b.shunt) && !isOpen(beyond) {
			loop(b.shunt + beyond)
		}
		if _, share := l.Arms[k].impedance(w.omega); share != 1 {
			loop(1 / share)
		}
		beyond = b.series + b.below
	}
	loop(complex(l.Source+l.Return+l.ReturnSeen, 0) + beyond)
	if d == 0 {
		return 0, 0, 0
	}
	loop(1 / w.intoLadder)
	if r := l.Input.R; !math.IsInf(r, 1) {
		return h * d * complex(r, 0), d * (complex(r, 0) + z), exponent
	}
	return h * d, d, exponent
}

// scaled gives z·2^exponent.
func scaled(z complex128, exponent int) complex128 {
	return complex(math.Ldexp(real(z), exponent), math.Ldexp(imag(z), exponent))
}

func quotientOf(n, d complex128, exponent int) quotient {
	n, d = scaled(n, exponent), scaled(d, exponent)
	return quotient{real(n), imag(n), real(d), imag(d)}
}

// compare holds the form against the ladder where each variable has its nominal value, half or twice that. Where that is 0, it takes 0 and two
// values that may be felt.
func (c *Compiled) compare(l *Ladder, f float64, variables []Variable, box []float64) error {
	work := *l
	work.Arms = slices.Clone(l.Arms)
	var ws Workspace
	x := make([]float64, len(variables))
	for trial := range 7 {
		for k, v := range variables {
			nominal := *v.In(l)
			factors, unit := [3]float64{1, 0.5, 2}, nominal
			if nominal == 0 {
				factors, unit = [3]float64{0, 1e-15, 1e-12}, box[k]
			}
			x[k] = unit * factors[pattern(trial, k)]
			*v.In(&work) = x[k]
		}
		want, got := work.Transfer(f, &ws), c.Transfer(x)
		if off := cmplx.Abs(got - want); !(off <= compiledAccuracy*cmplx.Abs(want)) {
			return fmt.Errorf("the transfer as a function of %v would be off by a share of %.2g, want at most %g: signals cancel at the detector, "+
				"or an undamped resonance is close to %g Hz", variables, off/cmplx.Abs(want), compiledAccuracy, f)
		}
	}
	return nil
}

// pattern chooses one of three values for variable k: all alike in the first three trials, mixed in the others.
func pattern(trial, k int) int {
	if trial < 3 {
		return trial
	}
	return (trial + k*(1+trial%2)) % 3
}
