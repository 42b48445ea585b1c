package main

import (
	"bytes"
	"math"

	"github.com/spf13/cobra"

	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

func sheetCommand(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:   "sheet PLAN",
		Short: "write a bench sheet (CSV) to fill in",
		Long: `Writes a CSV bench sheet for PLAN to standard output: a row a reading, the
expected value and the settings beside the empty reading, in an order that needs
few changes of range and box. Fill in the readings and give the file to judge,
which checks the settings against the plan.`,
		Example: "  rungproof sheet plan.toml > bench.csv",
		Args:    exactly("PLAN"),
		RunE: func(_ *cobra.Command, args []string) error {
			p, x, err := s.expectation(args[0])
			if err != nil {
				return err
			}
			expected := make([]float64, len(x.Steps))
			for i, step := range x.Steps {
				expected[i] = step.Expected
				if p.Detector.Reads == plan.TwoPhase { // x of a reference turned to maximum at the generator's phase
					expected[i] = step.Drop * math.Cos(step.PhaseDeg*math.Pi/180-p.Steps[i].Phase)
				}
			}
			var b bytes.Buffer
			if err := reading.Sheet(&b, p, expected); err != nil {
				return err
			}
			return s.write(b.Bytes(), nil)
		},
	}
}
