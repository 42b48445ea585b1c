package diagnose

import (
	"fmt"
	"math"
	"math/rand/v2"
	"sort"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// trial is a cause put into simulated readings of one of the cases.
type trial struct {
	on      string // the case
	kind    string
	variant string
	size    float64                           // where it is not a number of standard uncertainties; else 0
	accept  []string                          // other names of it
	alter   func(p *plan.Plan, times float64) // where no one term stands for it: the bench as it really is
}

// trials are the rows of the confusion table. What one term of the model stands
// for is made as many standard uncertainties large as the table says.
var trials = []trial{
	{on: "arrival", kind: Gain},
	{on: "arrival", kind: Offset},
	{on: "arrival", kind: OffsetOfRange},
	{on: "arrival", kind: Series, accept: []string{ResistivePick}},
	{on: "arrival", kind: ResistivePick, accept: []string{Series}},
	{on: "four-phase", kind: Coupling, variant: "in quadrature", accept: []string{ReferenceOff}},
	{on: "quadrature", kind: CapacitivePck},
	{on: "arrival", kind: RangeGain, variant: "the 1 mV range"},
	{on: "arrival", kind: Compression},
	{on: "quadrature", kind: Loading, variant: "capacitance of the input beyond the stated"},
	{on: "quadrature", kind: TopCapacity, alter: func(p *plan.Plan, times float64) { p.Arms[0].Capacitance.X += times * 0.1e-12 }},
	{on: "arrival", kind: OneSetting, variant: "box at 100 Ω"},
	{on: "arrival", kind: Swapped, variant: "box at 100 Ω and at 50 Ω", size: 1, accept: []string{OneSetting}},
	{on: "arrival", kind: Asymmetry},
	{on: "string", kind: Rectified},
	{on: "arrival", kind: NotSettled},
	{on: "arrival", kind: Drift},
	{on: "four-phase", kind: ReferenceOff},
	{on: "quadrature", kind: Skewed},
	{on: "arrival", kind: Outlier, variant: "step A20"},
}

// casePlan is one of the cases, or the arrival case read at four phases.
func casePlan(t testing.TB, name string) *plan.Plan {
	if name != "four-phase" {
		return planOf(t, name)
	}
	p := planOf(t, "arrival")
	var steps []plan.Step
	for _, s := range p.Steps {
		steps = append(steps, s)
		if s.Phase == 0 {
			for k, turn := range []float64{math.Pi / 2, 3 * math.Pi / 2} {
				quarter := s
				quarter.Phase, quarter.ID = turn, fmt.Sprintf("%sq%d", s.ID, k)
				steps = append(steps, quarter)
			}
		}
	}
	p.Steps = steps
	return p
}

// sizeOfOne is one standard uncertainty of a trial's term, beside the clean hypothesis.
func sizeOfOne(t *testing.T, p *plan.Plan, tr trial) float64 {
	clean := calib.NewSimulator(p).Readings(calib.Truth{Gain: 1}, rand.New(rand.NewPCG(0, 0)))
	e, err := calib.Evaluate(p, clean)
	if err != nil {
		t.Fatal(err)
	}
	h, err := e.Suppose()
	if err != nil {
		t.Fatal(err)
	}
	term, err := find(causes(e), h, Fault{Kind: tr.kind, Variant: tr.variant})
	if err != nil {
		t.Fatal(err)
	}
	s, ok := h.Try(term)
	if !ok {
		t.Fatalf("%s on %s cannot be seen", tr.kind, tr.on)
	}
	return s.U
}

// firstCauses counts the first-ranked causes of simulated campaigns with a fault.
func firstCauses(t *testing.T, p *plan.Plan, tr trial, size, times float64, campaigns int) map[string]int {
	var added []calib.Added
	real := *p
	if tr.alter != nil {
		real.Arms = append([]plan.Arm(nil), p.Arms...)
		tr.alter(&real, times)
	} else {
		var err error
		if added, err = Plant(p, []Fault{{tr.kind, tr.variant, size}}); err != nil {
			t.Fatal(err)
		}
	}
	s := calib.NewSimulator(&real)
	random := rand.New(rand.NewPCG(51, uint64(len(tr.kind)+len(tr.on))))
	count := map[string]int{}
	for range campaigns {
		e, err := calib.Evaluate(p, s.Readings(calib.Truth{Gain: 1, Added: added}, random))
		if err != nil {
			count["no fit"]++
			continue
		}
		first := "nothing"
		for _, f := range Findings(e) {
			if Accuses(f) {
				first = f.Kind
				break
			}
		}
		count[first]++
	}
	return count
}

// The confusion table: the true cause against the one that is ranked first, at
// three sizes. Where two causes are one column of the problem, either counts.
func TestConfusion(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	campaigns := 20
	if *long {
		campaigns = 500
	}
	for _, tr := range trials {
		t.Run(tr.kind, func(t *testing.T) {
			p := casePlan(t, tr.on)
			u := 0.0
			if tr.size == 0 && tr.alter == nil {
				u = sizeOfOne(t, p, tr)
			}
			line := fmt.Sprintf("| %s | %s |", tr.kind, tr.on)
			for _, times := range []float64{6, 12, 30} {
				size := times * u
				if tr.size != 0 {
					size = tr.size
				}
				count := firstCauses(t, p, tr, size, times, campaigns)
				right := count[tr.kind]
				for _, other := range tr.accept {
					right += count[other]
				}
				line += fmt.Sprintf(" %.0f %%%s |", 100*float64(count[tr.kind])/float64(campaigns), confusedWith(count, tr.kind, campaigns))
				if share := float64(right) / float64(campaigns); times >= 12 && share < 0.8 {
					t.Errorf("at %g u only %.0f %% are ranked right: %v", times, 100*share, count)
				}
			}
			t.Log(line)
		})
	}
}

// confusedWith names the causes that take more than a twentieth from the right one.
func confusedWith(count map[string]int, kind string, of int) string {
	var names []string
	for k, n := range count {
		if k != kind && n*20 > of {
			names = append(names, fmt.Sprintf("%s %.0f %%", k, 100*float64(n)/float64(of)))
		}
	}
	if len(names) == 0 {
		return ""
	}
	sort.Strings(names)
	return " (" + strings.Join(names, ", ") + ")"
}
