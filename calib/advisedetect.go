package calib

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// What counts as found: a test at 5 % false alarm, two-sided, that finds with 80 % power.
const (
	FalseAlarm = 0.05
	Power      = 0.80
)

// Detectable are the smallest errors that a plan finds. Where the true value is
// (z_{1−α/2} + z_{power})·u away from none, a two-sided test at level α finds it with
// that power (NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.2.2, one
// observation of standard deviation u); NaN where it is not determined.
type Detectable struct {
	Gain   number `json:"gain"` // of its deviation from 1
	Offset number `json:"offset"`
	Series number `json:"series_resistance"` // Ω
}

func detectable(gain, offset, series Estimate) Detectable {
	z := distuv.UnitNormal.Quantile(1-FalseAlarm/2) + distuv.UnitNormal.Quantile(Power)
	least := func(e Estimate) number {
		if !e.Known {
			return number(math.NaN())
		}
		return number(z * e.U)
	}
	return Detectable{least(gain), least(offset), least(series)}
}
