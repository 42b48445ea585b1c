package main

import (
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"rungproof/calib/trend"
	"rungproof/report"
)

// The example's script, typed into a shell, makes a log that tells what its README says.
func TestFleetExample(t *testing.T) {
	dir := t.TempDir()
	if err := os.CopyFS(dir, os.DirFS("../../examples/fleet")); err != nil {
		t.Fatal(err)
	}
	environment := append(os.Environ(), "RUNGPROOF_LOG="+filepath.Join(dir, "fleet.db"))
	output := func(name string, args ...string) string {
		t.Helper()
		c := exec.Command(name, args...)
		c.Dir, c.Env = t.TempDir(), environment
		out, err := c.CombinedOutput()
		if err != nil {
			t.Fatalf("%s %s: %v\n%s", name, strings.Join(args, " "), err, out)
		}
		return string(out)
	}
	history := func(args ...string) []*report.TrendView {
		t.Helper()
		var v []*report.TrendView
		if err := json.Unmarshal([]byte(output("rungproof", append(args, "--json")...)), &v); err != nil {
			t.Fatal(err)
		}
		return v
	}

	added := output("sh", filepath.Join(dir, "history.sh"))
	if n := strings.Count(added, "entry "); n != 39 {
		t.Errorf("%d entries, want 39:\n%s", n, added)
	}
	if check := output("rungproof", "log", "check"); !strings.Contains(check, "39 entries") || !strings.Contains(check, "\nsound: ") {
		t.Error(check)
	}

	// Each is what history.sh was told to make of it.
	for _, c := range []struct {
		serial  string
		perYear float64
		drifts  bool
		points  int
		breaks  int
	}{
		{"G1-0088", 0, false, 8, 0},
		{"G2-0093", 0.00125, true, 8, 0},
		{"G3-0105", 0.0026, true, 10, 2},
		{"G4-0112", 0, false, 8, 1},
		{"G5-0119", 0, false, 4, 0},
	} {
		v := history("trend", c.serial)[0]
		d := v.Trend.Drift
		if d.Significant() != c.drifts || c.perYear < d.Low || c.perYear > d.High {
			t.Errorf("%s: the drift is from %g to %g a year (p = %g), made with %g", c.serial, d.Low, d.High, d.P, c.perYear)
		}
		if len(v.Trend.Points) != c.points || len(v.Trend.Segments) != c.breaks+1 {
			t.Errorf("%s: %d results in %d segments", c.serial, len(v.Trend.Points), len(v.Trend.Segments))
		}
	}

	broken := history("trend", "G4-0112", "--of", "1 mV")[0]
	for i, p := range broken.History {
		// Made 3 % too high in 2023 as found, −0.1 % for the rest.
		want := -0.001
		if p.Time.Year() == 2023 && !p.AsLeft {
			want = 0.029
			if broken.Verdicts[i] != "fail" {
				t.Errorf("entry %d: %s", p.Entry, broken.Verdicts[i])
			}
		}
		if p.Value < want-3*p.U || p.Value > want+3*p.U {
			t.Errorf("entry %d: the 1 mV range is off by %g ± %g (k = 3), made with %g", p.Entry, p.Value, 3*p.U, want)
		}
	}

	due := output("rungproof", "due", "--on", "2025-12-01", "--within", "365 d")
	lines := strings.Split(due, "\n")
	if !strings.Contains(lines[1], "G2-0093") || !strings.Contains(lines[1], string(trend.ByDrift)) {
		t.Error(due)
	}
	first := history("due", "--on", "2025-12-01", "--within", "90 d")
	if len(first) != 1 || first[0].Serial != "G2-0093" || first[0].Advice.Due.After(time.Date(2026, 3, 1, 0, 0, 0, 0, time.UTC)) {
		t.Errorf("%d are due within 90 d", len(first))
	}

	output("rungproof", "trend", "--all", "--out", filepath.Join(dir, "pages"))
	made, err := filepath.Glob(filepath.Join(dir, "pages", "*"))
	if err != nil || len(made) != 6 {
		t.Errorf("%v, %v", made, err)
	}
}
