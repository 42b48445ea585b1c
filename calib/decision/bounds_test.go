package decision

import "testing"

// The tables' rows are the first outcome, from not judged to fail, their columns the second.
const (
	no = NotJudged
	p  = Pass
	cp = ConditionalPass
	cf = ConditionalFail
	f  = Fail
)

func check(t *testing.T, what string, of func(a, b Outcome) Outcome, columns []Outcome, table [5][]Outcome) {
	t.Helper()
	for a, row := range table {
		for i, want := range row {
			if got := of(Outcome(a), columns[i]); got != want {
				t.Errorf("%s of %v, %v: %v, want %v", what, Outcome(a), columns[i], got, want)
			}
		}
	}
}

// The verdict is the worst outcome of all steps; a step that is not judged does not count.
func TestWorst(t *testing.T) {
	check(t, "the worse", Worst, []Outcome{no, p, cp, cf, f}, [5][]Outcome{
		{no, p, cp, cf, f},
		{p, p, cp, cf, f},
		{cp, cp, cp, cf, f},
		{cf, cf, cf, cf, f},
		{f, f, f, f, f},
	})
}

// A reading beyond full scale makes its step at best a conditional pass, but does not judge it where there is no limit.
func TestAtBest(t *testing.T) {
	check(t, "at best", AtBest, []Outcome{no, p, cp, cf, f}, [5][]Outcome{
		{no, no, no, no, no},
		{p, p, cp, cf, f},
		{cp, cp, cp, cf, f},
		{cf, cf, cf, cf, f},
		{f, f, f, f, f},
	})
}

// An outcome in doubt is at worst a conditional fail.
func TestAtWorst(t *testing.T) {
	check(t, "at worst", AtWorst, []Outcome{p, cp, cf, f}, [5][]Outcome{
		{no, no, no, no},
		{p, p, p, p},
		{p, cp, cp, cp},
		{p, cp, cf, cf},
		{p, cp, cf, f},
	})
}
