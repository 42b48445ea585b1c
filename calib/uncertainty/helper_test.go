package uncertainty

import (
	"math"
	"math/rand/v2"

	"pgregory.net/rapid"
)

// within fails where got is further from want than the tolerance, or no number.
func within(t rapid.TB, name string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g ± %.2g", name, got, want, tolerance)
	}
}

// relative is within of a share of want.
func relative(t rapid.TB, name string, got, want, tolerance float64) {
	t.Helper()
	within(t, name, got, want, tolerance*math.Abs(want))
}

// lines of one shape and contributions u.
func lines(shape Shape, dof float64, u ...float64) []Line {
	var all []Line
	for _, u := range u {
		all = append(all, Line{U: u, Sensitivity: 1, Shape: shape, DOF: dof})
	}
	return all
}

// input of a model: a value and a deviate of standard uncertainty u about it.
type input struct {
	shape         Shape
	value, u, dof float64
}

// between is a rectangular input with these limits.
func between(low, high float64) input {
	return input{Rectangular, (low + high) / 2, (high - low) / 2 / math.Sqrt(3), 0}
}

func (in input) draw(rng *rand.Rand) float64 { return in.value + in.u*Draw(in.shape, in.dof, rng) }

// simulate is the Monte Carlo of a model in so many trials.
func simulate(trials int, seed uint64, model func(rng *rand.Rand) float64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 101))
	values := make([]float64, trials)
	for i := range values {
		values[i] = model(rng)
	}
	return values
}
