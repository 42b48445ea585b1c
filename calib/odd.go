package calib

import (
	"math"
	"sort"
)

// OddReading is a step whose reading is out of all proportion to the others.
type OddReading struct {
	Step    string  `json:"step"`
	Reading float64 `json:"reading"` // V rms
	Likely  float64 `json:"likely"`  // what the other steps let expect there, V rms
	Ratio   float64 `json:"ratio"`   // of the two
}

// oddReadings are the steps whose ratio of reading to drop differs from the median
// ratio by the factor given or more, and by far more than the scatter: a slip of
// the decimal point, of the unit, of the range. The farthest comes first.
func (m *model) oddReadings(factor float64) []OddReading {
	m.forward.compute(m.forward.stated(), 0)
	type pair struct {
		i                     int
		ratio, expected, read float64
	}
	var all []pair
	for i := range m.obs {
		o := &m.obs[i]
		x := m.expect(i)
		read := real(o.mean) // the magnitude of two-phase readings, whose phase is not known yet
		if m.axes == 2 {
			read = math.Hypot(real(o.mean), imag(o.mean))
		}
		if math.Abs(x.value) > 20*o.along && !o.left {
			all = append(all, pair{i, read / x.value, x.value, read})
		}
	}
	if len(all) < 3 {
		return nil
	}
	sort.SliceStable(all, func(a, b int) bool { return all[a].ratio < all[b].ratio })
	middle := all[len(all)/2].ratio
	if middle == 0 {
		return nil
	}
	var out []OddReading
	for _, p := range all {
		off := p.ratio / middle
		if far := math.Abs(p.read - middle*p.expected); (off > factor || off < 1/factor) && far > 100*m.obs[p.i].along {
			out = append(out, OddReading{m.plan.Steps[m.obs[p.i].step].ID, p.read, middle * p.expected, off})
		}
	}
	distance := func(r float64) float64 {
		if r <= 0 {
			return math.Inf(1)
		}
		return math.Abs(math.Log(r))
	}
	sort.SliceStable(out, func(a, b int) bool { return distance(out[a].Ratio) > distance(out[b].Ratio) })
	return out
}
