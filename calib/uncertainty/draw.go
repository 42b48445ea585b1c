package uncertainty

import (
	"math"
	"math/rand/v2"
)

// Draw gives a random deviate of a shape about zero with standard uncertainty 1
// (JCGM 101, 6.4). Student's is t itself, whose standard deviation is √(ν/(ν−2))
// and not 1, and which has none at ν ≤ 2. The degrees of freedom count for Student only.
func Draw(shape Shape, dof float64, rng *rand.Rand) float64 {
	switch shape {
	case Rectangular:
		return shape.halfWidth() * (2*rng.Float64() - 1)
	case Triangular:
		return shape.halfWidth() * (rng.Float64() - rng.Float64())
	case Arcsine:
		return shape.halfWidth() * math.Sin(2*math.Pi*rng.Float64())
	case Student:
		if nu := degrees(dof); !math.IsInf(nu, 1) {
			return drawStudent(nu, rng)
		}
	}
	return rng.NormFloat64()
}

// drawStudent is the polar method of Bailey, Mathematics of Computation 62 (1994) 779:
// with (a, b) uniform in the unit disc and w = a² + b², a·√(ν·(w^(−2/ν) − 1)/w) is
// distributed as t, whole ν or not.
func drawStudent(nu float64, rng *rand.Rand) float64 {
	for {
		a, b := 2*rng.Float64()-1, 2*rng.Float64()-1
		if w := a*a + b*b; w > 0 && w <= 1 {
			return a * math.Sqrt(nu*math.Expm1(-2/nu*math.Log(w))/w)
		}
	}
}
