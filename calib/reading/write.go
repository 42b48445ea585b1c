package reading

import (
	"bytes"
	"encoding/csv"
	"strconv"
	"time"

	"rungproof/calib/plan"
)

// Write is the CSV of readings, as Parse takes it: one row a reading, voltages in
// the detector's displayed convention.
func Write(set *Set, p *plan.Plan) []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	columns := map[string][]string{plan.InPhase: {"x [µV]"}, plan.Magnitude: {"r [µV]"}, plan.TwoPhase: {"x [µV]", "y [µV]"}}[p.Detector.Reads]
	header := append([]string{"step"}, columns...)
	w.Write(append(header, "time"))
	shown := func(v float64) string { return strconv.FormatFloat(v/p.Detector.ToRMS*1e6, 'g', 7, 64) }
	for _, r := range set.Readings {
		row := []string{p.Steps[r.Step].ID, shown(r.X)}
		if len(columns) == 2 {
			row = append(row, shown(r.Y))
		}
		w.Write(append(row, r.Time.Format(time.RFC3339)))
	}
	w.Flush() // a buffer takes everything
	return b.Bytes()
}
