package correct

import (
	"fmt"
	"io"
	"runtime"
	"strings"
	"testing"
	"time"
)

// repeated gives a header and then the same rows again and again, so that a file
// of any length needs no memory.
type repeated struct {
	head, rows string
	left       int // times that the rows are still to come
	piece      string
}

func (r *repeated) Read(p []byte) (int, error) {
	if r.piece == "" {
		switch {
		case r.head != "":
			r.piece, r.head = r.head, ""
		case r.left > 0:
			r.piece, r.left = r.rows, r.left-1
		default:
			return 0, io.EOF
		}
	}
	n := copy(p, r.piece)
	r.piece = r.piece[n:]
	return n, nil
}

const block = 10_000 // rows

// recording is a file of three columns, as an experiment writes it.
func recording(rows int) *repeated {
	var b strings.Builder
	for i := range block {
		fmt.Fprintf(&b, "%d.%03d,%.4f,10 mV\n", i/1000, i%1000, 70.71+float64(i%977)*0.0137)
	}
	return &repeated{head: "time [s],x [µV],range\n", rows: b.String(), left: rows / block}
}

func inForce() *Calibration {
	return &Calibration{
		ID: "17", Serial: "R-3", Verdict: "pass",
		Date: time.Date(2026, 3, 12, 0, 0, 0, 0, time.UTC), Due: time.Date(2027, 3, 12, 0, 0, 0, 0, time.UTC),
		Gains:  []Gain{{Value: 1.0040, U: 0.0006, Correlation: -0.02, From: 7e-7, To: 7.1e-2}},
		Offset: 1.5e-7, UOffset: 9e-9, K: 2, ToRMS: 1,
	}
}

// The memory in use is looked at while ten million rows go by.
func BenchmarkStream(b *testing.B) {
	perRange := inForce()
	perRange.Gains = []Gain{{Range: 0.01, Value: 1.004, U: 0.0006, From: 7e-7, To: 7.1e-3}, {Range: 0.1, Value: 1.003, U: 0.0006, From: 7e-7, To: 7.1e-2}}
	late := inForce()
	late.Gains[0].To = 7.5e-5
	for _, bench := range []struct {
		name string
		c    *Calibration
		o    Options
	}{
		{"common gain", inForce(), Options{}},
		{"range column", perRange, Options{RangeColumn: "range"}},
		{"warnings", late, Options{Date: late.Due.AddDate(1, 0, 0)}},
	} {
		b.Run(strings.ReplaceAll(bench.name, " ", "-"), func(b *testing.B) {
			const rows = 10_000_000
			var m runtime.MemStats
			largest, done := uint64(0), int64(0)
			bench.o.Progress = func(read int64) {
				if read-done > 20<<20 {
					done = read
					runtime.ReadMemStats(&m)
					largest = max(largest, m.HeapInuse)
				}
			}
			for b.Loop() {
				done = 0
				if s, err := Stream(recording(rows), io.Discard, bench.c, bench.o); err != nil || s.Corrected != rows {
					b.Fatal(s, err)
				}
			}
			b.ReportMetric(float64(b.N)*rows/b.Elapsed().Seconds(), "rows/s")
			b.ReportMetric(float64(largest)/(1<<20), "MiB-heap")
		})
	}
}

// What is allocated for a file does not depend on its length.
func TestMemoryIsConstant(t *testing.T) {
	allocated := func(rows int) uint64 {
		in := recording(rows)
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		if _, err := Stream(in, io.Discard, inForce(), Options{}); err != nil {
			t.Fatal(err)
		}
		runtime.ReadMemStats(&after)
		return after.TotalAlloc - before.TotalAlloc
	}
	few, many := allocated(50_000), allocated(500_000)
	if many > few+64<<10 {
		t.Errorf("50 000 rows take %d bytes in all, 500 000 rows %d", few, many)
	}
}
