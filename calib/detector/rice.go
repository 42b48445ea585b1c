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
	if sigma == 0 {
		if s < 0 {
			return -s, -1
		}
		return s, 1
	}
	x := s * s / (4 * sigma * sigma)
	if x > 1e12 { // the terms below are σ²/2|s| beside |s|: under 1e-12
		return math.Abs(s), math.Copysign(1, s)
	}
	i0, i1 := scaledBessel(x)
	root := math.Sqrt(math.Pi / 2)
	return sigma * root * ((1+2*x)*i0 + 2*x*i1), s / (2 * sigma) * root * (i0 + i1)
}

// scaledBessel is e^−x·I0(x) and e^−x·I1(x) for x ≥ 0: the power series
// (Abramowitz and Stegun 9.6.10) below 30, the asymptotic one (9.7.1) above.
func scaledBessel(x float64) (i0, i1 float64) {
	if x < 30 {
		q, t0, t1 := x*x/4, 1.0, x/2
		for k := 1.0; ; k++ {
			i0 += t0
			i1 += t1
			if t0 < 1e-17*i0 {
				break
			}
			t0 *= q / (k * k)
			t1 *= q / (k * (k + 1))
		}
		e := math.Exp(-x)
		return i0 * e, i1 * e
	}
	asymptotic := func(mu float64) float64 {
		sum, term := 1.0, 1.0
		for k := 1.0; k < 30; k++ {
			next := -term * (mu - (2*k-1)*(2*k-1)) / (k * 8 * x)
			if math.Abs(next) >= math.Abs(term) || math.Abs(next) < 1e-17 {
				break
			}
			term = next
			sum += term
		}
		return sum / math.Sqrt(2*math.Pi*x)
	}
	return asymptotic(0), asymptotic(4)
}
