package uncertainty

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// Each shape against its distribution function by Kolmogorov and Smirnov's statistic: among 2·10⁵ values it exceeds
// 1.95/√n once in a thousand (common table).
func TestDrawFollowsTheDistribution(t *testing.T) {
	const n = 200_000
	triangle := func(x float64) float64 {
		below := math.Pow(1-min(math.Abs(x)/math.Sqrt(6), 1), 2) / 2
		if x > 0 {
			return 1 - below
		}
		return below
	}
	for _, c := range []struct {
		shape Shape
		dof   float64
		cdf   func(float64) float64
	}{
		{Normal, 3, distuv.UnitNormal.CDF}, // degrees of freedom do not count
		{Rectangular, 0, distuv.Uniform{Min: -math.Sqrt(3), Max: math.Sqrt(3)}.CDF},
		{Triangular, 0, triangle},
		{Arcsine, 0, func(x float64) float64 { return 0.5 + math.Asin(x/math.Sqrt2)/math.Pi }},
		{Student, 1, distuv.StudentsT{Sigma: 1, Nu: 1}.CDF},
		{Student, 2.5, distuv.StudentsT{Sigma: 1, Nu: 2.5}.CDF},
		{Student, 18, distuv.StudentsT{Sigma: 1, Nu: 18}.CDF},
		{Student, 1e12, distuv.UnitNormal.CDF},
		{Student, 0, distuv.UnitNormal.CDF},
		{Student, math.Inf(1), distuv.UnitNormal.CDF},
	} {
		values := simulate(n, 64, input{c.shape, 0, 1, c.dof}.draw)
		slices.Sort(values)
		distance := 0.0
		for i, v := range values {
			distance = max(distance, c.cdf(v)-float64(i)/n, float64(i+1)/n-c.cdf(v))
		}
		if distance > 1.95/math.Sqrt(n) {
			t.Errorf("%v, ν = %g: distance %.5f", c.shape, c.dof, distance)
		}
		if limit := c.shape.halfWidth(); values[0] < -limit || values[n-1] > limit {
			t.Errorf("%v: from %g to %g", c.shape, values[0], values[n-1])
		}
	}
}

// The standard deviation is 1, Student's √(ν/(ν−2)) (JCGM 101, 6.4.9.4).
func TestDrawStandardDeviation(t *testing.T) {
	for _, c := range []struct {
		shape    Shape
		dof, std float64
	}{{Normal, 0, 1}, {Rectangular, 0, 1}, {Triangular, 0, 1}, {Arcsine, 0, 1}, {Student, 10, math.Sqrt(10.0 / 8)}} {
		m := NewMoments(1)
		for _, v := range simulate(200_000, 65, input{c.shape, 0, 1, c.dof}.draw) {
			m.Add(v)
		}
		relative(t, c.shape.String(), m.SD(0), c.std, 4*0.0019) // √((κ−1)/4n), the largest at ν = 10: κ = 4
	}
}
