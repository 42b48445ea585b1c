package calib

import "rungproof/calib/decision"

// Limiting says where the bench limits the decision, and what of it.
type Limiting struct {
	Steps      []string `json:"steps"`      // those with a limit under 3 U
	Worst      string   `json:"worst"`      // the step with the least
	Capability float64  `json:"capability"` // limit over U there
	Input      string   `json:"input"`      // the largest line of its budget
	After      float64  `json:"after"`      // capability if that were five times better known
}

// limiting looks for steps whose limit is under 3 U; nil where there is none.
func (e *Evaluation) limiting(ids []string, limit, capability []float64) (*Limiting, error) {
	var l *Limiting
	worst := 0
	for i, c := range capability {
		if !(c < decision.LeastCapability) {
			continue
		}
		if l == nil {
			l, worst = &Limiting{}, i
		}
		l.Steps = append(l.Steps, ids[i])
		if c < capability[worst] {
			worst = i
		}
	}
	if l == nil {
		return nil, nil
	}
	l.Worst, l.Capability = ids[worst], capability[worst]
	b, err := e.Budget(l.Worst)
	if err != nil || len(b.Improve) == 0 {
		return l, err
	}
	l.Input, l.After = b.Improve[0].Name, limit[worst]/b.Improve[0].After
	return l, nil
}
