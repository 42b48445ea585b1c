package circuit

import "testing"

// A thousand arms: solution and all derivatives.
func BenchmarkLadder1000(b *testing.B) {
	l := Ladder{Source: 50, Tap: 501, Input: Input{R: 10e6, C: 125e-12}}
	for range 500 {
		l.Arms = append(l.Arms,
			Arm{Place: Series, R: 10, L: 1e-7, C: 1e-12},
			Arm{Place: Shunt, R: 1e6, C: 2e-12, Stray: 0.1})
	}
	benchmarkAll(b, &l)
}

func BenchmarkSmallLadder(b *testing.B) {
	benchmarkAll(b, &samples()[4].ladder)
}

func BenchmarkTransfer(b *testing.B) {
	l := &samples()[0].ladder
	var ws Workspace
	b.ReportAllocs()
	for b.Loop() {
		l.Transfer(1e3, &ws)
	}
}

func benchmarkAll(b *testing.B, l *Ladder) {
	if err := l.Check(); err != nil {
		b.Fatal(err)
	}
	var ws Workspace
	b.ReportAllocs()
	for b.Loop() {
		r := l.Solve(1e3, &ws)
		r.Sensitivity()
	}
}

func TestNoAllocationsWithWorkspace(t *testing.T) {
	l := samples()[4].ladder
	var ws Workspace
	if n := testing.AllocsPerRun(10, func() {
		r := l.Solve(1e3, &ws)
		r.Sensitivity()
		l.Transfer(1e3, &ws)
	}); n != 0 {
		t.Errorf("%g allocations a call, want none", n)
	}
}
