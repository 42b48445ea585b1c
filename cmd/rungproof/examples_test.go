package main

import (
	"bytes"
	"flag"
	"io"
	"os"
	"path/filepath"
	"testing"
)

var updateExamples = flag.Bool("examples.update", false, "write the examples' recorded reports anew")

// The recorded report of each example is what the program writes today, byte for byte.
func TestExamplesRecordedReports(t *testing.T) {
	for _, c := range []struct {
		name   string
		status int
	}{{"arrival", exitPass}, {"recalibration", exitFail}, {"stray", exitPass}} {
		t.Run(c.name, func(t *testing.T) {
			root, err := filepath.Abs("../..")
			if err != nil {
				t.Fatal(err)
			}
			t.Chdir(root) // the report names the files as they are given
			dir := filepath.Join("examples", c.name)
			recorded := filepath.Join(dir, "report")
			out := t.TempDir()
			if *updateExamples {
				out = recorded
			}
			status := run([]string{"judge", filepath.Join(dir, "plan.toml"), filepath.Join(dir, "readings.csv"), "--out", out}, nil, io.Discard, os.Stderr)
			if status != c.status {
				t.Fatalf("exit status %d, want %d", status, c.status)
			}
			want, err := filepath.Glob(filepath.Join(recorded, "*"))
			if err != nil || len(want) < 7 {
				t.Fatalf("%d recorded files, %v", len(want), err)
			}
			made, _ := filepath.Glob(filepath.Join(out, "*"))
			if len(made) != len(want) {
				t.Errorf("%d files, %d recorded", len(made), len(want))
			}
			for _, path := range want {
				was, err := os.ReadFile(path)
				if err != nil {
					t.Fatal(err)
				}
				is, err := os.ReadFile(filepath.Join(out, filepath.Base(path)))
				if err != nil {
					t.Error(err)
				} else if !bytes.Equal(was, is) {
					t.Errorf("%s is not what was recorded; look at it, then run this test with -examples.update", filepath.Base(path))
				}
			}
		})
	}
}
