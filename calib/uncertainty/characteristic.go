package uncertainty

import "math"

// sum is a sum of lines, scaled to a combined standard uncertainty of 1.
type sum struct {
	lines   []Line    // those that contribute
	scale   []float64 // their contributions
	student [][]mixed // of the lines of shape Student
	reach   float64   // the largest possible value
	spread  float64   // that of the lines with limits alone: the fastest oscillation of φ
}

func newSum(lines []Line) *sum {
	s := &sum{}
	variance := 0.0
	for _, l := range lines {
		c := math.Abs(contribution(l))
		if c == 0 {
			continue
		}
		if l.Shape == Student && math.IsInf(degrees(l.DOF), 1) {
			l.Shape = Normal
		}
		s.lines = append(s.lines, l)
		s.scale = append(s.scale, c)
		variance += c * c
	}
	if len(s.lines) == 0 {
		panic("uncertainty: without a line that contributes there is no coverage factor")
	}
	s.student = make([][]mixed, len(s.lines))
	for i, l := range s.lines {
		s.scale[i] /= math.Sqrt(variance)
		s.reach += s.scale[i] * l.Shape.halfWidth()
		if l.Shape.bounded() {
			s.spread += s.scale[i] * l.Shape.halfWidth()
		}
		if l.Shape == Student {
			s.student[i] = mixture(l.DOF)
		}
	}
	return s
}

// mixed is a part of a mixture of normal distributions about zero.
type mixed struct{ weight, variance float64 }

// mixture resolves Student's distribution into normal ones. The deviate is
// z·√(ν/χ²) (JCGM 101, 6.4.9.5), so it is normal of variance e^−s where χ² = ν·e^s; s has the
// density exp(−ν/2·(e^s − 1 − s)) but for a constant. The trapezoidal rule in s
// converges faster than any power of the step.
func mixture(dof float64) []mixed {
	step := 0.3 * min(1, math.Sqrt(2/dof))
	var parts []mixed
	total := 0.0
	add := func(s float64) bool {
		exponent := -dof / 2 * (math.Expm1(s) - s)
		w := math.Exp(exponent)
		parts = append(parts, mixed{w, math.Exp(-s)})
		total += w
		return exponent > -32
	}
	add(0)
	for i := 1.0; add(i * step); i++ {
	}
	for i := -1.0; add(i * step); i-- {
	}
	for i := range parts {
		parts[i].weight /= total
	}
	return parts
}

// characteristic is φ(t), and a bound of what it can be from t on.
func (s *sum) characteristic(t float64) (phi, bound float64) {
	phi, bound = 1, 1
	for i, l := range s.lines {
		t := t * s.scale[i]
		switch l.Shape {
		case Rectangular:
			a := math.Sqrt(3) * t
			phi *= math.Sin(a) / a
			bound *= min(1, 1/a)
		case Triangular:
			a := math.Sqrt(1.5) * t
			f := math.Sin(a) / a
			phi *= f * f
			bound *= min(1, 1/(a*a))
		case Arcsine:
			a := math.Sqrt2 * t
			phi *= math.J0(a)
			bound *= min(1, math.Sqrt(2/(math.Pi*a)))
		case Student:
			f := 0.0
			for _, m := range s.student[i] {
				f += m.weight * math.Exp(-t*t*m.variance/2)
			}
			phi *= f
			bound *= f
		default:
			f := math.Exp(-t * t / 2)
			phi *= f
			bound *= f
		}
	}
	return phi, bound
}
