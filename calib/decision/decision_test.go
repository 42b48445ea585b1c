package decision

import (
	"encoding/json"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The rules of ILAC-G8:09/2019, clause 4.2, for a tolerance of 9.9 to 10.1 and U = 0.04: acceptance limits of
// 9.94 and 10.06 where the guard band is U. As a symmetric limit: e = y − 10 within 0.1.
func TestRules(t *testing.T) {
	for _, c := range []struct {
		y               float64
		simple, guarded Outcome
	}{
		{10.00, Pass, Pass},
		{10.05, Pass, Pass},
		{10.07, Pass, ConditionalPass},
		{10.08, Pass, ConditionalPass},
		{10.09, Pass, ConditionalPass},
		{10.11, Fail, ConditionalFail},
		{10.13, Fail, ConditionalFail},
		{10.15, Fail, Fail},
		{9.95, Pass, Pass},
		{9.93, Pass, ConditionalPass},
		{9.89, Fail, ConditionalFail},
		{9.85, Fail, Fail},
	} {
		if got := Judge(c.y-10, 0.1, 0); got != c.simple {
			t.Errorf("%g, simple: %v, want %v", c.y, got, c.simple)
		}
		if got := Judge(c.y-10, 0.1, 0.04); got != c.guarded {
			t.Errorf("%g, guarded: %v, want %v", c.y, got, c.guarded)
		}
	}
}

// The standard leaves equality open; here it passes. In whole numbers, which a float64 holds as they are.
func TestEqualityPasses(t *testing.T) {
	for _, c := range []struct {
		e, w float64
		want Outcome
	}{
		{10, 0, Pass}, {math.Nextafter(10, 11), 0, Fail},
		{6, 4, Pass}, {math.Nextafter(6, 7), 4, ConditionalPass},
		{10, 4, ConditionalPass}, {math.Nextafter(10, 11), 4, ConditionalFail},
		{14, 4, ConditionalFail}, {math.Nextafter(14, 15), 4, Fail},
		{0, 10, Pass}, // the acceptance interval is a point
	} {
		for _, e := range []float64{c.e, -c.e} {
			if got := Judge(e, 10, c.w); got != c.want {
				t.Errorf("an error of %v within 10, guarded by %g: %v, want %v", e, c.w, got, c.want)
			}
		}
	}
}

// Where the acceptance interval is empty nothing passes: U = 0.2 about 10 within 0.1, y = 10 is in tolerance with a
// probability of 68 % only.
func TestGuardWiderThanTheLimit(t *testing.T) {
	if got := Judge(0, 0.1, 0.2); got != ConditionalPass {
		t.Errorf("an error of 0: %v, want %v", got, ConditionalPass)
	}
	rapid.Check(t, func(t *rapid.T) {
		limit := rapid.Float64Range(0, 1e3).Draw(t, "limit")
		w := rapid.Float64Range(math.Nextafter(limit, math.Inf(1)), 1e4).Draw(t, "w")
		e := rapid.Float64Range(-1e4, 1e4).Draw(t, "e")
		if Judge(e, limit, w) == Pass {
			t.Fatalf("an error of %g within %g, guarded by %g, passes", e, limit, w)
		}
	})
}

// The sign of the error does not count, a larger error is never better, and the guard band moves an outcome only
// between pass and conditional pass, fail and conditional fail.
func TestJudgeProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		limit := rapid.Float64Range(0, 10).Draw(t, "limit")
		w := rapid.Float64Range(0, 20).Draw(t, "w")
		e := rapid.Float64Range(0, 40).Draw(t, "e")
		more := rapid.Float64Range(e, 50).Draw(t, "larger e")
		got := Judge(e, limit, w)
		if minus := Judge(-e, limit, w); minus != got {
			t.Fatalf("%g: %v, its opposite %v", e, got, minus)
		}
		if Judge(more, limit, w) < got {
			t.Fatalf("%g: %v, the larger %g: %v", e, got, more, Judge(more, limit, w))
		}
		if simple := Judge(e, limit, 0); (got <= ConditionalPass) != (simple == Pass) {
			t.Fatalf("%g: %v, by the simple rule %v", e, got, simple)
		}
	})
}

// Nothing is known of an error that is not a number, or of one whose uncertainty has no limit.
func TestJudgeWithoutKnowledge(t *testing.T) {
	if got := Judge(math.NaN(), 1, 0.1); got != Fail {
		t.Errorf("an error that is no number: %v, want %v", got, Fail)
	}
	for e, want := range map[float64]Outcome{0.5: ConditionalPass, 2: ConditionalFail} {
		if got := Judge(e, 1, math.Inf(1)); got != want {
			t.Errorf("an error of %g of which nothing is known: %v, want %v", e, got, want)
		}
	}
}

// The names are those of result.json (the plan's format, "The result").
func TestText(t *testing.T) {
	for o, name := range map[Outcome]string{
		NotJudged: "not judged", Pass: "pass", ConditionalPass: "conditional pass", ConditionalFail: "conditional fail", Fail: "fail",
	} {
		if o.String() != name {
			t.Errorf("%d is %q, want %q", o, o, name)
		}
		text, err := json.Marshal(o)
		if err != nil || string(text) != `"`+name+`"` {
			t.Errorf("%v is written %s, %v", o, text, err)
		}
		back := Outcome(-1)
		if err := json.Unmarshal(text, &back); err != nil || back != o {
			t.Errorf("%s is read as %d, %v", text, back, err)
		}
	}
	if (Outcome(0)) != NotJudged {
		t.Error("what has no outcome yet counts as judged")
	}
}

func TestTextRejects(t *testing.T) {
	for _, name := range []string{"", "Pass", "passed", "conditional"} {
		o := ConditionalPass
		want := fmt.Sprintf(`decision: %q is no outcome; one of ["not judged" "pass" "conditional pass" "conditional fail" "fail"]`, name)
		if err := o.UnmarshalText([]byte(name)); err == nil || err.Error() != want || o != ConditionalPass {
			t.Errorf("%q: %v, %v, want %s", name, o, err, want)
		}
	}
}
