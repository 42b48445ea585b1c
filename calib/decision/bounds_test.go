package decision

import "testing"

// The rows are an outcome, the columns the other one: not judged, pass, conditional pass, conditional fail, fail.
const (
	no = NotJudged
	p  = Pass
	cp = ConditionalPass
	cf = ConditionalFail
	f  = Fail
)

func check(t *testing.T, what string, of func(a, b Outcome) Outcome, table [5][5]Outcome) {
	t.Helper()
	for a, row := range table {
		for b, want := range row {
			if got := of(Outcome(a), Outcome(b)); got != want {
				t.Errorf("%s of %v, %v: %v, want %v", what, Outcome(a), Outcome(b), got, want)
			}
		}
	}
}

// The verdict is the worst outcome of all steps; a step that is not judged does not count.
func TestWorst(t *testing.T) {
	check(t, "the worse", Worst, [5][5]Outcome{
		{no, p, cp, cf, f},
		{p, p, cp, cf, f},
		{cp, cp, cp, cf, f},
		{cf, cf, cf, cf, f},
		{f, f, f, f, f},
	})
}

// A reading beyond full scale makes its step at best a conditional pass, but does not judge it where there is no limit.
func TestAtBest(t *testing.T) {
	check(t, "at best", AtBest, [5][5]Outcome{
		{no, no, no, no, no},
		{p, p, cp, cf, f},
		{cp, cp, cp, cf, f},
		{cf, cf, cf, cf, f},
		{f, f, f, f, f},
	})
}

// A bound that is not judged is none.
func TestAtWorst(t *testing.T) {
	check(t, "at worst", AtWorst, [5][5]Outcome{
		{no, no, no, no, no},
		{p, p, p, p, p},
		{cp, p, cp, cp, cp},
		{cf, p, cp, cf, cf},
		{f, p, cp, cf, f},
	})
}
