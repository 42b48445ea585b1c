package correct

import (
	"math"
	"time"
)

// line is the detector's characteristic on one range, turned round.
type line struct {
	offset, gain float64 // V rms, 1
	uu           float64 // (u(o)/g)², V²
	cross        float64 // 2·r(g,o)·u(g)·u(o)/g², V
	gg           float64 // (u(g)/g)²
	k            float64

	from, to     float64 // V rms, what was calibrated; to 0: not known
	never        bool    // the range was never calibrated
	unknown      bool    // and there is no gain for it; nothing else is set
	unread       string  // what is wrong with the cell that should state the range; nothing else is set
	above, below string  // the warnings
}

// years is how long after a calibration a date is, in years of 365.25 days.
func years(from, to time.Time) float64 { return to.Sub(from).Hours() / (24 * 365.25) }

// on is the line on a range (V rms; 0: not stated), after so many years of drift.
func (c *Calibration) on(fullScale, drifted float64) line {
	common, own := -1, -1
	for i, g := range c.Gains {
		if g.Range == 0 {
			common = i
		} else if fullScale != 0 && equal(g.Range, fullScale) {
			own = i
		}
	}
	l := line{never: fullScale != 0 && own < 0 && (common < 0 || len(c.Gains) > 1), k: c.K}
	if own < 0 {
		own = common
	}
	if own < 0 {
		l.unknown = true
		return l
	}
	g := c.Gains[own]
	uo := c.UOffset
	l.gain, l.offset = g.Value, c.Offset
	if c.OffsetShare {
		l.offset, uo = l.offset*fullScale, uo*fullScale
	}
	variance := g.U * g.U
	if c.Drift != nil && drifted != 0 {
		l.gain += c.Drift.PerYear * drifted
		variance += math.Pow(c.Drift.U*drifted, 2)
	}
	gain2 := l.gain * l.gain
	l.uu, l.gg, l.cross = uo*uo/gain2, variance/gain2, 2*g.Correlation*g.U*uo/gain2
	l.from, l.to = g.From, g.To
	l.above, l.below = string(Above)+" ("+c.shown(g.To)+")", string(Below)+" ("+c.shown(g.From)+")"
	return l
}

// correct turns a reading into the voltage at the input, with its expanded uncertainty; all V rms.
func (l *line) correct(x float64) (v, expanded float64) {
	v = (x - l.offset) / l.gain
	// With a correlation of ±1 rounding may leave less than nothing.
	return v, l.k * math.Sqrt(max(0, l.uu+v*(l.cross+v*l.gg)))
}
