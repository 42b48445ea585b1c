package plan

import "math"

// distinct numbers the different values of a setting in the order of their first use. Two spellings of one value, like
// 1 V and 1000 mV, may differ in the last digits of the conversion and count as one.
type distinct struct {
	values []float64
	index  map[int64]int
}

// find is the index of x among the values.
func (d *distinct) find(x float64) (i int, ok bool) {
	at := slot(x)
	for _, k := range []int64{at, at - 1, at + 1} { // x and its other spelling may lie on either side of a boundary
		if i, ok := d.index[k]; ok {
			return i, true
		}
	}
	return 0, false
}

// of is the index of x among the values, where it now is in any case, and whether it is new there.
func (d *distinct) of(x float64) (i int, fresh bool) {
	if i, ok := d.find(x); ok {
		return i, false
	}
	if d.index == nil {
		d.index = map[int64]int{}
	}
	d.index[slot(x)] = len(d.values)
	d.values = append(d.values, x)
	return len(d.values) - 1, true
}

func slot(x float64) int64 {
	if x <= 0 {
		return math.MinInt64
	}
	return int64(math.Round(math.Log(x) / sameValue))
}

// sameValue is the relative difference below which two figures are two spellings of one: more than rounding, less than any digit a
// person writes.
const sameValue = 1e-11

func same(x, y float64) bool { return math.Abs(x-y) <= sameValue*math.Abs(x) }
