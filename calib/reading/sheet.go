package reading

import (
	"cmp"
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// Sheet writes a CSV file to note the readings on: a row for each reading to
// take, its reading columns empty, beside them the reading expected and what to
// set. One unit, in the header, holds for the readings and the expected ones;
// they are in the convention that the detector displays. expected has one value
// a step, V rms, signed. Filled in, Parse takes the sheet back.
//
// The rows go by frequency, then tap, amplitude, time constant, range, the arms
// from the largest value down and last the phase, so that what is slow to change
// (a lead to move, a range to settle) changes least often. Repeats follow one another.
func Sheet(w io.Writer, p *plan.Plan, expected []float64) error {
	if len(expected) != len(p.Steps) {
		panic(fmt.Sprintf("reading: %d expected readings for %d steps", len(expected), len(p.Steps)))
	}
	scale, unit := sheetUnit(p, expected)
	reading := ways(p.Detector.Reads)[0]
	columns := sheetSettings(p)

	out := csv.NewWriter(w)
	row := []string{colStep}
	for _, name := range append(slices.Clone(reading), colExpected) {
		row = append(row, name+" ["+unit+"]")
	}
	for _, c := range columns {
		row = append(row, c.name)
	}
	out.Write(row) // an error is kept until Flush
	for _, i := range sheetOrder(p) {
		s := &p.Steps[i]
		row = append(append(row[:0], s.ID), make([]string, len(reading))...)
		row = append(row, short(expected[i]/scale, p.Detector.Ranges[s.Range]/scale))
		for _, c := range columns {
			row = append(row, c.text(s))
		}
		for range s.Repeats {
			out.Write(row)
		}
	}
	out.Flush()
	return out.Error()
}

// sheetUnit is the prefix of the middle one of the readings to come, and what
// it is worth in V rms: readings from 0.7 µV to 70 mV are all noted in µV.
func sheetUnit(p *plan.Plan, expected []float64) (scale float64, unit string) {
	sizes := []float64{}
	for _, x := range expected {
		if x != 0 {
			sizes = append(sizes, math.Abs(x)/p.Detector.ToRMS)
		}
	}
	slices.Sort(sizes)
	middle := 0.0
	if len(sizes) > 0 {
		middle = sizes[len(sizes)/2]
	}
	suffix := map[string]string{"rms": "", "peak": "pk", "peak-to-peak": "pp"}[p.Detector.Displays]
	scale, unit = quantity.Prefix(middle, "V")
	return scale * p.Detector.ToRMS, unit + suffix
}

// sheetSettings are the settings that the bench needs to be told.
func sheetSettings(p *plan.Plan) []setting {
	return slices.DeleteFunc(settings(p), func(c setting) bool {
		differs := func(s plan.Step) bool { return c.key(&s) != c.key(&p.Steps[0]) }
		switch c.name {
		case colTap:
			return !slices.ContainsFunc(p.Steps, differs)
		case colPhase:
			return !slices.ContainsFunc(p.Steps, func(s plan.Step) bool { return s.Phase != 0 })
		}
		return false
	})
}

// sheetOrder is the steps in the order of the sheet.
func sheetOrder(p *plan.Plan) []int {
	order := make([]int, len(p.Steps))
	for i := range order {
		order[i] = i
	}
	keys := settings(p)
	slices.SortStableFunc(order, func(i, j int) int {
		for _, k := range keys {
			if c := cmp.Compare(k.key(&p.Steps[i]), k.key(&p.Steps[j])); c != 0 {
				return c
			}
		}
		return 0
	})
	return order
}

// short is an expected reading to five digits, and to no more than a millionth
// of the full scale: what remains of a reading that ought to be 0 is written as 0.
func short(x, fullScale float64) string {
	place := math.Log10(fullScale) - 6
	if x != 0 {
		place = max(place, math.Floor(math.Log10(math.Abs(x)))-4)
	}
	s := strconv.FormatFloat(x, 'f', max(0, int(-math.Floor(place))), 64)
	if v, _ := strconv.ParseFloat(s, 64); v == 0 {
		return "0"
	}
	return s
}
