package report

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"

	"rungproof/calib/quantity"
)

// figureUnit chooses what to divide by and what unit to write at an axis whose
// largest value is so large.
func figureUnit(largest float64, unit string) (scale float64, written string) {
	switch unit {
	case "1":
		if math.Abs(largest) < 0.0005 {
			return 1e-6, "ppm"
		}
		return 0.01, "%"
	case "ohm":
		unit = "Ω"
	}
	return quantity.Prefix(largest, unit)
}

// figureNumber writes a number with a true minus sign.
func figureNumber(x float64, decimals int) string {
	s := strconv.FormatFloat(x, 'f', decimals, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return figureMinus(s)
}

// figureMinus makes the hyphen before a number a minus sign.
func figureMinus(s string) string { return strings.Replace(s, "-", "−", 1) }

// figureTicks marks about so many round values: steps of 1, 2 or 5 times a power
// of ten, with no more decimals than the step has. (The library's own ticks come
// out with the same text twice where the range is narrow.)
type figureTicks int

// Ticks are the labelled marks and four or five small ones between two of them.
func (n figureTicks) Ticks(low, high float64) []plot.Tick {
	if !(high-low > 1e-12*math.Max(math.Abs(low), math.Abs(high))) || math.IsInf(high-low, 0) {
		return nil
	}
	rough := (high - low) / float64(n)
	exponent := math.Floor(math.Log10(rough))
	power := math.Pow(10, exponent)
	factor, parts := 10.0, 5
	for _, f := range []struct {
		factor float64
		parts  int
	}{{1, 5}, {2, 4}, {5, 5}} {
		if rough <= f.factor*power*1.25 {
			factor, parts = f.factor, f.parts
			break
		}
	}
	step := factor * power
	decimals := max(0, -int(math.Floor(math.Log10(step)*(1+1e-12)+1e-9)))
	var ticks []plot.Tick
	for i := math.Ceil(low/step*float64(parts) - 1e-9); i <= high/step*float64(parts)+1e-9; i++ {
		t := plot.Tick{Value: i * step / float64(parts)}
		if math.Mod(i, float64(parts)) == 0 {
			t.Label = figureNumber(t.Value, decimals)
		}
		ticks = append(ticks, t)
	}
	return ticks
}

// figureLogTicks marks the decades of a logarithmic axis in a unit, 1, 2 and 5
// of each where there are few, and not all of them where there are many.
type figureLogTicks struct {
	unit string
	most int // decades that are all labelled
}

// Ticks are the labelled marks, and small ones at the other whole multiples.
func (l figureLogTicks) Ticks(low, high float64) []plot.Tick {
	first, last := int(math.Floor(math.Log10(low))), int(math.Ceil(math.Log10(high)))
	span := math.Log10(high / low)
	every := max(1, int(math.Ceil(span/float64(l.most))))
	var ticks []plot.Tick
	for d := first; d <= last; d++ {
		for m := 1; m < 10; m++ {
			// A decimal literal's rounding, so that labels are exact.
			v, _ := strconv.ParseFloat(strconv.Itoa(m)+"e"+strconv.Itoa(d), 64)
			if v < low*(1-1e-9) || v > high*(1+1e-9) {
				continue
			}
			t := plot.Tick{Value: v}
			if m == 1 && ((d%every)+every)%every == 0 || span < 2.2 && (m == 2 || m == 5) {
				t.Label = quantity.Format(v, 1, l.unit)
			}
			if every == 1 || m == 1 {
				ticks = append(ticks, t)
			}
		}
	}
	return ticks
}

// figureUnlabelled keeps another's marks and leaves the labels to the panel below.
type figureUnlabelled struct{ plot.Ticker }

// Ticks have a blank where a label was, so that they stay large marks.
func (u figureUnlabelled) Ticks(low, high float64) []plot.Tick {
	ticks := u.Ticker.Ticks(low, high)
	for i := range ticks {
		if !ticks[i].IsMinor() {
			ticks[i].Label = " "
		}
	}
	return ticks
}

// figureBentScale is linear about zero and logarithmic far from it, on both
// sides: asinh(x/bend). It shows what lies around a limit of one percent and an
// error of a hundred percent in one picture.
type figureBentScale struct{ bend float64 }

// Normalize places x between low (0) and high (1).
func (s figureBentScale) Normalize(low, high, x float64) float64 {
	l, h := math.Asinh(low/s.bend), math.Asinh(high/s.bend)
	return (math.Asinh(x/s.bend) - l) / (h - l)
}

// Ticks are zero and the powers of ten from the bend outwards.
func (s figureBentScale) Ticks(low, high float64) []plot.Tick {
	ticks := []plot.Tick{{Value: 0, Label: "0"}}
	decades := math.Log10(math.Max(high, -low) / s.bend)
	every := max(1, int(math.Ceil(decades/3.5)))
	for d := 0; float64(d) <= decades+1; d++ {
		v := s.bend * math.Pow(10, float64(d))
		label := ""
		if d%every == 0 {
			label = figureNumber(v, max(0, -int(math.Floor(math.Log10(v)+1e-9))))
		}
		for _, sign := range []float64{-1, 1} {
			t := plot.Tick{Value: sign * v, Label: label}
			if sign < 0 && label != "" {
				t.Label = "−" + label
			}
			ticks = append(ticks, t)
			for m := 2.0; m < 10; m++ {
				ticks = append(ticks, plot.Tick{Value: sign * v * m})
			}
		}
	}
	return ticks
}

// figureSpan is the smallest range of values seen so far.
type figureSpan struct{ low, high float64 }

func newFigureSpan() figureSpan { return figureSpan{math.Inf(1), math.Inf(-1)} }

// add widens the span; what is not finite is passed over.
func (s *figureSpan) add(values ...float64) {
	for _, v := range values {
		if figureFinite(v) {
			s.low, s.high = math.Min(s.low, v), math.Max(s.high, v)
		}
	}
}

func (s figureSpan) empty() bool { return s.low > s.high }

// padded is the span with a share of itself more on both sides, and wide enough
// to be drawn: a single value gets room of its own size about it.
func (s figureSpan) padded(share float64) (low, high float64) {
	if s.empty() {
		return -1, 1
	}
	size := math.Max(math.Abs(s.low), math.Abs(s.high))
	room := share * (s.high - s.low)
	if s.high-s.low < 1e-9*size {
		room = 0.5 * size
	}
	if size == 0 {
		room = 1
	}
	return s.low - room, s.high + room
}

// decades is the span for a logarithmic axis: a little wider than the values, and a decade at least.
func (s figureSpan) decades() (low, high float64) {
	if s.empty() {
		return 1, 10
	}
	low, high = s.low/1.5, s.high*1.5
	if lack := 10 / (high / low); lack > 1 {
		low, high = low/math.Sqrt(lack), high*math.Sqrt(lack)
	}
	return low, high
}

func figureFinite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// figureTrim takes zeros off the end of a number with a unit: "1.00 mV" is "1 mV".
func figureTrim(s string) string {
	digits, unit, _ := strings.Cut(s, " ")
	if strings.Contains(digits, ".") {
		digits = strings.TrimRight(strings.TrimRight(digits, "0"), ".")
	}
	return digits + " " + unit
}
