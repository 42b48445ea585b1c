package circuit

import "math"

const (
	boltzmann = 1.380649e-23 // J/K, exact (SI Brochure, 9th edition, 2019, section 2.2)
	zeroC     = 273.15       // K
)

// ThermalNoise gives the noise density in V/√Hz of an impedance z at one temperature throughout: √(4kT·Re z) (H. Nyquist, Physical
// Review 32 (1928) 110, equation 1). With [Response.Z] it is that at the detector's input.
func ThermalNoise(z complex128, temperatureCelsius float64) float64 {
	resistance := max(real(z), 0) // rounding may leave a pure reactance just below zero
	return math.Sqrt(4 * boltzmann * (temperatureCelsius + zeroC) * resistance)
}
