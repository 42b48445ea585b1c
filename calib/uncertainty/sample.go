package uncertainty

import "math"

// Interval from Low to High, unit of the quantity.
type Interval struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

// Summary of the values that the trials of a Monte Carlo calculation gave.
type Summary struct {
	N         int
	Mean      float64  // the estimate (JCGM 101, 7.6, equation 16)
	SD        float64  // its standard uncertainty (equation 17); 0 for a single value
	Coverage  float64  // of the intervals
	Symmetric Interval // as many values below it as above (7.7.2)
	Shortest  Interval // the shortest that holds the coverage (7.7.4)
}

// Summarise puts the values in another order, the tails sorted, and allocates
// nothing. The values shall be finite. With 10⁶ of them the probability below either
// end of the symmetric 95 % interval has a standard deviation of √(p·(1−p)/M) = 0.016 %.
func Summarise(values []float64, coverage float64) Summary {
	s := Summary{N: len(values), Coverage: coverage}
	sortTails(values, s.N-span(values, coverage))
	s.Symmetric, s.Shortest = Symmetric(values, coverage), Shortest(values, coverage)
	middle, n := values[s.N/2], float64(s.N) // deviations from it keep their digits
	sum, squares := 0.0, 0.0
	for _, v := range values {
		sum += v - middle
	}
	s.Mean = middle + sum/n
	for _, v := range values {
		squares += (v - s.Mean) * (v - s.Mean)
	}
	if s.N > 1 {
		s.SD = math.Sqrt(squares / (n - 1))
	}
	return s
}

// Symmetric is the probabilistically symmetric coverage interval (JCGM 101, 7.7.2)
// of sorted values. It is their whole range where they are too few for any to be outside.
func Symmetric(sorted []float64, coverage float64) Interval {
	q := span(sorted, coverage)
	r := (len(sorted) - q + 1) / 2 // whole: the standard adds ½ where (M−q)/2 is not
	r = max(r, 1)
	return Interval{sorted[r-1], sorted[r+q-1]}
}

// Shortest is the shortest coverage interval (JCGM 101, 7.7.4) of sorted values:
// the first of them where several are as short. Its ends scatter more than those
// of the symmetric one, as the density is nearly the same at both.
func Shortest(sorted []float64, coverage float64) Interval {
	q := span(sorted, coverage)
	best := Interval{sorted[0], sorted[q]}
	for r, low := range sorted[:len(sorted)-q] {
		if high := sorted[r+q]; high-low < best.High-best.Low {
			best = Interval{low, high}
		}
	}
	return best
}

// span is q of 7.7.1: the number of steps from the lower to the upper end, p·M or
// the whole part of p·M + ½.
func span(values []float64, coverage float64) int {
	checkCoverage(coverage)
	if len(values) == 0 {
		panic("uncertainty: no values")
	}
	q := int(math.Floor(coverage*float64(len(values)) + 0.5))
	return min(q, len(values)-1)
}
