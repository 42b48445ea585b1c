package fit

import (
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// single is one observation y of f(p), known to sigma.
func single(start, y, sigma float64, f, derivative func(float64) float64) Problem {
	return Problem{N: 1, Sigma: []float64{sigma}, Start: []float64{start},
		Residuals: func(p, r []float64, jac *mat.Dense) {
			r[0] = y - f(p[0])
			jac.Set(0, 0, derivative(p[0]))
		}}
}

// Undamped steps towards atan p = 0 diverge from starts beyond 1.3917 (Dennis and Schnabel, Numerical Methods for
// Unconstrained Optimization, 2.4; from memory).
func TestDampingWhereFullStepsDiverge(t *testing.T) {
	r := mustSolve(t, single(3, 0, 1e-3, math.Atan, func(p float64) float64 { return 1 / (1 + p*p) }))
	within(t, "p", r.P[0], 0, arrived*1e-3)
}

// The full step leads to a negative p, where the logarithm is not a number.
func TestStepIntoWhereModelFails(t *testing.T) {
	r := mustSolve(t, single(10, -2, 1e-3, math.Log, func(p float64) float64 { return 1 / p }))
	relative(t, "p", r.P[0], math.Exp(-2), 1e-11)
}

// An observation known to 12 digits leaves float64 four of a standard uncertainty: no step gets below 1e-9 of one, and
// the fit still ends.
func TestConvergesAtRounding(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5, 6, 7}
	p := Problem{N: len(x), Sigma: all(len(x), 1e-12), Start: []float64{1, 0.1},
		Residuals: func(p, r []float64, jac *mat.Dense) {
			for i, x := range x {
				grown := math.Exp(p[1] * x)
				observed := math.Pi*math.Exp(x/7) + 1e-12*math.Cos(3*x) // each within 1 σ
				r[i] = observed - p[0]*grown
				jac.SetRow(i, []float64{grown, p[0] * x * grown})
			}
		}}
	r := mustSolve(t, p)
	within(t, "factor", r.P[0], math.Pi, math.Sqrt(7)*u(r, 0)) // Schwarz's inequality
	within(t, "rate", r.P[1], 1.0/7, math.Sqrt(7)*u(r, 1))
	if r.Step < arrived || r.Step > near {
		t.Errorf("last step %g", r.Step)
	}
}

func TestNoDescentIsAnErrorWithWhatWasReached(t *testing.T) {
	wrongSign := func(float64) float64 { return -1 }
	r, err := Solve(single(1, 0, 1, func(p float64) float64 { return p }, wrongSign))
	if err == nil || !strings.Contains(err.Error(), "not converged after 0 iterations: χ² = 1,") {
		t.Errorf("error: %v", err)
	}
	if r == nil || r.Converged || r.P[0] != 1 || r.ChiSquared != 1 || r.Cov.At(0, 0) != 1 {
		t.Errorf("result: %+v", r)
	}
}

func TestUnusableInputIsAnError(t *testing.T) {
	identity := func(p float64) float64 { return p }
	one := func(float64) float64 { return 1 }
	good := func() Problem { return single(1, 0, 1, identity, one) }
	mustSolve(t, good())
	for _, c := range []struct {
		spoil func(p *Problem)
		want  string
	}{
		{func(p *Problem) { p.Sigma[0] = 0 }, "uncertainty of observation 0 is 0"},
		{func(p *Problem) { p.Sigma[0] = math.NaN() }, "uncertainty of observation 0 is NaN"},
		{func(p *Problem) { p.Start[0] = math.Inf(1) }, "start value of parameter 0 is +Inf"},
		{func(p *Problem) { p.Scale = []float64{-1} }, "scale of parameter 0 is -1"},
		{func(p *Problem) { p.Priors = []Prior{{0, 1, 0}} }, "prior value of parameter 0 is 1 with standard uncertainty 0"},
		{func(p *Problem) { *p = single(-1, 0, 1, math.Log, one) }, "residuals are not finite at the start values"},
		{func(p *Problem) {
			*p = single(0, 1, 1, math.Sqrt, func(p float64) float64 { return 0.5 / math.Sqrt(p) })
		}, "derivative by parameter 0 is not finite"},
	} {
		p := good()
		c.spoil(&p)
		if _, err := Solve(p); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v; want one that says %q", err, c.want)
		}
	}
}

func TestMistakesPanic(t *testing.T) {
	for name, mistake := range map[string]func(p *Problem){
		"no observations":       func(p *Problem) { p.N, p.Sigma = 0, nil },
		"no parameters":         func(p *Problem) { p.Start = nil },
		"length of Sigma":       func(p *Problem) { p.Sigma = all(2, 1) },
		"length of Scale":       func(p *Problem) { p.Scale = all(2, 1) },
		"prior of no parameter": func(p *Problem) { p.Priors = []Prior{{1, 0, 1}} },
	} {
		t.Run(name, func(t *testing.T) {
			p := linear([][]float64{{1}}, []float64{1}, all(1, 1))
			mistake(&p)
			defer func() {
				if text, _ := recover().(string); !strings.HasPrefix(text, "fit: ") {
					t.Errorf("panic %q", text)
				}
			}()
			_, _ = Solve(p)
		})
	}
}
