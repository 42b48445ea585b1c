package detector

import "math"

// RiceMean is the mean of |s + noise|, the noise having independent normal parts
// of standard deviation sigma along and across the signal s, and the mean's
// slope with s (Rice, Bell System Technical Journal 24 (1945) 46, section 3.10):
//
//	mean = σ·√(π/2)·e^−x·((1 + 2x)·I0(x) + 2x·I1(x)),  x = s²/4σ²
//	slope = (s/2σ)·√(π/2)·e^−x·(I0(x) + I1(x))
//
// The mean is even in s. It exceeds |s| by σ²/2|s| where the signal is strong,
// and is σ·√(π/2) where there is none.
func RiceMean(s, sigma float64) (mean, slope float64) {
	checkDeviation(sigma)
	if sigma == 0 {
		if s < 0 {
			return -s, -1
		}
		return s, 1
	}
	a := s / sigma
	x := a * a / 4
	if x > 1e16 { // σ²/2|s| is beyond the last bit of |s|
		return math.Abs(s), math.Copysign(1, s)
	}
	i0, i1 := scaledBessel(x)
	root := math.Sqrt(math.Pi / 2)
	return sigma * root * ((1+2*x)*i0 + 2*x*i1), a / 2 * root * (i0 + i1)
}

// RiceVariance is the variance of |s + noise|, in V². The mean square being
// s² + 2σ², it is what the mean's square leaves of that: σ²·(2 − π/2) without a
// signal, σ² with a strong one.
func RiceVariance(s, sigma float64) float64 {
	checkDeviation(sigma)
	if sigma == 0 {
		return 0
	}
	a := math.Abs(s) / sigma
	if a < 30 {
		mean, _ := RiceMean(a, 1)
		return sigma * sigma * (a*a + 2 - mean*mean)
	}
	// The difference loses its digits. With the mean's asymptotic series
	// a·(1 + 1/2a² + 1/8a⁴ + 3/16a⁶ + 75/128a⁸ + 735/256a¹⁰ + …), which is that of
	// the confluent hypergeometric function (Abramowitz and Stegun 13.5.1):
	q := 1 / (a * a)
	return sigma * sigma * (1 - q*(1.0/2+q*(1.0/2+q*(11.0/8+q*51.0/8))))
}

func checkDeviation(sigma float64) {
	if sigma < 0 {
		panic("detector: a standard deviation is not negative")
	}
}
