package diagnose

import (
	"fmt"
	"math/rand/v2"
	"sort"
	"strings"

	"rungproof/calib"
	"rungproof/calib/fault"
	"rungproof/calib/plan"
)

// Fault is a cause at some size, to be put into simulated readings.
type Fault struct {
	Kind    string  // of the cause, such as ResistivePick
	Variant string  // what tells the variant from others, as its label has it; "" for the first
	Size    float64 // in the variant's unit: 1, V, Ω, s, F or rad
}

// Plant makes faults into terms that a simulation can add: the same terms by which
// the causes are looked for.
func Plant(p *plan.Plan, faults []Fault) ([]calib.Added, error) {
	if len(faults) == 0 {
		return nil, nil
	}
	clean := calib.NewSimulator(p).Readings(calib.Truth{Gain: 1, Fine: true}, rand.New(rand.NewPCG(0, 0)))
	e, err := calib.Evaluate(p, clean)
	if err != nil {
		return nil, err
	}
	h, err := e.Suppose()
	if err != nil {
		return nil, err
	}
	all := causes(e)
	var out []calib.Added
	for _, f := range faults {
		term, err := find(all, h, f)
		if err != nil {
			return nil, err
		}
		out = append(out, calib.Added{Term: term, Size: f.Size})
	}
	return out, nil
}

// find looks up the term of a fault.
func find(all []cause, h *calib.Hypothesis, f Fault) (calib.Term, error) {
	var kinds, labels []string
	for _, c := range all {
		kinds = append(kinds, c.kind)
		if c.kind != f.Kind {
			continue
		}
		for _, v := range c.variants {
			if f.Variant == "" || v.label == f.Variant {
				return v.on(h), nil
			}
			labels = append(labels, v.label)
		}
		near := fault.Nearest(f.Variant, labels)
		if near == "" {
			near = calib.List(labels)
		}
		return calib.Term{}, fmt.Errorf("%s: there is no %q in this plan; nearest: %s", f.Kind, f.Variant, near)
	}
	sort.Strings(kinds)
	return calib.Term{}, fmt.Errorf("this plan cannot show %s; it can show: %s", f.Kind, strings.Join(kinds, ", "))
}
