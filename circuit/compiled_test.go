package circuit

import (
	"math/cmplx"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// By hand: H = b/(a + b), dH/da = −b/(a + b)², dH/db = a/(a + b)², at whatever values the form was made.
func TestCompiledDivider(t *testing.T) {
	l := Ladder{Tap: 1, Input: openInput, Arms: []Arm{{Place: Series, R: 7}, {Place: Shunt, R: 11}}}
	c, err := l.Compile(0, []Variable{{ArmR, 0}, {ArmR, 1}})
	if err != nil {
		t.Fatal(err)
	}
	dh := make([]complex128, 2)
	near(t, "H", c.Transfer([]float64{3, 2}), 0.4, 1e-15)
	near(t, "H", c.Gradient([]float64{3, 2}, dh), 0.4, 1e-15)
	near(t, "dH/da", dh[0], -2.0/25, 1e-15)
	near(t, "dH/db", dh[1], 3.0/25, 1e-15)

	var box Compiled
	c.Contract([]float64{3}, &box)
	near(t, "|H|²", complex(box.Squared(2), 0), 0.16, 1e-15)
	near(t, "|H|², shorted", complex(box.Squared(0), 0), 0, 0)
	// A divider that takes little off: what a/(a + b)² is in float64 is got to the last digits, 1e-9/(1 + 1e-9)².
	c.Gradient([]float64{1e-9, 1}, dh)
	near(t, "dH/db", dh[1], 1e-9/((1+1e-9)*(1+1e-9)), 1e-14)
}

// Variables fixed first, all at once or in turn, leave the same H.
func TestContract(t *testing.T) {
	var first, second Compiled // used again and again, whatever was in them
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.SampledFrom(samples()).Draw(t, "sample")
		variables := rapid.Permutation(allVariables(&s.ladder)).Draw(t, "variables")[:rapid.IntRange(1, 5).Draw(t, "number")]
		c, err := s.ladder.Compile(1e4, variables)
		if err != nil {
			t.Fatal(err)
		}
		x := make([]float64, len(variables))
		for k, v := range variables {
			x[k] = *v.In(&s.ladder) * rapid.Float64Range(0.5, 2).Draw(t, "factor")
		}
		want := c.Transfer(x)
		m := rapid.IntRange(0, len(x)).Draw(t, "fixed")
		n := rapid.IntRange(0, len(x)-m).Draw(t, "fixed then")
		c.Contract(x[:m], &first)
		first.Contract(x[m:m+n], &second)
		if left := second.Variables(); left != len(x)-m-n {
			t.Errorf("%d of %d variables left, want %d", left, len(x), len(x)-m-n)
		}
		near(t, "contracted H", first.Transfer(x[m:]), want, 1e-14)
		near(t, "twice contracted H", second.Transfer(x[m+n:]), want, 1e-14)
		near(t, "H itself, afterwards", c.Transfer(x), want, 0)

		c.Contract(x[:len(x)-1], &first)
		square := cmplx.Abs(want) * cmplx.Abs(want)
		near(t, "|H|²", complex(first.Squared(x[len(x)-1]), 0), complex(square, 0), 1e-14)
	})
}

func TestCompiledPanics(t *testing.T) {
	c, err := samples()[0].ladder.Compile(0, []Variable{{ArmR, 0}, {ArmR, 1}})
	if err != nil {
		t.Fatal(err)
	}
	for name, misuse := range map[string]func(){
		"Transfer, short":  func() { c.Transfer([]float64{1}) },
		"Transfer, long":   func() { c.Transfer([]float64{1, 2, 3}) },
		"Gradient, short":  func() { c.Gradient([]float64{1}, make([]complex128, 1)) },
		"Gradient, uneven": func() { c.Gradient([]float64{1, 2}, make([]complex128, 1)) },
		"Contract, long":   func() { c.Contract([]float64{1, 2, 3}, new(Compiled)) },
		"Squared, two":     func() { c.Squared(1) },
		"nothing compiled": func() { new(Compiled).Transfer(nil) },
		"no such element":  func() { Variable{Element: elements}.In(&samples()[0].ladder) },
		"by no element":    func() { new(Sensitivity).By(Variable{Element: elements}) },
	} {
		func() {
			defer func() {
				if message, _ := recover().(string); !strings.HasPrefix(message, "circuit: ") {
					t.Errorf("%s: panic with %q, want the package's name", name, message)
				}
			}()
			misuse()
		}()
	}
}

func TestCompiledDoesNotAllocate(t *testing.T) {
	for _, variables := range []int{1, 3, 4, 8} {
		c, x := compiledOf(t, variables)
		dh := make([]complex128, variables)
		var one Compiled
		if n := testing.AllocsPerRun(10, func() {
			c.Contract(x[1:], &one)
			one.Squared(x[0])
			c.Transfer(x)
			c.Gradient(x, dh)
		}); n != 0 {
			t.Errorf("%d variables: %g allocations a call, want none", variables, n)
		}
	}
}
