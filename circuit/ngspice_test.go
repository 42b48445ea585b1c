package circuit

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// Every sample is simulated twice in one run of ngspice: driven by its generator, and probed by 1 A at the detector's terminals. A
// complex difference of 1e-9 bounds the magnitude's relative error and the phase's in radians alike. Branch currents are left to the nodal
// solution: ngspice finds that through 20 mΩ in series with 1 MΩ as a difference of two voltages of 1 V, good to 3e-9 only.
func TestAgainstNgspice(t *testing.T) {
	ngspice, err := exec.LookPath("ngspice")
	if err != nil {
		t.Skip("ngspice is not installed: cross-check not run")
	}
	const perSample = 2 // vectors: H and Z
	var parts, vectors strings.Builder
	for k, s := range samples() {
		n := takeApart(&s.ladder)
		driven, probed := fmt.Sprintf("_%dh", k), fmt.Sprintf("_%dz", k)
		parts.WriteString(n.spice(driven, false))
		parts.WriteString(n.spice(probed, true))
		fmt.Fprintf(&vectors, " v(det%s) v(det%s)", driven, probed)
	}
	folder := t.TempDir()
	deck := fmt.Sprintf(`ladders
%s.control
set numdgt=16
set wr_singlescale
ac dec 1 10 100k
wrdata result.txt%s
quit 0
.endc
.end
`, parts.String(), vectors.String())
	if err := os.WriteFile(filepath.Join(folder, "ladders.cir"), []byte(deck), 0o600); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(context.Background(), time.Minute)
	defer cancel()
	cmd := exec.CommandContext(ctx, ngspice, "-b", "ladders.cir")
	cmd.Dir = folder
	log, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("ngspice: %v\n%s", err, log)
	}
	text, err := os.ReadFile(filepath.Join(folder, "result.txt"))
	if err != nil {
		t.Fatalf("%v\n%s", err, log)
	}
	lines := strings.Split(strings.TrimSpace(string(text)), "\n")
	if len(lines) != 5 {
		t.Fatalf("ngspice gave %d frequencies, want 5 from 10 Hz to 100 kHz", len(lines))
	}
	for _, line := range lines {
		row := numbers(t, line)
		if want := 1 + 2*perSample*len(samples()); len(row) != want {
			t.Fatalf("ngspice gave %d columns, want %d", len(row), want)
		}
		f, row := row[0], row[1:]
		for _, s := range samples() {
			r := s.ladder.Solve(f, nil)
			what := fmt.Sprintf("%s at %g Hz: ", s.name, f)
			near(t, what+"H", r.H, complex(row[0], row[1]), 1e-9)
			near(t, what+"Z", r.Z, complex(row[2], row[3]), 1e-9)
			row = row[2*perSample:]
		}
	}
}

func numbers(t *testing.T, line string) []float64 {
	t.Helper()
	var row []float64
	for _, field := range strings.Fields(line) {
		x, err := strconv.ParseFloat(field, 64)
		if err != nil {
			t.Fatal(err)
		}
		row = append(row, x)
	}
	return row
}
