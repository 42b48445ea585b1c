package uncertainty

import "slices"

// sortTails puts the k smallest values in order at the front and the k largest in
// order at the back, all that a coverage interval needs: a quarter of the time that
// sorting takes for k = 5 %. Where the tails meet, everything is sorted.
func sortTails(values []float64, k int) {
	n := len(values)
	if 2*k >= n {
		slices.Sort(values)
		return
	}
	find(values, k)
	find(values[k:], n-2*k)
	slices.Sort(values[:k])
	slices.Sort(values[n-k:])
}

// find puts the k smallest values first, in any order (Hoare, Communications of
// the ACM 4 (1961) 321, algorithm 65).
func find(values []float64, k int) {
	low, high := 0, len(values)-1
	for low < high {
		pivot := values[k]
		i, j := low, high
		for i <= j {
			for values[i] < pivot {
				i++
			}
			for pivot < values[j] {
				j--
			}
			if i <= j {
				values[i], values[j] = values[j], values[i]
				i++
				j--
			}
		}
		if j < k {
			low = i
		}
		if k < i {
			high = j
		}
	}
}
