package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Moments gathers the means and covariances of several quantities without
// keeping their values (Welford, Technometrics 4 (1962) 419). Deviations from the
// mean are summed, never squares of values.
type Moments struct {
	n    int
	mean []float64
	sum  []float64 // of the products of deviations, row by row, columns not left of the diagonal used
	d    []float64 // work space: deviations from the mean so far
}

// NewMoments for so many quantities.
func NewMoments(quantities int) *Moments {
	return &Moments{mean: make([]float64, quantities), sum: make([]float64, quantities*quantities), d: make([]float64, quantities)}
}

// Add takes one value of each quantity.
func (m *Moments) Add(x ...float64) {
	m.check(len(x))
	for i := range x {
		m.d[i] = x[i] - m.mean[i]
	}
	m.join(1)
}

// Merge takes all that the other has gathered. Merging in a fixed order gives the
// same digits whatever ran at the same time.
func (m *Moments) Merge(other *Moments) {
	m.check(len(other.mean))
	if other.n == 0 {
		return
	}
	for i := range m.d {
		m.d[i] = other.mean[i] - m.mean[i]
	}
	for i, s := range other.sum {
		m.sum[i] += s
	}
	m.join(other.n)
}

// join accounts for n values whose means differ by d from those so far (Chan,
// Golub and LeVeque, The American Statistician 37 (1983) 242, equation 2.1).
func (m *Moments) join(n int) {
	share := float64(n) / float64(m.n+n)
	weight := float64(m.n) * share
	for i, di := range m.d {
		row := m.sum[i*len(m.d):]
		for j := i; j < len(m.d); j++ {
			row[j] += weight * di * m.d[j]
		}
		m.mean[i] += share * di
	}
	m.n += n
}

func (m *Moments) check(quantities int) {
	if quantities != len(m.mean) {
		panic("uncertainty: moments of another number of quantities")
	}
}

// N is the number of values of each quantity.
func (m *Moments) N() int { return m.n }

// Mean of quantity i.
func (m *Moments) Mean(i int) float64 { return m.mean[i] }

// SD is the standard deviation of quantity i, divisor n − 1; 0 for fewer than two values.
func (m *Moments) SD(i int) float64 { return math.Sqrt(m.covariance(i, i)) }

// Covariance of all quantities, divisor n − 1.
func (m *Moments) Covariance() *mat.SymDense {
	c := mat.NewSymDense(len(m.mean), nil)
	for i := range m.mean {
		for j := i; j < len(m.mean); j++ {
			c.SetSym(i, j, m.covariance(i, j))
		}
	}
	return c
}

// covariance of quantities i ≤ j.
func (m *Moments) covariance(i, j int) float64 {
	if m.n < 2 {
		return 0
	}
	return m.sum[i*len(m.mean)+j] / float64(m.n-1)
}
