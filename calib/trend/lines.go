package trend

import (
	"math"
	"slices"
	"time"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"

	"rungproof/calib/fit"
)

// lines is the model of a history: in segment s, at x years from the last result,
//
//	value = level_s + slope·x + UCommon·z_standards + e,   z = 0 ± 1,   e = 0 ± scale·independent
//
// With each z a parameter known beforehand, plain least squares give the estimate and χ²
// of generalised least squares with the covariance UCommon_i·UCommon_j between results of
// the same standards.
type lines struct {
	points  []Point
	segment []int
	last    time.Time // x = 0
	slope   []int     // of each segment: the parameter that is its slope; −1: none can be told
	common  map[string]int
	params  int
	priors  []fit.Prior
}

func newLines(points []Point, o Options) *lines {
	l := &lines{points: points, segment: segments(points), last: points[len(points)-1].Time, common: map[string]int{}}
	n := l.segment[len(points)-1] + 1
	l.slope, l.params = slices.Repeat([]int{-1}, n), n
	if o.SlopeEach {
		for s := range n {
			l.addSlope(s, s+1, o.Assumed)
		}
	} else {
		l.addSlope(0, n, o.Assumed)
	}
	for _, p := range points {
		if _, known := l.common[p.Standards]; !known && p.common() > 0 {
			l.common[p.Standards] = l.params
			l.priors = append(l.priors, fit.Prior{Param: l.params, Value: 0, U: 1})
			l.params++
		}
	}
	return l
}

// addSlope gives the segments from first up to end one slope, if there is a way to know
// it: results of one segment on two dates, or else an assumption.
func (l *lines) addSlope(first, end int, assumed *Assumed) {
	determined := false
	for i := 1; i < len(l.points); i++ {
		s := l.segment[i]
		determined = determined || first <= s && s < end && l.segment[i-1] == s && l.points[i].Time.After(l.points[i-1].Time)
	}
	if !determined && assumed == nil {
		return
	}
	if !determined {
		l.priors = append(l.priors, fit.Prior{Param: l.params, Value: assumed.PerYear, U: assumed.U})
	}
	for s := first; s < end; s++ {
		l.slope[s] = l.params
	}
	l.params++
}

// assumed tells whether a slope is not found but assumed.
func (l *lines) assumed(slope int) bool {
	return slices.ContainsFunc(l.priors, func(p fit.Prior) bool { return p.Param == slope }) // a slope has no other prior
}

func (l *lines) x(t time.Time) float64 { return years(t.Sub(l.last)) }

// measured is the derivative by the parameters of a result in segment s at x, measured as
// p was.
func (l *lines) measured(p Point, s int, x float64) []float64 {
	g := make([]float64, l.params)
	g[s] = 1
	if k := l.slope[s]; k >= 0 {
		g[k] = x
	}
	if k, shared := l.common[p.Standards]; shared {
		g[k] = p.common()
	}
	return g
}

// solve fits the lines with the independent parts enlarged by scale.
func (l *lines) solve(scale float64) (*fit.Result, error) {
	sigma := make([]float64, len(l.points))
	for i, p := range l.points {
		sigma[i] = scale * p.independent()
	}
	return fit.Solve(fit.Problem{
		N: len(l.points), Sigma: sigma, Start: make([]float64, l.params), Priors: l.priors,
		Residuals: func(params, r []float64, jac *mat.Dense) {
			for i, p := range l.points {
				g := l.measured(p, l.segment[i], l.x(p.Time))
				jac.SetRow(i, g)
				r[i] = p.Value - floats.Dot(g, params)
			}
		},
	})
}

// birge fits the lines with the independent parts so enlarged that χ² is what is
// expected, ν. Without common parts that is the Birge ratio,
//
//	R = √(χ²/ν)    Birge, Phys. Rev. 40 (1932) 207; Bodnar and Elster, Metrologia 51 (2014) 516
//
// Common parts do not scatter, and stay as stated.
func (l *lines) birge(r *fit.Result) (float64, *fit.Result, error) {
	expected := float64(r.DOF)
	low, high := 1., math.Sqrt(r.ChiSquared/expected)
	if len(l.common) == 0 {
		r, err := l.solve(high)
		return high, r, err
	}
	for {
		r, err := l.solve(high)
		if err != nil {
			return 0, nil, err
		}
		if r.ChiSquared <= expected {
			break
		}
		low, high = high, 2*high
	}
	for high > low*(1+1e-9) {
		middle := math.Sqrt(low * high)
		r, err := l.solve(middle)
		if err != nil {
			return 0, nil, err
		}
		if r.ChiSquared > expected {
			low = middle
		} else {
			high = middle
		}
	}
	r, err := l.solve(high)
	return high, r, err
}
