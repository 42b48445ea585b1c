package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// allVariables lists all that may vary in a ladder.
func allVariables(l *Ladder) []Variable {
	var all []Variable
	for e := ArmR; e < elements; e++ {
		switch {
		case e.ofArm():
			for k, a := range l.Arms {
				if a.Place != Tap {
					all = append(all, Variable{e, k})
				}
			}
		case e != InputR || !math.IsInf(l.Input.R, 1):
			all = append(all, Variable{Element: e})
		}
	}
	return all
}

// drawValues draws values of half to twice the nominal ones, zeros among them, and resistances that are far away.
func drawValues(t *rapid.T, l *Ladder, variables []Variable) []float64 {
	x := make([]float64, len(variables))
	for k, v := range variables {
		nominal, far := *v.In(l), true
		switch v.Element {
		case ArmL:
			nominal, far = max(nominal, 1e-6), false
		case ArmC, InputC:
			nominal, far = max(nominal, 1e-11), false
		}
		if nominal == 0 {
			nominal = 1
		}
		kind := rapid.SampledFrom([]string{"near", "near", "near", "zero", "far"}).Draw(t, "kind")
		switch {
		case kind == "zero" && v.Element != InputR:
		case kind == "far" && far:
			x[k] = nominal * math.Pow(10, rapid.Float64Range(-5, 5).Draw(t, "decades"))
		default:
			x[k] = nominal * rapid.Float64Range(0.5, 2).Draw(t, "factor")
		}
	}
	return x
}

// put gives a copy of the ladder with values in place.
func put(l *Ladder, variables []Variable, x []float64) *Ladder {
	work := *l
	work.Arms = slices.Clone(l.Arms)
	for k, v := range variables {
		*v.In(&work) = x[k]
	}
	return &work
}

// checkCompiled compares transfer and derivatives with those that the ladder itself has with the values in place.
func checkCompiled(t *rapid.T, name string, c *Compiled, l *Ladder, f float64, variables []Variable, x []float64) {
	t.Helper()
	denominator := func(x []float64) complex128 {
		q := at(c.coefficients, x)
		return complex(q.dRe, q.dIm)
	}
	if denominator(x) == 0 { // nothing but shorts in a loop
		if h := c.Transfer(x); !cmplx.IsNaN(h) {
			t.Errorf("%s, %v = %v: H = %v, want NaN", name, variables, x, h)
		}
		return
	}
	name = fmt.Sprintf("%s at %g Hz, %v = %v: ", name, f, variables, x)
	r := put(l, variables, x).Solve(f, nil)
	near(t, name+"H", c.Transfer(x), r.H, 1e-12)
	dh := make([]complex128, len(x))
	near(t, name+"H of Gradient", c.Gradient(x, dh), r.H, 1e-12)

	impedance := cmplx.Abs(l.Solve(f, nil).InputImpedance)
	s := r.Sensitivity()
	reference := 1e-15 / cmplx.Abs(r.ws.intoLadder) // what a heavy load takes from Sensitivity; see the package's Limits
	for k, v := range variables {
		far := slices.Clone(x)
		far[k] = 1e30
		meets := cmplx.Abs(denominator(far)/denominator(x)) / far[k] // admittance of all that the variable meets, |dD/dx|/|D|
		meets += 1 / v.reach(*v.In(l), impedance, 2*math.Pi*f)       // rounding, where it meets nothing
		want := s.By(v)
		if off := cmplx.Abs(dh[k] - want); !(off <= (1e-12+reference)*(cmplx.Abs(want)+cmplx.Abs(r.H)*meets)) {
			t.Errorf("%sdH by %v = %v, want %v", name, v, dh[k], want)
		}
	}
}

func compileAndCheck(t *rapid.T, name string, l *Ladder) {
	f := rapid.SampledFrom([]float64{0, 17, 1e3, 1e5}).Draw(t, "f")
	variables := rapid.Permutation(allVariables(l)).Draw(t, "variables")
	variables = variables[:min(len(variables), rapid.IntRange(0, 6).Draw(t, "number"))]
	c, err := l.Compile(f, variables)
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		checkCompiled(t, name, c, l, f, variables, drawValues(t, l, variables))
	}
}

func TestCompileSamples(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.SampledFrom(samples()).Draw(t, "sample")
		compileAndCheck(t, s.name, &s.ladder)
	})
}

func TestCompileAnyLadder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) { compileAndCheck(t, "any ladder", anyLadder().Draw(t, "ladder")) })
}

// As many variables as may be, against Kirchhoff's laws themselves.
func TestCompileAgainstNodalSolution(t *testing.T) {
	for n, s := range samples() {
		for _, f := range []float64{0, 1e3, 1e5} {
			all := allVariables(&s.ladder)
			var variables []Variable
			var x []float64
			for k := range maxVariables {
				v := all[(n+3*k)%len(all)]
				if slices.Contains(variables, v) {
					continue
				}
				variables = append(variables, v)
				x = append(x, *v.In(&s.ladder)*[]float64{0.5, 1.3, 2}[k%3])
			}
			c, err := s.ladder.Compile(f, variables)
			if err != nil {
				t.Errorf("%s at %g Hz: %v", s.name, f, err)
				continue
			}
			_, voltage, _ := takeApart(put(&s.ladder, variables, x)).nodal(2*math.Pi*f, 1, 0)
			near(t, fmt.Sprintf("%s at %g Hz, %v = %v", s.name, f, variables, x), c.Transfer(x), voltage["det"], 1e-12)
		}
	}
}

// A thousand arms have a determinant far beyond the largest float64. The last of them lead nowhere.
func TestCompileLongLadder(t *testing.T) {
	l := Ladder{Source: 50, Tap: 1, Input: Input{R: 10e6, C: 125e-12}}
	for range 500 {
		l.Arms = append(l.Arms, Arm{Place: Series, R: 1e5, L: 1e-7, C: 1e-12}, Arm{Place: Shunt, R: 1e6, C: 2e-12, Stray: 0.1})
	}
	l.Arms = append(l.Arms, Arm{Place: Series, R: 1e3, C: 1e-12}, Arm{Place: Tap})
	variables := []Variable{{ArmR, 0}, {ArmR, 1}, {ArmR, 1000}}
	c, err := l.Compile(1e3, variables)
	if err != nil {
		t.Fatal(err)
	}
	x := []float64{2e5, 1.1e6, 500}
	want := put(&l, variables, x).Transfer(1e3, nil)
	near(t, "H", c.Transfer(x), want, 1e-12)
	x[2] = 1e5
	near(t, "H, whatever leads nowhere", c.Transfer(x), want, 1e-12)
}

func TestCompileFaults(t *testing.T) {
	divider := func() *Ladder {
		return &Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 1e3}, {Place: Shunt, R: 1}, {Place: Tap}}}
	}
	for _, c := range []struct {
		says      string
		f         float64
		variables []Variable
		spoil     func(l *Ladder)
	}{
		{"arm 1 (series): R is -1 Ω", 0, nil, func(l *Ladder) { l.Arms[0].R = -1 }},
		{"frequency is NaN Hz", math.NaN(), nil, nil},
		{"frequency is -1 Hz", -1, nil, nil},
		{"frequency is +Inf Hz", math.Inf(1), nil, nil},
		{"11 variables, want at most 10", 0, make([]Variable, 11), nil},
		{"Element(-1) to vary", 0, []Variable{{-1, 0}}, nil},
		{"Element(11) to vary", 0, []Variable{{elements, 0}}, nil},
		{"R of arm 4 to vary: want an arm of 1 to 3", 0, []Variable{{ArmR, 3}}, nil},
		{"lead of arm 0 to vary", 0, []Variable{{ArmLead, -1}}, nil},
		{"stray of arm 3 to vary: that arm is a tap", 0, []Variable{{ArmStray, 2}}, nil},
		{"source resistance to vary: named twice", 0, []Variable{{SourceR, 0}, {ArmR, 0}, {SourceR, 1}}, nil},
		{"detector's input resistance to vary: the input is open", 0, []Variable{{Element: InputR}}, nil},
		{"a loop of the ladder", 0, []Variable{{ArmR, 0}}, func(l *Ladder) {
			l.Arms = append(l.Arms, Arm{Place: Shunt}, Arm{Place: Shunt})
		}},
		// L and C of the series arm resonate at 1/(2π√LC), with nothing that damps them: H is but rounding.
		{"undamped resonance", 1e6 / (2 * math.Pi), []Variable{{ArmR, 1}, {ArmC, 0}, {ArmL, 0}}, func(l *Ladder) {
			l.Source, l.Arms[0] = 50, Arm{Place: Series, L: 1e-3, C: 1e-9 * (1 + 1e-10)}
		}},
	} {
		l := divider()
		if c.spoil != nil {
			c.spoil(l)
		}
		if _, err := l.Compile(c.f, c.variables); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("error %v, want one that says %q", err, c.says)
		}
	}
}
