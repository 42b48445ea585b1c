package main

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
	"runtime"
	"runtime/metrics"
	"strconv"
	"strings"
	"testing"
	"time"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// Goal: a worked example with its whole report in under a second.
func BenchmarkJudgeOut(b *testing.B) {
	dir := filepath.Join(b.TempDir(), "report")
	for b.Loop() {
		var stderr bytes.Buffer
		args := []string{"judge", "../../examples/arrival/plan.toml", "../../examples/arrival/readings.csv", "--out", dir}
		if status := run(args, nil, io.Discard, &stderr); status != exitPass {
			b.Fatal(status, stderr.String())
		}
	}
}

// Goal: 10 000 steps of 100 readings in under 3 s and 1 GiB.
func BenchmarkLarge(b *testing.B) {
	dir := b.TempDir()
	files := [2]string{filepath.Join(dir, "plan.toml"), filepath.Join(dir, "readings.csv")}
	text := largePlan()
	write(b, files[0], text)
	write(b, files[1], largeReadings(b, text))
	runtime.GC()
	peak := peakHeap()
	for b.Loop() {
		var stderr bytes.Buffer
		if status := run([]string{"judge", files[0], files[1]}, nil, io.Discard, &stderr); status == exitFault {
			b.Fatal(status, stderr.String())
		}
	}
	b.ReportMetric(peak(), "MiB-peak")
}

// peakHeap samples the heap, garbage included, until the function it gives is called, which
// tells the largest size seen.
func peakHeap() func() (mebibytes float64) {
	stop, largest := make(chan bool), make(chan uint64)
	go func() {
		heap, most := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}, uint64(0)
		for {
			metrics.Read(heap)
			most = max(most, heap[0].Value.Uint64())
			select {
			case <-stop:
				largest <- most
				return
			case <-time.After(2 * time.Millisecond):
			}
		}
	}()
	return func() float64 {
		stop <- true
		return float64(<-largest) / (1 << 20)
	}
}

// largePlan has 193 blocks of 52 steps, over 20 uncertain inputs.
func largePlan() string {
	var b strings.Builder
	b.WriteString(`title = "A long run"
frequency = "137 Hz"
[generator]
source_resistance = { value = "50 Ω", tolerance = "1 %" }
shown_as = "peak-to-peak"
settings = [ { shown = "20 V", measured = "19.986(8) V" }, { shown = "1 V", measured = "0.9987(6) V" } ]
[detector]
reads = "in-phase"
ranges = ["100 mV", "10 mV", "1 mV", "100 µV", "10 µV"]
resolution = "0.01 %"
stability = "0.02 %"
filter = { time_constant = "300 ms", poles = 2 }
limits = { reading = "1 %", range = "0.5 %" }
[detector.input]
resistance = { value = "10 MΩ", tolerance = "1 %" }
capacitance = { value = "25 pF", tolerance = "20 %" }
noise = "8 nV/√Hz"
[error.ohmmeter]
tolerance = "0.02 %"
[[arm]]
name = "top"
place = "series"
value = { value = "1.0003 MΩ", u = "80 Ω", shares = "ohmmeter" }
capacitance = { value = "0.3 pF", tolerance = "20 %" }
[[arm]]
name = "box"
place = "shunt"
tolerance = "0.1 %"
shares = "ohmmeter"
[[wire]]
name = "lead"
in = "box"
resistance = "42(2) mΩ"
`)
	for i := range 193 {
		fmt.Fprintf(&b, `[[steps]]
name = "b%d."
amplitude = ["20 V", "1 V"]
set = { box = ["10 kΩ", "5 kΩ", "2 kΩ", "1 kΩ", "500 Ω", "200 Ω", "100 Ω", "50 Ω", "20 Ω", "10 Ω", "5 Ω", "2 Ω", "1 Ω"] }
phase = ["0 deg", "180 deg"]
repeats = 100
`, i+1)
	}
	return b.String()
}

// largeReadings are those of a detector with a gain of 1.002 and an offset of 20 nV, scattered
// evenly over ±√3 of the standard deviation that the plan predicts, by a generator of
// pseudo-random numbers (multiplier of Knuth's MMIX, from memory).
func largeReadings(b *testing.B, text string) string {
	p, err := plan.Parse("plan.toml", []byte(text))
	if err != nil {
		b.Fatal(err)
	}
	x, err := calib.Expect(p)
	if err != nil {
		b.Fatal(err)
	}
	if len(x.Steps) < 10_000 {
		b.Fatal(len(x.Steps))
	}
	var out bytes.Buffer
	out.WriteString("step,x [µV]\n")
	state := uint64(1)
	for _, s := range x.Steps {
		for range 100 {
			state = state*6364136223846793005 + 1442695040888963407
			scatter := 3.464 * (float64(state>>11)/(1<<53) - 0.5) * s.SigmaOne
			reading := 1e6 * (1.002*s.Expected + 20e-9 + scatter)
			out.WriteString(s.ID + "," + strconv.FormatFloat(reading, 'g', 8, 64) + "\n")
		}
	}
	return out.String()
}
