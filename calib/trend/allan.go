package trend

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat"
)

// Estimator is a way to estimate the Allan deviation.
type Estimator int

// The estimators of NIST SP 1065, clause 5.2.
const (
	Plain       Estimator = iota
	Overlapping           // of all pairs: the same quantity with less scatter, the usual choice
	Modified              // parts white from flicker noise of the readings' sum
)

// Stability is an Allan deviation over one averaging time.
type Stability struct {
	Averaged  int     // readings in each mean, m
	Tau       float64 // averaging time m·τ₀, s
	Deviation float64 // in the readings' unit
	Terms     int     // squares in the mean; overlapping ones are not independent
}

// Allan is the Allan deviation of readings y at equal distances of tau0 seconds, each
// averaged since the one before, in means of m. With x the running sum of y and d_i =
// x_{i+2m} − 2x_{i+m} + x_i (NIST SP 1065, clause 5.2, where y is a fractional frequency):
//
//	plain, overlapping  σ² = mean of d_i²/2m², i = 0, m, 2m, … or all
//	modified            σ² = mean of (d_i + … + d_{i+m−1})²/2m⁴, all i
func Allan(y []float64, tau0 float64, m int, e Estimator) (Stability, error) {
	if m < 1 || !(tau0 > 0) {
		panic(fmt.Sprintf("trend: Allan deviation of means of %d readings, %g s apart", m, tau0))
	}
	least := 2 * m
	if e == Modified {
		least = 3*m - 1
	}
	if len(y) < least {
		return Stability{}, fmt.Errorf("%d readings are too few for an Allan deviation of means of %d; it takes %d", len(y), m, least)
	}
	x := make([]float64, len(y)+1)
	mean := stat.Mean(y, nil)
	for i, v := range y {
		x[i+1] = x[i] + v - mean
	}
	d := make([]float64, len(x)-2*m)
	for i := range d {
		d[i] = x[i+2*m] - 2*x[i+m] + x[i]
	}
	step := 1
	switch e {
	case Plain:
		step = m
	case Modified:
		d = movingMeans(d, m)
	}
	s := Stability{Averaged: m, Tau: float64(m) * tau0}
	var sum float64
	for i := 0; i < len(d); i += step {
		sum += d[i] * d[i]
		s.Terms++
	}
	s.Deviation = math.Sqrt(sum/2/float64(s.Terms)) / float64(m)
	return s, nil
}

// movingMeans gives the mean of each m neighbours.
func movingMeans(d []float64, m int) []float64 {
	out := make([]float64, len(d)-m+1)
	var sum float64
	for i, v := range d {
		sum += v
		if i >= m {
			sum -= d[i-m]
		}
		if i >= m-1 {
			out[i-m+1] = sum / float64(m)
		}
	}
	return out
}

// Allans is the Allan deviation over 1, 2, 4, … readings, as far as y reaches.
func Allans(y []float64, tau0 float64, e Estimator) []Stability {
	var out []Stability
	for m := 1; ; m *= 2 {
		s, err := Allan(y, tau0, m, e)
		if err != nil {
			return out
		}
		out = append(out, s)
	}
}
