// Package detector holds the physics of a synchronous detector by itself: what
// its filter lets through, how long it takes to settle, and what noise does to a
// magnitude. SI units; voltages in V rms.
package detector

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// MaxPoles is the longest chain of low-pass poles.
const MaxPoles = 8

func check(timeConstant float64, poles int) {
	if !(timeConstant > 0) || poles < 1 || poles > MaxPoles {
		panic("detector: a filter has a time constant above zero and 1 to 8 poles")
	}
}

// NoiseBandwidth is the equivalent noise bandwidth, in Hz, of a chain of n equal
// low-pass poles of a time constant in s. By integration of |H|² = (1 + (2πfT)²)^−n
// over f from zero: B·T = Γ(n − ½)/(4√π·Γ(n)).
func NoiseBandwidth(timeConstant float64, poles int) float64 {
	check(timeConstant, poles)
	n := float64(poles)
	return math.Gamma(n-0.5) / (4 * math.Sqrt(math.Pi) * math.Gamma(n)) / timeConstant
}

// Cutoff is the frequency, in Hz, at which the chain lets half the power through:
// f·T = √(2^(1/n) − 1)/2π.
func Cutoff(timeConstant float64, poles int) float64 {
	check(timeConstant, poles)
	return math.Sqrt(math.Exp2(1/float64(poles))-1) / (2 * math.Pi * timeConstant)
}

// Gain is |H| of the chain at f Hz.
func Gain(f, timeConstant float64, poles int) float64 {
	check(timeConstant, poles)
	x := 2 * math.Pi * f * timeConstant
	return math.Pow(1+x*x, -float64(poles)/2)
}

// Settling is the time, in s, after a step of the input at which a share of the
// step is still missing from the output: the step response of n poles is the
// distribution function of Gamma(n, 1) in t/T. The share is above 0; of 1 or more
// it is there at once.
func Settling(timeConstant float64, poles int, remainder float64) float64 {
	check(timeConstant, poles)
	if remainder >= 1 {
		return 0
	}
	if !(remainder > 0) {
		panic("detector: a filter never settles to nothing")
	}
	return timeConstant * mathext.GammaIncRegCompInv(float64(poles), remainder)
}
