package trend

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib/fit"
)

// significance is the probability below which chance is not accepted as the reason.
const significance = 0.05

// Options say how a history is looked at.
type Options struct {
	SlopeEach bool     // a drift for each segment between adjustments, not one for all
	Assumed   *Assumed // the drift where the history has none to tell; nil: none is stated there
}

// Assumed is a drift known from elsewhere, such as from other detectors of the type.
type Assumed struct {
	PerYear float64
	U       float64 // its standard uncertainty, above 0
}

// Drift is the slope of the error.
type Drift struct {
	PerYear   float64
	U         float64 // its standard uncertainty
	Low, High float64 // its 95 % interval
	DOF       int     // of Student's t in Low, High and P; 0: the uncertainties are as stated, and normal
	P         float64 // the probability of a slope at least as far from 0 where there is no drift; 1 where assumed
	Assumed   bool
}

// Significant tells whether there is drift beyond scatter, at the 5 % level.
func (d *Drift) Significant() bool { return d.P < significance }

// Segment is the stretch from one adjustment to the next.
type Segment struct {
	From, To int    // its first and last point
	Drift    *Drift // nil: none can be told; one for all segments, or each its own by Options
}

// Trend is what a history shows.
type Trend struct {
	Points   []Point // by date; U where it was not stated is the scatter found
	Segments []Segment
	Drift    *Drift // of the last segment, which is in force

	// χ² of the results about their lines with the uncertainties as stated, its degrees
	// of freedom, and the probability of so large a χ² by chance (1 without degrees of
	// freedom).
	ChiSquared float64
	DOF        int
	P          float64

	Unstated bool // no uncertainties were stated: they are from the scatter

	// Scale is by what the independent parts were enlarged where P < 5 %; else 1. What a
	// few results scatter too much, without χ² showing it, is not made good: all
	// uncertainties are then too small.
	Scale      float64
	Spread     float64 // standard deviation of the detector about its line, beyond what stated uncertainties explain
	Assumption string  // what had to be taken for granted, in sentences

	lines *lines
	fit   *fit.Result
	dof   int // of Student's t; 0: normal
}

// Of fits the history.
func Of(h History, o Options) (*Trend, error) {
	if a := o.Assumed; a != nil && !(finite(a.PerYear) && finite(a.U) && a.U > 0) {
		return nil, fmt.Errorf("the assumed drift is %g a year with u %g; both must be finite, and u above 0", a.PerYear, a.U)
	}
	points, err := h.ordered()
	if err != nil {
		return nil, err
	}
	t := &Trend{Points: points, Scale: 1, P: 1, Unstated: points[0].U == 0}
	if t.Unstated {
		if err := t.state(o); err != nil {
			return nil, err
		}
	}
	t.lines = newLines(points, o)
	if t.fit, err = t.lines.solve(1); err != nil {
		return nil, err
	}
	t.ChiSquared, t.DOF = t.fit.ChiSquared, t.fit.DOF
	if t.DOF > 0 {
		t.P = distuv.ChiSquared{K: float64(t.DOF)}.Survival(t.ChiSquared)
	}
	switch {
	case t.Unstated:
		t.dof, t.Spread = t.DOF, points[0].U
	case t.P < significance:
		if t.Scale, t.fit, err = t.lines.birge(t.fit); err != nil {
			return nil, err
		}
		t.dof = t.DOF
		t.Spread = math.Sqrt((t.Scale - 1) * (t.Scale + 1) * meanVariance(points))
	}
	t.describe(o)
	return t, nil
}

// state gives results without uncertainty the scatter about their lines.
func (t *Trend) state(o Options) error {
	const typical = "nothing tells the uncertainty of the results; state it"
	low, high := t.Points[0].Value, t.Points[0].Value
	for _, p := range t.Points {
		low, high = min(low, p.Value), max(high, p.Value)
	}
	if low == high {
		return fmt.Errorf("no scatter in %s: %s", count(len(t.Points), "result"), typical)
	}
	t.setU(high - low)
	r, err := newLines(t.Points, o).solve(1)
	if err != nil {
		return err
	}
	// 1e-20: rounding leaves of results on a line 1e-16 of their range.
	if r.DOF == 0 || r.ChiSquared < 1e-20 {
		return errors.New("the results fit their line exactly: " + typical)
	}
	t.setU((high - low) * math.Sqrt(r.ChiSquared/float64(r.DOF)))
	return nil
}

func (t *Trend) setU(u float64) {
	for i := range t.Points {
		t.Points[i].U = u
	}
}

// describe fills in the segments, the drift and the assumption.
func (t *Trend) describe(o Options) {
	drifts := make(map[int]*Drift)
	for s, k := range t.lines.slope {
		if k >= 0 && drifts[k] == nil {
			drifts[k] = t.drift(k)
		}
		t.Segments = append(t.Segments, Segment{From: -1, Drift: drifts[k]})
		for i, segment := range t.lines.segment {
			if segment == s {
				if t.Segments[s].From < 0 {
					t.Segments[s].From = i
				}
				t.Segments[s].To = i
			}
		}
	}
	t.Drift = t.Segments[len(t.Segments)-1].Drift
	t.Assumption = t.assumption(o)
}

func (t *Trend) drift(k int) *Drift {
	d := &Drift{PerYear: t.fit.P[k], U: math.Sqrt(t.fit.Cov.At(k, k)), DOF: t.dof, P: 1, Assumed: t.lines.assumed(k)}
	if d.Assumed {
		d.DOF = 0
	} else {
		d.P = 2 * survival(math.Abs(d.PerYear)/d.U, d.DOF)
	}
	q := quantile(0.975, d.DOF)
	d.Low, d.High = d.PerYear-q*d.U, d.PerYear+q*d.U
	return d
}

func meanVariance(points []Point) float64 {
	var sum float64
	for _, p := range points {
		sum += p.independent() * p.independent()
	}
	return sum / float64(len(points))
}

// quantile of Student's t, or of the normal distribution for dof 0.
func quantile(p float64, dof int) float64 {
	if dof == 0 {
		return distuv.UnitNormal.Quantile(p)
	}
	return distuv.StudentsT{Sigma: 1, Nu: float64(dof)}.Quantile(p)
}

// survival is the probability of more than x, by the same distribution.
func survival(x float64, dof int) float64 {
	if dof == 0 {
		return distuv.UnitNormal.Survival(x)
	}
	return distuv.StudentsT{Sigma: 1, Nu: float64(dof)}.Survival(x)
}
