package main

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// command runs the program in this process.
func command(stdin string, args ...string) (status int, stdout, stderr string) {
	var out, err bytes.Buffer
	status = run(args, strings.NewReader(stdin), &out, &err)
	return status, out.String(), err.String()
}

// Everything that people read fits a terminal of 80 columns, and a verdict its 40 lines.
func TestFitsTheTerminal(t *testing.T) {
	jobs := [][2]string{nasty(t)}
	for _, pattern := range []string{"../../examples/*/*plan.toml", "../../calib/testdata/cases/*.toml"} {
		plans, err := filepath.Glob(pattern)
		if err != nil || len(plans) < 4 {
			t.Fatalf("%s: %v, %v", pattern, plans, err)
		}
		for _, p := range plans {
			readings := strings.TrimSuffix(p, ".toml") + ".csv"
			if strings.HasSuffix(p, "plan.toml") {
				readings = strings.TrimSuffix(p, "plan.toml") + "readings.csv"
			}
			jobs = append(jobs, [2]string{p, readings})
		}
	}
	for _, job := range jobs {
		status, verdict, stderr := command("", "judge", job[0], job[1])
		if status == exitFault || stderr != "" {
			t.Errorf("%v: exit status %d: %s", job, status, stderr)
			continue
		}
		if fault := terminalFault(verdict, 40); fault != "" {
			t.Errorf("judge %v: %s\n%s", job, fault, verdict)
		}
		if _, expectation, _ := command("", "expect", job[0]); expectation == "" || terminalFault(expectation, 1000) != "" {
			t.Errorf("expect %s: %s", job[0], terminalFault(expectation, 1000))
		}
	}
}

// nasty is a plan with 20 ranges, each of a gain that is limited and wrong, with long words
// wherever a plan takes words, everything beyond its rating, and readings that are flagged,
// scattered, beyond full scale and missing.
func nasty(t *testing.T) [2]string {
	long := strings.Repeat("Überlange Wörter ohne Not, ", 8)
	var ranges, box []string
	for i := range 20 {
		ranges = append(ranges, fmt.Sprintf(`"%g µV"`, 2*float64(int(1)<<i)))
		box = append(box, fmt.Sprintf(`"%g Ω"`, 0.7*float64(int(1)<<i)))
	}
	plan := strings.NewReplacer("LONG", long, "RANGES", strings.Join(ranges, ", "), "BOX", strings.Join(box, ", ")).Replace(`
title = "LONG"
operator = "LONG"
date = 2026-05-18
condition = "as found"
frequency = "137 Hz"
notes = "LONG"
[generator]
source_resistance = "50 Ω"
shown_as = "rms"
amplitude = { tolerance = "0.1 %", standard = "LONGmeter" }
[detector]
serial = "LONG"
reads = "in-phase"
ranges = [RANGES]
resolution = "0.01 %"
input = { resistance = "1 MΩ", noise = "5 nV/√Hz", max = "1 mV" }
filter = { time_constant = "30 ms", poles = 1 }
limits = { reading = "0.01 %", range = "0.01 %", gain = "0.01 %" }
[[standard]]
name = "LONGmeter"
certificate = "LONG"
due = 2020-01-01
[[arm]]
name = "LONGtop"
place = "series"
value = "1.0000(1) MΩ"
max_power = "1 nW"
[[arm]]
name = "LONGbox"
place = "shunt"
tolerance = "0.01 %"
max_power = "1 nW"
[[steps]]
name = "Schritt-mit-sehr-langem-Namen-"
amplitude = ["60 V", "0.1 V"]
set = { "LONGbox" = [BOX] }
phase = ["0 deg", "180 deg"]
repeats = 2
`)
	dir := t.TempDir()
	files := [2]string{filepath.Join(dir, "plan.toml"), filepath.Join(dir, "readings.csv")}
	write(t, files[0], strings.ReplaceAll(plan, long+"meter", strings.TrimSpace(long)+" meter"))
	_, sheet, stderr := command("", "sheet", files[0])
	rows := strings.Split(strings.TrimSpace(sheet), "\n")
	if len(rows) != 1+160 {
		t.Fatalf("%d rows: %s", len(rows), stderr)
	}
	for i, row := range rows {
		cells := strings.SplitN(row, ",", 4)
		if i == 0 {
			rows[i] = "step," + cells[1] + ",flag"
			continue
		}
		var x float64
		fmt.Sscan(cells[2], &x)
		x *= 1 + 0.03*float64(i%7-3)
		flag := ""
		if i%5 == 0 {
			flag = "overload"
		}
		if i%11 == 0 {
			x *= 1.6
		}
		rows[i] = fmt.Sprintf("%s,%g,%s", cells[0], x, flag)
	}
	write(t, files[1], strings.Join(rows[:len(rows)-9], "\n"))
	return files
}

func write(t testing.TB, name, text string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

// No colour where standard output is no terminal, whatever the environment wishes.
func TestNoColour(t *testing.T) {
	for _, colour := range []string{"", "1"} {
		t.Setenv("NO_COLOR", colour)
		t.Setenv("CLICOLOR_FORCE", "1")
		t.Setenv("TERM", "xterm-256color")
		_, out, _ := command("", "judge", "../../examples/arrival/plan.toml", "../../examples/arrival/readings.csv")
		if out == "" || strings.ContainsRune(out, '\x1b') {
			t.Errorf("NO_COLOR=%q: %q", colour, out)
		}
	}
}

// A reader or a writer that fails is a fault, said on standard error.
func TestBrokenStreams(t *testing.T) {
	const plan, readings = "../../examples/arrival/plan.toml", "../../examples/arrival/readings.csv"
	for _, args := range [][]string{
		{"draft", "-"}, {"expect", plan}, {"expect", "--json", plan}, {"sheet", plan}, {"judge", plan, readings}, {"judge", "--json", plan, readings},
		{"expect", "-"}, {"judge", "-", readings}, {"judge", plan, "-"},
	} {
		var stderr bytes.Buffer
		if got := run(args, broken{}, broken{}, &stderr); got != exitFault || !strings.HasPrefix(stderr.String(), "rungproof: ") || !strings.Contains(stderr.String(), "no more room") {
			t.Errorf("%v: exit status %d: %s", args, got, stderr.String())
		}
	}
}

type broken struct{}

func (broken) Read([]byte) (int, error)  { return 0, errors.New("no more room") }
func (broken) Write([]byte) (int, error) { return 0, errors.New("no more room") }
