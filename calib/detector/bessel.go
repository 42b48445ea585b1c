package detector

import "math"

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
