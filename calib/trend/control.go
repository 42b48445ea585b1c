package trend

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// Signal is what a control chart makes of a result.
type Signal int

// The lines of a Shewhart chart (ISO 7870-2): warning beyond 2, action beyond 3 standard
// deviations.
const (
	InControl Signal = iota
	Warning
	Action
)

// String is the signal as people write it.
func (s Signal) String() string { return [...]string{"in control", "warning", "action"}[s] }

// Check is a result against what the results before it led to expect.
type Check struct {
	Point
	Predicted float64
	UPredicts float64 // standard uncertainty of Value − Predicted
	Score     float64 // (Value − Predicted)/UPredicts
	Signal    Signal

	High, Low float64 // CUSUM of the scores
	Shift     bool    // which signals a small change that lasts
}

// scoreChart is the CUSUM of scores: half the shift of one standard deviation that it is to
// find, and the limit of common practice (NIST/SEMATECH e-Handbook, 6.3.2.3).
var scoreChart = CUSUM{Target: 0, Slack: 0.5, Limit: 5}

// Control predicts each result from those before it, by the same model and with the
// uncertainties as stated, and judges by that (recursive residuals: Brown, Durbin and Evans,
// J. R. Statist. Soc. B 37 (1975) 149). Where the model holds, scores are independent and
// standard normal. Results that nothing before predicts have no check: the first two, and the
// first after an adjustment.
func Control(h History, o Options) ([]Check, error) {
	t, err := Of(h, o)
	if err != nil {
		return nil, err
	}
	var out []Check
	var scores []float64
	for i := 1; i < len(t.Points); i++ {
		p, s := t.Points[i], t.lines.segment[i]
		before := newLines(t.Points[:i], o)
		if s == len(before.slope) || before.slope[s] < 0 {
			continue
		}
		r, err := before.solve(1)
		if err != nil {
			return nil, err
		}
		g := before.measured(p, s, before.x(p.Time))
		c := Check{Point: p, Predicted: floats.Dot(g, r.P)}
		variance := r.Variance(g) + p.independent()*p.independent()
		if _, shared := before.common[p.Standards]; !shared {
			variance += p.common() * p.common()
		}
		c.UPredicts = math.Sqrt(variance)
		c.Score = (p.Value - c.Predicted) / c.UPredicts
		switch z := math.Abs(c.Score); {
		case z > 3:
			c.Signal = Action
		case z > 2:
			c.Signal = Warning
		}
		out, scores = append(out, c), append(scores, c.Score)
	}
	for i, s := range scoreChart.Run(scores) {
		out[i].High, out[i].Low, out[i].Shift = s.High, s.Low, s.Signal
	}
	return out, nil
}
