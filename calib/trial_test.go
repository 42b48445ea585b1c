package calib

import (
	"math"
	"math/rand/v2"
	"testing"
)

// A settled trial is the estimate that a fit from scratch makes of the same draw,
// to a millionth of a standard uncertainty, and not its linearisation, which is
// checked to be farther off somewhere. For two-phase readings the fit from scratch
// turns its axes with the draw, a trial does not: a thousandth.
func TestTrialIsTheFullEstimate(t *testing.T) {
	for _, name := range []string{"arrival", "string", "quadrature", "one-amplitude"} {
		t.Run(name, func(t *testing.T) {
			e := evaluateCase(t, name)
			trial := newTrial(e.privateModel(), e.deciding)
			random := rand.New(rand.NewPCG(1, 2))
			farthest, tolerance := 0.0, 1e-6
			if e.model.axes == 2 {
				tolerance = 1e-3
			}
			for range 10 {
				trial.draw(random)
				if !trial.settle() {
					t.Fatal("not settled")
				}
				drawn := *e.model
				drawn.forward = newForward(e.Plan)
				for k := range drawn.forward.inputs {
					drawn.forward.inputs[k].Value = trial.prior[k]
				}
				drawn.obs = append([]observation(nil), e.model.obs...)
				for i, r := range trial.rows {
					drawn.obs[r.obs].mean = trial.read[i]
				}
				full, err := drawn.estimate(e.deciding.gain, e.deciding.held)
				if err != nil {
					t.Fatal(err)
				}
				for k, p := range trial.p {
					if off := math.Abs(p-full.result.P[k]) / trial.u[k]; off > tolerance {
						t.Errorf("parameter %d is %.2g u off the full estimate", k, off)
					}
					linear := trial.from[k] + dot(trial.gain[k*len(trial.delta):(k+1)*len(trial.delta)], trial.delta)
					farthest = math.Max(farthest, math.Abs(linear-full.result.P[k])/trial.u[k])
				}
			}
			if farthest < 2*tolerance {
				t.Errorf("the linear estimate is nowhere more than %.2g u off: this test shows nothing", farthest)
			}
		})
	}
}

func BenchmarkTrialArrival(b *testing.B) {
	e := evaluateCase(b, "arrival")
	t := newTrial(e.privateModel(), e.deciding)
	random := rand.New(rand.NewPCG(1, 2))
	b.ReportAllocs()
	for b.Loop() {
		t.draw(random)
		if !t.settle() {
			b.Fatal("not settled")
		}
	}
}
