package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// The table fits a terminal, and the block can be pasted, whatever the plan is called and holds.
func TestAdviceToPaste(t *testing.T) {
	plans := []string{nasty(t)[0]}
	for _, pattern := range []string{"../../examples/*/*plan.toml", "../../calib/testdata/cases/*.toml"} {
		more, err := filepath.Glob(pattern)
		if err != nil || len(more) < 4 {
			t.Fatalf("%s: %v, %v", pattern, more, err)
		}
		plans = append(plans, more...)
	}
	pasted := 0
	for _, name := range plans {
		status, out, stderr := command("", "advise", name, "--minutes", "3")
		if status != exitPass || stderr != "" {
			t.Fatalf("%s: exit status %d: %s", name, status, stderr)
		}
		table, block, found := strings.Cut(out, "\nTo paste at the end of the plan:\n\n")
		if fault := terminalFault(table, 100); fault != "" {
			t.Errorf("%s: %s", name, fault)
		}
		if !found {
			continue
		}
		pasted++
		source, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if status, _, stderr := command(string(source)+"\n"+block, "expect", "-"); status != exitPass {
			t.Errorf("%s: exit status %d: %s", name, status, stderr)
		}
	}
	if pasted < 4 {
		t.Errorf("%d blocks", pasted)
	}
}
