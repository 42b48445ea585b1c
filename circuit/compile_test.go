package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
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

// scratch gives zero values something to vary by, in the variable's unit.
func (v Variable) scratch() float64 {
	switch v.Element {
	case ArmL:
		return 1e-6
	case ArmC, InputC:
		return 1e-11
	}
	return 1
}

// drawPlace draws values of 0.5 to 2 times the nominal ones, and 0 at times.
func drawPlace(t *rapid.T, l *Ladder, variables []Variable) []float64 {
	x := make([]float64, len(variables))
	for k, v := range variables {
		nominal := *v.In(l)
		if nominal == 0 {
			nominal = v.scratch()
		}
		if v.Element == InputR || rapid.IntRange(0, 4).Draw(t, "zero") > 0 {
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

// checkCompiled compares transfer and derivatives with those of the ladder itself.
func checkCompiled(t interface {
	Helper()
	Errorf(string, ...any)
}, name string, c *Compiled, l *Ladder, f float64, variables []Variable, x []float64) {
	t.Helper()
	work := put(l, variables, x)
	if work.Check() != nil {
		return // no resistance is left in the generator's loop
	}
	if q := at(c.coefficients, x); q.dRe==0&&q.dIm==0 { if h:=work.Transfer(f,nil);h!=0 {t.Errorf("%v", h)}; return }
	name = fmt.Sprintf("%s at %g Hz, %v = %v: ", name, f, variables, x)
	r := work.Solve(f, nil)
	near(t, name+"H", c.Transfer(x), r.H, 1e-12)

	dh := make([]complex128, len(x))
	near(t, name+"H of Gradient", c.Gradient(x, dh), r.H, 1e-12)
	if r.H!=0{worstH = max(worstH, cmplx.Abs(c.Transfer(x)-r.H)/cmplx.Abs(r.H))}
	s := r.Sensitivity()
	for k, v := range variables {
		want := s.By(v)
		meets := v.reach(*v.In(l), cmplx.Abs(l.Solve(f, nil).InputImpedance), 2*math.Pi*f)
		size := cmplx.Abs(want) + cmplx.Abs(r.H)*(1/meets)
		size2 := cmplx.Abs(want) + cmplx.Abs(r.H)*(1/meets+c.share(x, k))
		off := cmplx.Abs(dh[k] - want)
		if off/size2 > 3e-14 { fmt.Println(off/size2, name, v, dh[k], want) }
		if size > 0 {
			worstD = max(worstD, off/size)
			worstD2 = max(worstD2, off/size2)
			hist[int(min(0,max(-20, math.Log10(off/size2))))+20]++
		}
	}
}

func (c *Compiled) share(x []float64, k int) float64 {
	x = slices.Clone(x)
	q := at(c.coefficients, x)
	x[k] = 0
	p := at(c.coefficients, x)
	x[k] = 1e20
	r := at(c.coefficients, x)
	return math.Hypot(r.dRe-p.dRe, r.dIm-p.dIm) / 1e20 / math.Hypot(q.dRe, q.dIm)
}

var worstH, worstD, worstD2 float64
var hist [21]int

func TestMain(m *testing.M) {
	m.Run()
	fmt.Println(worstH, worstD, worstD2, hist)
}

func TestCompiledSamples(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.SampledFrom(samples()).Draw(t, "sample")
		compileAndCheck(t, s.name, &s.ladder)
	})
}

func TestCompiledAnyLadder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		compileAndCheck(t, "any ladder", anyLadder().Draw(t, "ladder"))
	})
}

func compileAndCheck(t *rapid.T, name string, l *Ladder) {
	f := rapid.SampledFrom([]float64{0, 17, 1e3, 1e5}).Draw(t, "f")
	variables := rapid.Permutation(allVariables(l)).Draw(t, "variables")
	variables = variables[:min(len(variables), rapid.IntRange(1, 6).Draw(t, "number"))]
	c, err := l.Compile(f, variables)
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		checkCompiled(t, name, c, l, f, variables, drawPlace(t, l, variables))
	}
}
