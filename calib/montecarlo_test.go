package calib

import (
	"context"
	"runtime"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func monteCarloOf(t testing.TB, name string, trials int) *MonteCarlo {
	t.Helper()
	mc, err := evaluateCase(t, name).MonteCarlo(context.Background(), MonteCarloOptions{Trials: trials, Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	return mc
}

// The same seed gives the same result, whatever the number of cores.
func TestMonteCarloDoesNotDependOnTheCores(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	one := monteCarloOf(t, "string", 35000)
	runtime.GOMAXPROCS(3)
	if diff := cmp.Diff(one, monteCarloOf(t, "string", 35000)); diff != "" {
		t.Errorf("one core against three (-one +three):\n%s", diff)
	}
}

// In the four cases everything is nearly linear and nearly normal: Monte Carlo
// agrees with the linear result. Its own statistical error of u at 40 000 trials
// is 0.35 %; 2 % is six of those.
func TestMonteCarloAgreesWhereAllIsLinear(t *testing.T) {
	for _, name := range []string{"arrival", "string", "quadrature"} {
		mc := monteCarloOf(t, name, 40000)
		for _, o := range mc.Outputs {
			near(t, name+": u of "+o.Name, o.U, o.Linear.U, 0.02*o.Linear.U)
			near(t, name+": mean of "+o.Name, o.Mean, o.Linear.Value, 0.03*o.Linear.U)
		}
		near(t, name+": deviation of the drops' u", float64(mc.Drops), 0, 0.02)
		near(t, name+": share in the joint 95 % region", float64(mc.InRegion), 0.95, 0.01)
		if mc.Unsettled > 0 || mc.Interrupted || mc.Trials != 40000 {
			t.Errorf("%s: %d trials, %d unsettled, interrupted: %v", name, mc.Trials, mc.Unsettled, mc.Interrupted)
		}
	}
}

// The adaptive procedure stops by itself.
func TestMonteCarloAdaptive(t *testing.T) {
	mc := monteCarloOf(t, "string", 0)
	if !mc.Adaptive || mc.Interrupted || mc.Trials < 2*block || mc.Trials >= MostTrials {
		t.Errorf("%d trials, adaptive: %v, interrupted: %v", mc.Trials, mc.Adaptive, mc.Interrupted)
	}
}

// A cancelled context gives what there is, and says so.
func TestMonteCarloInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	mc, err := evaluateCase(t, "string").MonteCarlo(ctx, MonteCarloOptions{Trials: 10_000_000, Seed: 1, Progress: func(done, _ int) {
		if done >= 20000 {
			cancel()
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	if !mc.Interrupted || mc.Trials < 20000 || mc.Trials > 200000 {
		t.Errorf("%d trials, interrupted: %v", mc.Trials, mc.Interrupted)
	}
}

func BenchmarkMonteCarloMillion(b *testing.B) {
	e := evaluateCase(b, "arrival")
	for b.Loop() {
		if _, err := e.MonteCarlo(context.Background(), MonteCarloOptions{Trials: 1_000_000, Seed: 1}); err != nil {
			b.Fatal(err)
		}
	}
}
